"""Where a beam is held and loaded: a pad at every stud, and named places, all on rigid arms."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..case.model import FACES, BeamSpec, BeamStation, BlockSpec, Face
from .attachments import WASHERS
from .model import Attachment
from .thin_walls import Wall, thin_walled

BARE_PAD = (2.0, 1.1)
"""Outer and inner diameter of a pad over the thread's, where no washer is known (our choice)."""


def beam_attachments(spec: BlockSpec, beam: BeamSpec, faces: Mapping[str, Face]) -> Iterator[Attachment]:
    """Yield pads at the studs of both faces, then the places in file order."""
    for kind, normal in (("front", 1.0), ("rear", -1.0)):
        face = faces[kind]
        for stud in face.studs:
            outer, inner = pad_ring(stud.size)
            area = np.pi / 4 * (outer**2 - inner**2)
            moment = np.pi / 64 * (outer**4 - inner**4)
            yield _point(stud.name, kind, [face.x, *stud.at], normal=normal, area=area, moment=moment)
    places = dict(beam.places)
    if spec.carried_on not in places:
        places[spec.carried_on] = _middle(beam, faces)
    for name, at in places.items():
        yield _point(name, "other", at)


def _point(
    name: str, kind: str, at: object, *, normal: float = 0.0, area: float = 0.0, moment: float = 0.0
) -> Attachment:
    none: Ints = np.zeros(0, dtype=np.int64)
    return Attachment(
        name=name,
        kind=kind,
        sets=(),
        facets=frozen(none, np.int64),
        area=area,
        centroid=frozen(at),  # type: ignore[arg-type]
        normal=frozen([normal, 0.0, 0.0]),
        moments=frozen(np.diag([0.0, moment, moment])),
    )


def _middle(beam: BeamSpec, faces: Mapping[str, Face]) -> Floats:
    """Half-way between the faces, at the centroid of the nearest station or of the studs."""
    x = (faces["front"].x + faces["rear"].x) / 2
    if beam.stations:
        near = min(beam.stations, key=lambda item: abs(item.x - x))
        centroid = near.centroid if near.centroid is not None else thin_walled(walls_of(near)).centroid
    else:
        centroid = np.mean([np.mean([stud.at for stud in faces[name].studs], axis=0) for name in FACES], axis=0)
    return np.array([x, *centroid])


def pad_ring(size: str) -> tuple[float, float]:
    """Return outer and inner diameter [m] of a pad: the plain washer's of the thread, else BARE_PAD of it."""
    digits = size.upper().lstrip("M").split("X")[0].strip()
    known = WASHERS.get(int(digits)) if digits.isdigit() else None
    outer, inner = known if known is not None else tuple(float(digits) * ratio for ratio in BARE_PAD)
    return 1e-3 * outer, 1e-3 * inner


def walls_of(station: BeamStation) -> dict[str, Wall]:
    """Return a station's walls as they are in the section."""
    return {
        name: Wall(points=wall.points, thickness=wall.thickness, closed=wall.closed)
        for name, wall in station.walls.items()
    }
