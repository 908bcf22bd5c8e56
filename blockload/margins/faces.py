"""A face as a whole: slip of all its studs together, and a supplier's limit on its bending moment.

These follow from the face wrench alone, so no stiffness enters and the band has no width, unless there are second load
paths. A friction joint under shear V and torsion T about the studs' centroid is safe where |V|/V0 + |T|/T0 does not
exceed one, with V0 = Σ μF_V,min and T0 = Σ μF_V,min r: the straight line lies inside the true limit surface of the
group, which is convex and has both end points (lower bound theorem of plasticity). Tension N across the face takes
μ(1 − Φ)N off.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from ..arrays import Floats
from ..car.model import FaceLoads, LoadCases
from ..car.studs import rigid_face
from ..case.model import Case
from ..installation.model import PadLoads
from ..installation.paths import past
from .model import Margin
from .studs import joint
from .wording import INCREMENT, causes, margin_at


def face_margins(case: Case, cases: LoadCases, pads: PadLoads | None = None) -> tuple[Margin, ...]:
    """Return face slip of both faces, and the moment limit where the supplier gave one.

    Second load paths take their share past the studs; with the installed `pads` it is left out, and the band runs over
    the pad stiffnesses.
    """
    if pads is None or not case.paths:
        return _of_faces(case, cases, cases.faces)
    installed = replace(cases, sources=pads.sources)
    found = [_of_faces(case, installed, _less_paths(case, cases, pads, p)) for p in range(len(pads.variants))]
    return tuple(_worst(items) for items in zip(*found, strict=True))


def _less_paths(case: Case, cases: LoadCases, pads: PadLoads, variant: int) -> dict[str, FaceLoads]:
    """The faces without what the second paths carry past them, at one pad stiffness."""
    found = {}
    for name, loads in cases.faces.items():
        more = len(pads.sources) - loads.wrench.shape[1]
        wrench = np.pad(loads.wrench, ((0, 0), (0, more), (0, 0)))
        for index, path in enumerate(case.paths):
            tension = pads.path_force[variant, :, :, index]
            wrench -= tension[..., None] * past(path, name, loads.reference)
        axial, shear = rigid_face(loads.stud_at[:, -2:], wrench)
        found[name] = replace(loads, wrench=wrench, stud_axial=axial, stud_shear=shear)
    return found


def _worst(items: Sequence[Margin]) -> Margin:
    """The lowest of one margin at every pad stiffness, with the band of all."""
    loaded = [item for item in items if item.margin is not None]
    if not loaded:
        return items[0]
    values = [item.margin for item in loaded if item.margin is not None]
    lowest = loaded[int(np.argmin(values))]
    return replace(lowest, band=(min(values), max(values)))


def _of_faces(case: Case, cases: LoadCases, faces: Mapping[str, FaceLoads]) -> tuple[Margin, ...]:
    found = []
    for loads in faces.values():
        allowable, applied, parts = _slip(case, loads)
        found.append(
            _margin(
                cases,
                loads,
                criterion="face slip",
                applied=applied,
                parts=parts,
                allowable=allowable,
                unit="N",
                factor=case.limits.slip_factor,
                method="friction of all studs together against shear and torsion, straight interaction",
            )
        )
        if case.limits.face_moment is not None:
            moments = loads.wrench[..., 4:]
            size = np.linalg.norm(moments.sum(axis=1), axis=-1)
            found.append(
                _margin(
                    cases,
                    loads,
                    criterion="face moment limit",
                    applied=size,
                    parts=_along(moments),
                    allowable=case.limits.face_moment,
                    unit="N·m",
                    factor=case.limits.bolt_factor,
                    method="√(M_sag² + M_lat²) about the studs' centroid against the supplier's limit",
                )
            )
    return tuple(found)


def _slip(case: Case, loads: FaceLoads) -> tuple[float, Floats, Floats]:
    """Friction capacity [N], load on it (C,) and the load of each source (C, S)."""
    joints = [joint(stud) for stud in case.faces[loads.name].studs]
    friction = np.array([of.stud.friction * of.least for of in joints])
    relief = np.array([of.stud.friction * (1.0 - of.stud.load_factor) for of in joints])
    arms = np.linalg.norm(loads.stud_at[:, -2:] - loads.stud_at[:, -2:].mean(axis=0), axis=1)
    lever = float(friction @ arms / friction.sum())
    torsion = loads.wrench[..., 3]
    parts = _along(loads.wrench[..., 1:3])
    parts = parts + np.sign(torsion.sum(axis=1))[:, None] * torsion / lever
    parts = parts + loads.stud_axial @ relief
    return float(friction.sum()), parts.sum(axis=1), parts


def _along(vectors: Floats) -> Floats:
    """Component of each source's vector (C, S, k) along the case's total, (C, S)."""
    total = vectors.sum(axis=1, keepdims=True)
    size = np.linalg.norm(total, axis=-1)
    result: Floats = (vectors * total).sum(axis=-1) / np.maximum(size, np.finfo(float).tiny)
    return result


def _margin(
    cases: LoadCases,
    loads: FaceLoads,
    *,
    criterion: str,
    applied: Floats,
    parts: Floats,
    allowable: float,
    unit: str,
    factor: float,
    method: str,
) -> Margin:
    ranked = np.argsort(-applied, kind="stable")
    worst = int(ranked[0])
    value = float(applied[worst])
    margin = margin_at(allowable, factor, value) if value > 0.0 else None
    second = None
    if len(ranked) > 1 and applied[ranked[1]] > 0.0:
        second = (cases.names[ranked[1]], margin_at(allowable, factor, float(applied[ranked[1]])))
    return Margin(
        criterion=criterion,
        place=f"{loads.name} face",
        at=(float(loads.reference[0]), float(loads.reference[1]), float(loads.reference[2])),
        load_case=cases.names[worst],
        applied=max(value, 0.0),
        allowable=allowable,
        unit=unit,
        factor=factor,
        margin=margin,
        band=None if margin is None else (margin, margin),
        trust="converged",
        causes=causes(cases.sources, parts[worst] / value) if value > 0.0 else (),
        second=second,
        method=method,
        note=INCREMENT,
    )
