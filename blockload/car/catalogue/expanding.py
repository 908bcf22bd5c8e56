"""From the groups a case names to manoeuvres, with everything that had to be left out."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from types import MappingProxyType

from ...case.model import Case, Manoeuvre
from ..envelope import vertices
from . import driveline, handling, regulation, rigs, steady, transient
from .figures import Omission

BUILDERS: Mapping[str, Callable[[Case], Iterator[Manoeuvre | Omission]]] = MappingProxyType(
    {
        "v_max": steady.v_max,
        "corner": steady.corner,
        "brake": steady.brake,
        "brake_in_corner": steady.brake_in_corner,
        "power_in_corner": steady.power_in_corner,
        "crest": steady.crest,
        "kerb": transient.kerb,
        "landing": transient.landing,
        "launch": driveline.launch,
        "shift": driveline.shift,
        "spin": transient.spin,
        "jack": handling.jack,
        "crane": handling.crane,
        "trolley": handling.trolley,
        "towing": handling.towing,
        "roll_structure": regulation.roll_structure,
        "rear_impact": regulation.rear_impact,
        "twist_rig": rigs.twist_rig,
        "bending_rig": rigs.bending_rig,
    }
)
"""What builds each group, in the catalogue's order."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Expansion:
    """The manoeuvres of a case's groups, what was left out, and the group that each name came from.

    `origin` has also the names for which a manoeuvre of the case file stands in.
    """

    manoeuvres: tuple[Manoeuvre, ...]
    omissions: tuple[Omission, ...]
    origin: Mapping[str, str]


def expansion(case: Case) -> Expansion:
    """Build every group the case names; a manoeuvre of the case file stands in for one of the same name."""
    own = {manoeuvre.name for manoeuvre in case.manoeuvres}
    built: dict[str, Manoeuvre] = {}
    origin: dict[str, str] = {}
    omissions: list[Omission] = []
    for group in case.catalogue.groups if case.catalogue is not None else ():
        for item in BUILDERS[group](case):
            if isinstance(item, Omission):
                omissions.append(item)
            else:
                built[item.name] = item
                origin[item.name] = group
    return Expansion(
        manoeuvres=tuple(item for name, item in built.items() if name not in own),
        omissions=tuple(omissions),
        origin=MappingProxyType(origin),
    )


def expand(case: Case) -> tuple[Manoeuvre, ...]:
    """Manoeuvres of the catalogue's groups and vertices of the envelope, as far as the case asks for them."""
    boundary = vertices(case) if case.envelope is not None else ()
    return (*expansion(case).manoeuvres, *boundary)
