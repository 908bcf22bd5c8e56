"""A lap on disk: its arrays beside results.json, its extremes in it.

`<lap>.npy` is one structured array, a record per sample, whose field names say what stands in them and in which unit
("front TL axial [N]"); `<lap>-extremes.csv` lists least and greatest of every response, and short laps stand in
`<lap>.csv` too. Fields are 8-byte numbers; `numpy.load` reads the file without pickle.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator, Sequence
from dataclasses import asdict
from functools import partial
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats
from ..car.lap_model import LapLoads, extremes, flags, lap_signals
from ..car.model import SECTION
from ..case.model import CORNERS
from .files import fill_beside, write_beside

SHORT = 20_000
"""Samples up to which a lap is written as CSV as well."""


def write_laps(folder: Path, laps: Sequence[LapLoads]) -> None:
    """Write the arrays and the extremes of every lap into a folder; raises OutputError."""
    for lap in laps:
        records = lap_records(lap)
        fill_beside(folder / f"{lap.name}.npy", partial(_save, records=records))
        write_beside(folder / f"{lap.name}-extremes.csv", _extremes_csv(lap).encode())
        if len(records) <= SHORT:
            write_beside(folder / f"{lap.name}.csv", _records_csv(records).encode())


def laps_written(laps: Sequence[LapLoads]) -> dict[str, Any]:
    """Return what results.json says of the laps: counts, extremes with their times, samples not to be trusted."""
    if not laps:
        return {}
    return {"laps": {lap.name: _written(lap) for lap in laps}}


def lap_records(lap: LapLoads) -> NDArray[Any]:
    """Return a lap as one structured array (N,); what is not known at any sample is left out."""
    columns = [(name, values) for name, values in _columns(lap) if not np.isnan(values).all()]
    records = np.empty(len(lap.time), dtype=[(name, np.float64) for name, _ in columns])
    for name, values in columns:
        records[name] = values
    return records


def _save(path: Path, records: NDArray[Any]) -> None:
    with path.open("wb") as file:
        np.save(file, records, allow_pickle=False)


def _columns(lap: LapLoads) -> Iterator[tuple[str, Floats]]:
    yield "time [s]", lap.time
    if np.isfinite(lap.distance).all():
        yield "distance [m]", lap.distance
    yield "speed [m/s]", lap.speed
    for k, axis in enumerate("xyz"):
        yield f"a_{axis} [m/s^2]", lap.acceleration[:, k]
    if lap.measured:
        for i, corner in enumerate(CORNERS):
            yield f"{corner} measured less computed F_z [N]", lap.extra_load[:, i]
    for of, response, values in lap_signals(lap):
        unit = "N*m" if response in SECTION[3:] else "N"
        yield f"{of} {response} [{unit}]", values
    for face in lap.faces.values():
        for k, stud in enumerate(face.studs):
            yield f"{face.name} {stud} shear y [N]", face.stud_shear[:, k, 0]
            yield f"{face.name} {stud} shear z [N]", face.stud_shear[:, k, 1]
    yield "crank torque [N*m]", lap.crank_torque
    for k, axle in enumerate(("front", "rear")):
        yield f"{axle} grip used [1]", lap.axle_use[:, k]
        yield f"{axle} ride height [m]", lap.ride_height[:, k]
    yield "wheels lifted [1]", lap.lifted.sum(axis=1).astype(float)
    yield "a wheel would have to pull [1]", lap.pulled.astype(float)


def _written(lap: LapLoads) -> dict[str, Any]:
    def at(index: int) -> dict[str, float]:
        return {"time": float(lap.time[index]), "speed": float(lap.speed[index])}

    return {
        "samples": len(lap.time),
        "duration": float(lap.time[-1] - lap.time[0]),
        "measured": list(lap.measured),
        "lowered_peaks": [asdict(item) for item in lap.lost],
        "distrust": [
            {"what": item.what, "count": item.count, "worst": item.worst, **at(item.worst_at)} for item in flags(lap)
        ],
        "extremes": {
            f"{item.of} {item.response}": {
                "least": {"value": item.least, **at(item.least_at)},
                "greatest": {"value": item.greatest, **at(item.greatest_at)},
            }
            for item in extremes(lap)
        },
    }


def _extremes_csv(lap: LapLoads) -> str:
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(("response", "unit", "least", "time of least [s]", "greatest", "time of greatest [s]"))
    for item in extremes(lap):
        unit = "N*m" if item.response in SECTION[3:] else "N"
        ends = ((item.least, item.least_at), (item.greatest, item.greatest_at))
        cells = (f"{value:.9g}" for end, index in ends for value in (end, float(lap.time[index])))
        writer.writerow((f"{item.of} {item.response}", unit, *cells))
    return text.getvalue()


def _records_csv(records: NDArray[Any]) -> str:
    text = io.StringIO()
    csv.writer(text, lineterminator="\n").writerow(records.dtype.names or ())
    np.savetxt(text, np.column_stack([records[name] for name in records.dtype.names or ()]), "%.9g", delimiter=",")
    return text.getvalue()
