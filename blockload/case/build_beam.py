"""The block as a beam: stations in order of x, or measured stiffness, and the places where loads enter."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..arrays import frozen
from .model import BeamSpec, BeamStation, BeamWall, Face, MeasuredStiffness
from .notes import Notes, key_of
from .schema_beam import BeamTable, StationTable, WallTable

_NEEDED = ("area", "centroid", "second_moments", "torsion_constant")
_PROPERTIES = (*_NEEDED, "product", "shear_areas", "shear_centre", "torsion_modulus", "warping_constant", "fibres")
_PADS = "ISO 7089 (from memory); two diameters where it has none: unsourced"
_TUBE = (
    "a thin round tube through the studs gives what was not measured (axial and shear stiffness, spread of mass): "
    "unsourced"
)


def build_beam(given: BeamTable, faces: Mapping[str, Face], carried_on: str, notes: Notes) -> BeamSpec:
    """Return the beam, its stations in order of x; what is missing or contradicts itself is noted."""
    stations = tuple(sorted((_station(name, item, notes) for name, item in given.stations.items()), key=lambda s: s.x))
    if (given.stiffness is None) == (not stations):
        found = "holds both stations and measured stiffness" if stations else "holds neither stations nor stiffness"
        remedy = "describe one station in [block.beam.stations.NAME], or leave one of the two out"
        notes.problem("block.beam", found, "stations along x, or a measured stiffness", remedy)
    _check_alike(stations, notes)
    _check_reach(stations, faces, notes)
    notes.default("block.beam, pads", "at the studs, each as large as its plain washer", _PADS)
    places = {name: item.at for name, item in given.places.items()}
    if carried_on not in places and len(faces) == 2:
        middle = (faces["front"].x + faces["rear"].x) / 2
        text = f"x = {middle:.4g} m, on the beam's axis"
        notes.default(key_of("block", "beam", "places", carried_on), text, "half-way between the faces: unsourced")
    measured = None
    if given.stiffness is not None:
        measured = MeasuredStiffness(
            torsion=given.stiffness.torsion,
            bending_vertical=given.stiffness.bending_vertical,
            bending_lateral=given.stiffness.bending_lateral,
            source=given.stiffness.source,
        )
        notes.default("block.beam.stations", f"none; stiffness as measured: {measured.source}", _TUBE)
        if given.mass is None:
            remedy = 'add mass = "55 kg" with your own value'
            notes.problem("block.beam.mass", "missing: a stiffness says nothing of it", "the mass of the metal", remedy)
    return BeamSpec(stations=stations, stiffness=measured, mass=given.mass, places=places)


def _station(name: str, given: StationTable, notes: Notes) -> BeamStation:
    key = key_of("block", "beam", "stations", name)
    own = [item for item in _PROPERTIES if getattr(given, item) is not None]
    missing = [item for item in _NEEDED if item not in own]
    if given.walls and own:
        notes.problem(key, f"has walls and also {', '.join(own)}", "walls, or properties", "take one of the two out")
    elif not given.walls and missing:
        remedy = f"add them, or draw the section in [{key}.walls.NAME]"
        notes.problem(key, f"{', '.join(missing)} missing", "walls, or " + ", ".join(_NEEDED), remedy)
    if not given.walls:
        _note_defaults(key, given, notes)
    values: dict[str, Any] = {item: getattr(given, item) for item in _PROPERTIES}
    for item in ("product", "warping_constant"):
        values[item] = 0.0 if given.walls else notes.take(given, StationTable, key, item)
    if given.second_moments is not None and given.second_moments.prod() <= values["product"] ** 2:
        remedy = "check signs and units: no area has such moments"
        notes.problem(f"{key}.product", "larger than the second moments allow", "a product below their mean", remedy)
    values["fibres"] = frozen(np.array(given.fibres) if given.fibres else np.zeros((0, 2)))
    walls = {wall: _wall(f"{key}.walls.{wall}", item, notes) for wall, item in given.walls.items()}
    return BeamStation(name=name, x=given.x, walls=walls, **values)


def _note_defaults(key: str, given: StationTable, notes: Notes) -> None:
    if given.shear_areas is None:
        tube = "Cowper, J. Appl. Mech. 33 (1966) 335-340, thin square tube"
        notes.default(f"{key}.shear_areas", "20(1+nu)/(48+39nu) of the area", tube)
    if given.shear_centre is None:
        notes.default(f"{key}.shear_centre", "the centroid", "as for a section with two planes of symmetry: unsourced")


def _wall(key: str, given: WallTable, notes: Notes) -> BeamWall:
    if len(given.points) < 2:
        notes.problem(
            f"{key}.points", f"{len(given.points)} point", "at least two points", "give both ends of the wall"
        )
    closed = bool(notes.take(given, WallTable, key, "closed"))
    return BeamWall(points=frozen(np.array(given.points)), thickness=given.thickness, closed=closed)


def _check_alike(stations: Sequence[BeamStation], notes: Notes) -> None:
    """All stations must be of one kind, so that what lies between two of them is known."""
    for item in stations[1:]:
        first = stations[0]
        key = key_of("block", "beam", "stations", item.name)
        if _walls_of(item) != _walls_of(first):
            found = f"its walls are not those of {first.name}"
            remedy = "name the same walls at every station; where one ends, let it grow thin"
            notes.problem(key, found, "the same walls with as many points each, or properties at all stations", remedy)
        elif len(item.fibres) != len(first.fibres):
            found = f"{len(item.fibres)} fibres, {first.name} has {len(first.fibres)}"
            notes.problem(f"{key}.fibres", found, "the same fibres at every station", "give them in one order")
        elif (item.torsion_modulus is None) != (first.torsion_modulus is None):
            found = "given at some stations only"
            notes.problem(f"{key}.torsion_modulus", found, "at all stations, or none", "give it everywhere")


def _walls_of(station: BeamStation) -> dict[str, tuple[int, bool]]:
    return {name: (len(wall.points), wall.closed) for name, wall in station.walls.items()}


def _check_reach(stations: Sequence[BeamStation], faces: Mapping[str, Face], notes: Notes) -> None:
    if len(faces) != 2:
        return
    rear, front = faces["rear"].x, faces["front"].x
    for item in stations:
        if not rear - 1e-9 <= item.x <= front + 1e-9:
            key = f"{key_of('block', 'beam', 'stations', item.name)}.x"
            allowed = f"between the faces, {rear:g} to {front:g} m"
            notes.problem(key, f"{item.x:g} m is outside the block", allowed, "check the station's x and the faces'")
