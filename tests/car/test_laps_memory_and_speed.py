"""A long lap stays within its memory: what is kept, plus chunks; and within its time."""

from __future__ import annotations

import subprocess
import sys
import time
import tracemalloc
from dataclasses import fields
from pathlib import Path

import numpy as np
import pytest
from car.linked_car import linked
from car.worked_car import CAR

from blockload.car.lap_model import LapLoads, extremes, flags, lap_signals
from blockload.car.laps import lap_loads
from blockload.case.model import CORNERS, LapHistory

BENCH = Path(__file__).parents[1] / "benchmarks" / "bench_laps.py"


def history(count: int) -> LapHistory:
    random = np.random.default_rng(1)
    return LapHistory(
        name="lap",
        path=Path("lap.csv"),
        time=np.arange(count) * 0.01,
        distance=None,
        speed=random.uniform(10.0, 75.0, count),
        acceleration=random.normal(size=(count, 3)) * (4.0, 8.0, 1.0),
    )


def kept(lap: LapLoads) -> int:
    """Bytes of the arrays that a lap keeps."""
    arrays = [value for item in fields(lap) if isinstance(value := getattr(lap, item.name), np.ndarray)]
    arrays += [*lap.links.values()]
    arrays += [a for face in lap.faces.values() for a in (face.wrench, face.stud_axial, face.stud_shear)]
    return sum(array.nbytes for array in arrays)


def test_memory_is_what_is_kept_and_a_few_chunks() -> None:
    samples = history(60_000)
    tracemalloc.start()
    lap = lap_loads(linked(), samples, chunk=1000)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()

    assert peak < kept(lap) + 40e6


def test_extremes_are_those_of_the_signals_and_their_samples() -> None:
    lap = lap_loads(CAR, history(500))
    signals = {(of, name): values for of, name, values in lap_signals(lap)}

    assert len(signals) == 2 * 6 + 2 * len(lap.faces["front"].studs) + 2 * len(lap.faces["rear"].studs) + 3 * 4
    for item in extremes(lap):
        values = signals[item.of, item.response]
        assert item.least == values.min() == values[item.least_at]
        assert item.greatest == values.max() == values[item.greatest_at]


def test_arrays_of_a_lap_cannot_be_changed() -> None:
    lap = lap_loads(linked(), history(50))

    for array in (lap.wheel_force, lap.faces["front"].wrench, *(lap.links[c] for c in CORNERS)):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 0.0


def test_a_calm_lap_has_nothing_to_distrust() -> None:
    calm = history(100)
    still = LapHistory(
        name="lap",
        path=calm.path,
        time=calm.time,
        distance=None,
        speed=calm.speed,
        acceleration=np.zeros((100, 3)),
    )

    assert flags(lap_loads(CAR, still)) == ()


@pytest.mark.slow
def test_two_hundred_thousand_samples_from_file_to_links_stay_under_five_seconds_and_a_gibibyte() -> None:
    start = time.perf_counter()
    done = subprocess.run([sys.executable, str(BENCH)], capture_output=True, text=True, check=True)
    spent = time.perf_counter() - start
    for line in done.stdout.splitlines():
        numbers = dict(zip(("read", "loads", "told", "written"), map(float, _seconds(line)), strict=True))
        assert numbers["read"] + numbers["loads"] < 5.0, line
        assert float(line.rsplit(" ", 2)[1]) < 1024.0, line
    assert spent < 120.0


def _seconds(line: str) -> list[str]:
    return [
        word
        for word, unit in zip(line.split(), line.replace(",", "").replace(";", "").split()[1:], strict=False)
        if unit == "s"
    ]
