"""What a lap asks of faces, studs and links, sample by sample; and in short: extremes, and what to distrust."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats
from ..case.model import CORNERS, FACES
from .bodies import AXLES
from .model import SECTION
from .resampling import Lost
from .residual import LIMIT

_HELD = 1.0 + 2e-3  # times the grip: a crank's own couple moves load between two tyres at their limit by this much


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LapFace:
    """One face over a lap's samples N, about `reference` (3,); signs as in `FaceLoads`.

    wrench (N, 6) on the engine through the studs; stud_axial (N, n); stud_shear (N, n, 2).
    """

    name: str
    reference: Floats
    studs: tuple[str, ...]
    stud_at: Floats
    wrench: Floats
    stud_axial: Floats
    stud_shear: Floats

    @property
    def section(self) -> Floats:
        """Section wrench (N, 6) in the order of SECTION."""
        result: Floats = self.wrench * (1.0, 1.0, 1.0, 1.0, -1.0, -1.0) * (1.0 if self.name == "front" else -1.0)
        return result

    @property
    def shear(self) -> Floats:
        """Resultant shear force of each stud, (N, n)."""
        result: Floats = np.hypot(self.stud_shear[..., 0], self.stud_shear[..., 1])
        return result


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LapLoads:
    """Balanced loads of a lap's samples N.

    time, distance (nan where unknown), speed (N,); acceleration (N, 3) of the car's CG and angular_acceleration (N, 3),
    both with what measured loads add; wheel_force (N, 4, 3), road on tyre, FL FR RL RR; extra_load (N, 4): the part of
    its z that measured loads add to the computed ones; links: tension (N, m) of the members `link_names` of each corner
    that has them; crank_torque (N,), nan where unknown; tyre_use (N, 4) and axle_use (N, 2): shares of the grip, nan
    where friction is unknown; ride_height (N, 2), nan where no aero map asks for it; lifted (N, 4): wheels off the
    ground; pulled (N,): no steady state, some wheel would have to pull; outside (N,): an aero map is read beyond its
    grid; gap (N,): disagreement of the face wrenches summed from the front and from the rear, as a share.
    measured names the loads that stand in for computed ones; lost says what averaging has taken from the peaks.
    """

    name: str
    time: Floats
    distance: Floats
    speed: Floats
    acceleration: Floats
    angular_acceleration: Floats
    wheel_force: Floats
    extra_load: Floats
    faces: Mapping[str, LapFace]
    link_names: Mapping[str, tuple[str, ...]]
    links: Mapping[str, Floats]
    crank_torque: Floats
    tyre_use: Floats
    axle_use: Floats
    ride_height: Floats
    lifted: NDArray[np.bool_]
    pulled: NDArray[np.bool_]
    outside: NDArray[np.bool_]
    gap: Floats
    measured: tuple[str, ...] = ()
    lost: tuple[Lost, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Extreme:
    """Least and greatest value of one response over a lap [N, N·m], with the index of the sample of each.

    of: a face or a corner; response: a section component, "TL axial", "TL shear", a link, or "F_z".
    """

    of: str
    response: str
    least: float
    least_at: int
    greatest: float
    greatest_at: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Flag:
    """Samples not to be trusted as they stand: what is wrong, how many, the worst value and its sample."""

    what: str
    count: int
    worst: float
    worst_at: int


def lap_signals(lap: LapLoads) -> Iterator[tuple[str, str, Floats]]:
    """Every response of a lap: face or corner, name, values (N,)."""
    for name in FACES:
        face = lap.faces[name]
        for component, values in zip(SECTION, face.section.T, strict=True):
            yield name, component, values
        for stud, axial, shear in zip(face.studs, face.stud_axial.T, face.shear.T, strict=True):
            yield name, f"{stud} axial", axial
            yield name, f"{stud} shear", shear
    for i, corner in enumerate(CORNERS):
        for component, values in zip(("F_x", "F_y", "F_z"), lap.wheel_force[:, i].T, strict=True):
            yield corner, component, values
        if corner in lap.links:
            for link, values in zip(lap.link_names[corner], lap.links[corner].T, strict=True):
                yield corner, link, values


def extremes(lap: LapLoads) -> tuple[Extreme, ...]:
    """Least and greatest value of every response of a lap, and when."""
    rows = []
    for of, response, values in lap_signals(lap):
        low, high = int(values.argmin()), int(values.argmax())
        rows.append(
            Extreme(
                of=of,
                response=response,
                least=float(values[low]),
                least_at=low,
                greatest=float(values[high]),
                greatest_at=high,
            )
        )
    return tuple(rows)


def flags(lap: LapLoads) -> tuple[Flag, ...]:
    """What to distrust: samples out of balance, without a steady state, beyond grip, on three wheels, beyond a map."""
    used = np.nan_to_num(lap.axle_use, posinf=np.inf)
    lowest = lap.wheel_force[..., 2].min(axis=1)
    lifted, off = lap.lifted.sum(axis=1, dtype=float), np.asarray(lap.lifted.sum(axis=1) > 0)
    unbalanced: NDArray[np.bool_] = np.where(lap.gap <= LIMIT, False, True)  # nan does not balance
    found = [
        _flag("the forces do not balance, share left", unbalanced, lap.gap),
        _flag("a wheel would have to pull, lowest load N", lap.pulled, -lowest, -1.0),
        *(
            _flag(f"{name} axle beyond its tyres' grip, times", used[:, k] > _HELD, used[:, k])
            for k, name in enumerate(AXLES)
        ),
        _flag("one wheel off the ground, wheels", off, lifted),
        _flag("an aero map read at its edge, speed m/s", lap.outside, lap.speed),
    ]
    return tuple(item for item in found if item is not None)


def _flag(what: str, wrong: NDArray[np.bool_], size: Floats, sign: float = 1.0) -> Flag | None:
    if not wrong.any():
        return None
    worst = int(np.argmax(np.where(wrong, np.nan_to_num(size, nan=np.inf), -np.inf)))
    return Flag(what=what, count=int(wrong.sum()), worst=sign * float(size[worst]), worst_at=worst)
