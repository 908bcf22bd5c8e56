"""The dimensions of a vee engine block: what the recipe needs, and nothing it can work out.

The engine stands in the car's axes (x forward, y left, z up). Stations run rearward from the front face plane. Each
bank has its own axes: `along` from the crank axis up the bores, `across` outward from the valley. Lengths in m.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from ..errors import BlockError

SIDES = {"left": 1.0, "right": -1.0}
PAD_VOLUMES = ("block", "sump", "head_left", "head_right")
LEAST_STEP = 0.004
"""Surfaces nearer than this but not coincident make steps no mesh of this size can follow [m]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Rib:
    """A triangular web that fairs a boss into the casting.

    It stands `above` the boss axis, reaches `reach` below it along `toward` (a (y, z) direction), is `thickness`
    wide and dies out `length` behind its face.
    """

    toward: tuple[float, float]
    above: float
    reach: float
    thickness: float
    length: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PadShape:
    """A stud's pad: a disc of `radius` in the face plane at (y, z), ending a boss of one volume.

    The boss widens from the pad to `boss` at depth `column` and fades to `tail` at `depth`.
    """

    face: str
    name: str
    at: tuple[float, float]
    volume: str
    radius: float
    boss: float
    column: float
    depth: float
    tail: float
    rib: Rib | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class VeeShape:
    """Dimensions of a vee engine block with deep skirts, cross-held caps, closed heads and a structural sump [m, rad].

    `front_x`, `rear_x`: face planes; `first_main`: station of the first main; `stagger`: the left bank stands this far
    ahead of the middle and the right bank as far behind it; `deck`, `head_height` and `cam_floor` are heights along the
    bank axis from the crank axis (deck, head) or from the deck (cam floor); `*_z` are heights above the ground;
    `recess`: how far the end walls stand behind the pads.
    """

    front_x: float
    rear_x: float
    crank_z: float
    vee_angle: float
    cylinders_per_bank: int
    bore: float
    bore_spacing: float
    bore_end: float
    first_main: float
    stagger: float
    deck: float
    bank_half_width: float
    deck_plate: float
    main_bore: float
    bulkhead: float
    cap_half_width: float
    cap_depth: float
    chamber_roof: float
    chamber_top_z: float
    valley_z: float
    wall: float
    end_wall: float
    recess: float
    nose_bore: float
    tail_bore: float
    skirt_front: float
    skirt_rear: float
    shoulder_z: float
    parting_z: float
    flange: float
    side_rib: float
    sump_z: float
    sump_floor: float
    sump_rib: float
    sump_rib_z: float
    head_half_width: float
    head_height: float
    cam_floor: float
    cam_chamfer: float
    head_wall: float
    cam_wall: float
    port_wide: float
    port_tall: float
    port_at: float
    port_depth: float
    pads: tuple[PadShape, ...]

    def __post_init__(self) -> None:
        _check(self)

    @property
    def length(self) -> float:
        """Distance between the face planes."""
        return self.front_x - self.rear_x

    @property
    def mains(self) -> tuple[float, ...]:
        """Stations of the main bearings."""
        return tuple(self.first_main + i * self.bore_spacing for i in range(self.cylinders_per_bank + 1))

    def bores(self, side: str) -> tuple[float, ...]:
        """Stations of one bank's bores, front to rear."""
        first = self.first_main + 0.5 * self.bore_spacing - SIDES[side] * self.stagger
        return tuple(first + i * self.bore_spacing for i in range(self.cylinders_per_bank))

    def bank_axes(self, side: str) -> tuple[tuple[float, float], tuple[float, float]]:
        """Return (y, z) directions along and across a bank."""
        half, sign = 0.5 * self.vee_angle, SIDES[side]
        return (sign * math.sin(half), math.cos(half)), (sign * math.cos(half), -math.sin(half))

    def skirt(self, station: float) -> float:
        """Outer half width of crankcase and sump at a station."""
        return self.skirt_front + (self.skirt_rear - self.skirt_front) * station / self.length


def _check(shape: VeeShape) -> None:
    numbers = {
        name: getattr(shape, name)
        for name in VeeShape.__slots__
        if name not in {"front_x", "rear_x", "pads", "cylinders_per_bank"}
    }
    for name, value in numbers.items():
        if not (math.isfinite(value) and value > 0) and name != "stagger":
            raise BlockError(f"shape.{name}", f"{value}", "a positive number", "give the dimension in metres")
    if not math.radians(40) <= shape.vee_angle <= math.radians(120):
        raise BlockError("shape.vee_angle", f"{math.degrees(shape.vee_angle):.0f}°", "40° to 120°")
    steps = {
        "bore_spacing − bore (wall between bores)": shape.bore_spacing - shape.bore,
        "bank_half_width − bore/2 (outer bore wall)": shape.bank_half_width - 0.5 * shape.bore,
        "head_half_width − bank_half_width": shape.head_half_width - shape.bank_half_width,
        "cap_half_width − main_bore/2": shape.cap_half_width - 0.5 * shape.main_bore,
        "valley_z − chamber_top_z": shape.valley_z - shape.chamber_top_z,
        "room behind the last main": shape.length
        - shape.recess
        - shape.end_wall
        - shape.mains[-1]
        - shape.bulkhead / 2,
        "room before the first main": shape.first_main - shape.bulkhead / 2 - shape.recess - shape.end_wall,
        "bore_spacing − bulkhead": shape.bore_spacing - shape.bulkhead,
        "sump_z above the ground": shape.sump_z,
        "parting_z − sump_z": shape.parting_z - shape.sump_z,
    }
    for what, step in steps.items():
        if step < LEAST_STEP:
            raise BlockError(f"shape: {what}", f"{1e3 * step:.1f} mm", "at least 4 mm", "move one of the two surfaces")
    names = [(pad.face, pad.name) for pad in shape.pads]
    if len(set(names)) != len(names):
        raise BlockError("shape.pads", "two pads of one face share a name", "one name per pad")
    for pad in shape.pads:
        if pad.volume not in PAD_VOLUMES:
            raise BlockError(f"shape.pads.{pad.name}", f"volume {pad.volume!r}", ", ".join(PAD_VOLUMES))


def shape_from(values: dict[str, Any]) -> VeeShape:
    """Return the shape written by dataclasses.asdict, as it comes back from JSON."""
    pads = tuple(PadShape(**{**pad, "at": tuple(pad["at"]), "rib": _rib_from(pad["rib"])}) for pad in values["pads"])
    return VeeShape(**{**values, "pads": pads})


def _rib_from(values: dict[str, Any] | None) -> Rib | None:
    return None if values is None else Rib(**{**values, "toward": tuple(values["toward"])})
