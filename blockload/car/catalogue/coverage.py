"""Which standard situations a run holds, which it leaves out, and which signs it never turns round.

A joint that is only ever pressed at the top looks safe whatever its upper studs would hold. The catalogue's rows and
the two ends of every section component show what has not been asked.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ...case.groups import GROUPS
from ...case.model import FACES, Case
from ..model import SECTION, LoadCases
from .expanding import expansion
from .figures import Omission

STATUS = ("covered", "in part", "left out", "not asked for")
TURNS: dict[str, tuple[str, ...]] = {
    "N": ("brake", "towing", "rear_impact"),
    "V_y": ("corner", "spin"),
    "V_z": ("crane", "jack", "trolley"),
    "T": ("kerb", "corner", "twist_rig"),
    "M_sag": ("crane", "trolley", "jack"),
    "M_lat": ("corner", "spin"),
}
"""Groups that usually turn a component's sign round."""
_NOTHING = 1e-6  # of the largest force or moment across the face


@dataclass(frozen=True, slots=True, kw_only=True)
class Coverage:
    """One group of the catalogue: its load cases, what of it is left out, and the status that follows."""

    group: str
    status: str
    load_cases: tuple[str, ...]
    omissions: tuple[Omission, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Ends:
    """Least and greatest value of one section component over the load cases [N, N·m], and where they occur.

    `turns` says whether both signs occur; `missing` names the groups that would usually bring the other one.
    """

    face: str
    component: str
    least: float
    least_case: str
    greatest: float
    greatest_case: str
    turns: bool
    missing: tuple[str, ...]


def coverage(case: Case) -> tuple[Coverage, ...]:
    """One row for every group of the catalogue, asked for or not."""
    found = expansion(case)
    asked = case.catalogue.groups if case.catalogue is not None else ()
    own = {item.name for item in case.manoeuvres}
    rows = []
    for group in GROUPS:
        names = tuple(name for name, origin in found.origin.items() if origin == group)
        gaps = tuple(item for item in found.omissions if item.group == group)
        status = STATUS[0] if not gaps else STATUS[1] if names else STATUS[2]
        marked = tuple(f"{name} (the case's own)" if name in own else name for name in names)
        row = Coverage(group=group, status=status if group in asked else STATUS[3], load_cases=marked, omissions=gaps)
        rows.append(row)
    return tuple(rows)


def ends(cases: LoadCases) -> tuple[Ends, ...]:
    """Both ends of every section component of both faces, with what would turn a sign that never turns."""
    groups = {group for group in cases.group if group is not None}
    rows = []
    for face in FACES:
        section = cases.section(face)
        for k, component in enumerate(SECTION):
            values = section[:, k]
            size = np.abs(section[:, :3] if k < 3 else section[:, 3:]).max(initial=0.0)
            low, high = int(values.argmin()), int(values.argmax())
            turns = bool(values[low] < -_NOTHING * size and values[high] > _NOTHING * size)
            missing = () if turns else tuple(group for group in TURNS[component] if group not in groups)
            rows.append(
                Ends(
                    face=face,
                    component=component,
                    least=float(values[low]),
                    least_case=cases.names[low],
                    greatest=float(values[high]),
                    greatest_case=cases.names[high],
                    turns=turns,
                    missing=missing,
                )
            )
    return tuple(rows)
