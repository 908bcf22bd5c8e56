"""What a second load path carries past a face."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import SecondPath


def past(path: SecondPath, face: str, reference: Floats) -> Floats:
    """Return what unit tension of a path carries across a face, on the part that holds the engine, (6,)."""
    behind = {"front": ("engine", "gearbox"), "rear": ("gearbox",)}[face]
    line = path.to_at - path.from_at
    unit = line / np.linalg.norm(line)
    sign = 1.0 if face == "front" else -1.0
    wrench = np.zeros(6)
    for body, at, sense in ((path.from_body, path.from_at, sign), (path.to_body, path.to_at, -sign)):
        if body in behind:
            force = sense * unit
            wrench += np.concatenate([force, np.cross(at - reference, force)])
    return wrench
