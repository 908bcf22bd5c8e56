"""Time and memory of 200 000 samples, from file to faces, studs and links; python tests/benchmarks/bench_laps.py."""

from __future__ import annotations

import sys
import tempfile
import time
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1]))

from car.linked_car import linked

from blockload.car.lap_model import extremes, flags
from blockload.car.laps import lap_loads
from blockload.car.resampling import resampled
from blockload.case.lap_csv import read_lap
from blockload.case.model import LapSpec
from blockload.report.lap_files import write_laps

COUNT = 200_000
HEAD = "# axes = x forward, y left, z up\n# a_z = without gravity\n# rods = tension positive\n"
COLUMNS = "time [s],speed [km/h],a_x [g],a_y [g],a_z [g],overall_ratio [1]"
RODS = ",".join(f"pushrod_{corner} [kN]" for corner in ("FL", "FR", "RL", "RR"))


def write(folder: Path, *, rods: bool) -> Path:
    random = np.random.default_rng(0)
    slow = np.cumsum(random.normal(size=(COUNT, 4)), axis=0) * 0.005
    columns = [np.arange(COUNT) * 0.01, 150 + 60 * np.sin(slow[:, 0]), np.sin(slow[:, 1]), 1.4 * np.sin(slow[:, 2])]
    columns += [0.1 * np.sin(slow[:, 3]), np.full(COUNT, 5.2)]
    if rods:
        columns += [-6.0 + random.normal(size=COUNT) for _ in range(4)]
    head = HEAD + COLUMNS + ("," + RODS if rods else "")
    path = folder / "lap.csv"
    np.savetxt(path, np.column_stack(columns), fmt="%.4f", delimiter=",", comments="", header=head)
    return path


def main() -> None:
    with tempfile.TemporaryDirectory() as name:
        for rods in (False, True):
            path = write(Path(name), rods=rods)
            start = time.perf_counter()
            recorded = read_lap(LapSpec(name="lap", file=path))
            read = time.perf_counter()
            history, lost = resampled(recorded, None)
            lap = lap_loads(linked(), history, lost=lost)
            balanced = time.perf_counter()
            found = len(extremes(lap)) + len(flags(lap))
            told = time.perf_counter()
            write_laps(Path(name), (lap,))
            written = time.perf_counter()
            print(
                f"{COUNT} samples, rods {rods}: read {read - start:.2f} s, faces, studs and links "
                f"{balanced - read:.2f} s, {found} extremes {told - balanced:.2f} s, written {written - told:.2f} s; "
                f"peak memory {peak():.0f} MiB"
            )


def peak() -> float:
    """Highest resident memory of this process [MiB]; nan where the system does not tell."""
    try:
        import resource
    except ImportError:
        return float("nan")
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0


if __name__ == "__main__":
    main()
