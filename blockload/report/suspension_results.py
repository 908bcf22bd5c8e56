"""What results.json says of links: their tensions, and free-body lines that stand for them.

A line of a two-force member holds no force of its own but points at the tension written for it, with the direction it
acts in, so that a wrong tension shows in the balance summed again from the file.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from ..arrays import Floats
from ..car.links import LINKS
from ..car.model import LoadCases
from ..case.model import CORNERS

_UNIT = 1e-9


def links_written(cases: LoadCases, index: int) -> dict[str, dict[str, float]]:
    """Tension [N] of every link of one load case by corner and link, + pulled; empty for corners without links."""
    return {
        corner: dict(zip(loads.names, loads.tension[index].sum(axis=0).tolist(), strict=True))
        for corner, loads in cases.links.items()
    }


def tension_line(
    body: str, label: str, line: Mapping[str, Any], links: Mapping[str, Mapping[str, float]]
) -> dict[str, Any] | None:
    """Return a line that points at a written tension, where this force is that two-force member; else None."""
    if body in CORNERS:
        link, corner = label, body
    else:
        link, _, corner = label.partition(".")
    if link not in LINKS or corner not in links:
        return None
    tension = links[corner][link]
    if tension == 0.0 or line["moment"].any():
        return None
    direction: Floats = line["force"] / tension
    if abs(float(np.linalg.norm(direction)) - 1.0) > _UNIT:
        return None  # a leg of a wishbone that bends
    return {"label": label, "at": line["at"], "tension_of": f"{corner}.{link}", "direction": direction}


def tension_force(line: Mapping[str, Any], links: Mapping[str, Mapping[str, float]]) -> Floats:
    """Force (3,) [N] of a line made by `tension_line`, from the tensions as written."""
    corner, link = line["tension_of"].split(".")
    result: Floats = links[corner][link] * np.asarray(line["direction"], dtype=float)
    return result
