"""results.json: everything a run found, in SI, as plain data; and the balance summed again from what was written.

Nothing here recomputes a result. Numbers that do not exist are null, never NaN. Forces and moments of faces and
pads act on the engine; a free-body term acts on the body it is listed under.
"""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from .. import __version__
from ..car.model import BODIES, SECTION, LoadCases, Term
from ..case.model import CORNERS, Case
from .aero_results import aero_written
from .catalogue_tables import coverage_written, situation_written
from .files import write_beside
from .suspension_results import links_written, tension_force, tension_line

if TYPE_CHECKING:
    from ..block.model import AnyBlock
    from ..installation.model import PadLoads
    from ..margins.model import Margins
    from ..response.model import Library

FORMAT = "blockload.results/1"
_ROUNDING = 1e-9  # of the largest sum of magnitudes: what is below it is rounding, not load
STIFFNESS_KEYS = ("torsion_Nm_per_rad", "bending_vertical_Nm_per_rad", "bending_lateral_Nm_per_rad")


def load_results(case: Case, cases: LoadCases, *, run_id: str = "loads", version: str = __version__) -> dict[str, Any]:
    """Return the results of `loads`: everything down to the load cases."""
    return _document(
        {
            "format": FORMAT,
            "blockload_version": version,
            "run_id": run_id,
            "title": case.title,
            "inputs": {"case_sha256": case.sha256, "mesh_sha256": None, "overrides": list(case.overrides)},
            "load_cases": {name: load_case(case, cases, i) for i, name in enumerate(cases.names)},
            **coverage_written(case, cases),
        }
    )


def results(
    case: Case,
    cases: LoadCases,
    block: AnyBlock | None,
    library: Library | None,
    pads: PadLoads | None,
    margins: Margins,
    *,
    run_id: str,
    version: str = __version__,
) -> dict[str, Any]:
    """Return the results of a check as plain data, ready for JSON.

    Parameters
    ----------
    case, cases, block, library, pads, margins
        The values of one run; block, library and pads are None at level `faces`.
    run_id, version : str
        Written into every file of the run.

    Returns
    -------
    dict
        The document `blockload.results/1`: SI units, nulls for numbers that do not exist.

    """
    data = load_results(case, cases, run_id=run_id, version=version)
    if block is not None:
        data["inputs"]["mesh_sha256"] = block.sha256 or None
        data["block"] = {
            "nodes": block.counts[0],
            "elements": block.counts[1],
            "mass": block.mass,
            "cg": list(block.cg),
            "volumes": list(block.volumes),
        }
    if library is not None and pads is not None:
        data["inputs"]["library_key"] = library.key
        for i, name in enumerate(cases.names):
            data["load_cases"][name]["pads"] = _pads(library, pads, i)
            data["load_cases"][name]["rear_face_motion"] = list(margins.rear_face[name])
    data["stiffness"] = dict.fromkeys(STIFFNESS_KEYS) | dict(margins.stiffness)
    if margins.requirements:
        data["requirements"] = {face: dict(values) for face, values in margins.requirements.items()}
    data["margins"] = [asdict(item) for item in margins.margins]
    data["checks"] = [asdict(item) for item in (*case.checks, *margins.checks)]
    data["verdict"] = asdict(margins.verdict)
    data["bounded"] = [asdict(item) for item in margins.movements]
    data["defaults"] = [asdict(item) for item in case.defaults]
    return _document(data)


def load_case(case: Case, cases: LoadCases, index: int) -> dict[str, Any]:
    """Return one load case as it is written, its residual summed again from the written numbers."""
    wheels, used = cases.wheels[index], cases.friction_used[index]
    written = {
        "speed": cases.speed[index],
        "downforce": cases.downforce[index],
        "drag": cases.drag[index],
        "acceleration": cases.acceleration[index].sum(axis=0),
        "angular_acceleration": cases.angular_acceleration[index].sum(axis=0),
        "wheels": {
            corner: {
                "force": wheels[k],
                "at": _contact(case, corner),
                "friction_used": used[k],
                **_use(cases, index, k),
            }
            for k, corner in enumerate(CORNERS)
        },
        "links": links_written(cases, index),
        "crank_torque": cases.crank_torque[index],
        "faces": {name: _face(cases, name, index) | _includes(case) for name in cases.faces},
        "free_bodies": {},
        **aero_written(cases, index),
        **situation_written(cases, index),
    }
    written["free_bodies"] = {body: _terms(cases, body, index, written) for body in BODIES}
    data: dict[str, Any] = plain(written)
    data["residual"] = reassembled_residual(data)
    return data


def reassembled_residual(data: Mapping[str, Any]) -> float:
    """Sum every body's written forces again and return the largest share that is left over.

    Parameters
    ----------
    data : mapping
        One load case as written. A line of `free_bodies` either holds its own force and moment, or names the wheel,
        face or link whose numbers it stands for ("wheels.FL", "faces.front" with the sign it acts with; the tension of
        "FL.steer" with its direction), so that a wrong number anywhere in wheels, links, faces, aero, inertia or corner
        resultants shows.

    Returns
    -------
    float
        Largest of |ΣF| / Σ|F| and |ΣM| / Σ|M| over the bodies; moments about the car's origin.

    """
    bodies = [
        np.array([_wrench(line, data) for line in lines]).reshape(-1, 2, 3) for lines in data["free_bodies"].values()
    ]
    left = np.array([np.linalg.norm(lines.sum(axis=0), axis=1) for lines in bodies])
    size = np.array([np.linalg.norm(lines, axis=2).sum(axis=0) for lines in bodies])
    floor = _ROUNDING * size.max(initial=0.0)
    return float(np.divide(left, np.maximum(size, floor), out=np.zeros_like(left), where=size > 0).max(initial=0.0))


def _wrench(line: Mapping[str, Any], data: Mapping[str, Any]) -> np.ndarray[Any, Any]:
    """Force and moment about the car's origin of one free-body line, (2, 3)."""
    at, force, moment = (np.asarray(line.get(key, (0.0, 0.0, 0.0)), dtype=float) for key in ("at", "force", "moment"))
    if "tension_of" in line:
        force = tension_force(line, data["links"])
    if "same_as" in line:
        group, name = line["same_as"].split(".")
        other = data[group][name]
        at = np.asarray(other["at"] if group == "wheels" else other["reference"], dtype=float)
        force = line["sign"] * np.asarray(other["force"], dtype=float)
        moment = line["sign"] * np.asarray(other.get("moment", (0.0, 0.0, 0.0)), dtype=float)
    return np.stack([force, moment + np.cross(at, force)])


def _terms(cases: LoadCases, body: str, index: int, written: Mapping[str, Any]) -> list[dict[str, Any]]:
    lines = []
    for term in cases.terms:
        if term.body != body:
            continue
        at = np.broadcast_to(term.at, term.force.shape)[index]
        if not (term.force[index].any() or term.moment[index].any()):
            continue
        line = {"label": term.label, "at": at, "force": term.force[index], "moment": term.moment[index]}
        lines.append(
            _stands_for(body, term, line, written) or tension_line(body, term.label, line, written["links"]) or line
        )
    return lines


def _stands_for(body: str, term: Term, line: Mapping[str, Any], written: Mapping[str, Any]) -> dict[str, Any] | None:
    """Return a line that points at the wheel or face already written, where this term is that wheel or face."""
    candidates: list[tuple[str, float, Mapping[str, Any]]] = []
    if body in CORNERS:
        candidates.append((f"wheels.{body}", 1.0, {**written["wheels"][body], "moment": np.zeros(3)}))
    for name, face in written["faces"].items():
        sign = 1.0 if body == "engine" else -1.0
        candidates.append((f"faces.{name}", sign, {**face, "at": face["reference"]}))
    for target, sign, other in candidates:
        if _same(line, sign, other):
            return {"label": term.label, "same_as": target, "sign": sign}
    return None


def _same(line: Mapping[str, Any], sign: float, other: Mapping[str, Any]) -> bool:
    """Whether a free-body line is the same wrench as one written elsewhere."""
    force, moment = sign * np.asarray(other["force"]), sign * np.asarray(other["moment"])
    arm = np.asarray(other["at"]) - np.asarray(line["at"])
    size = np.abs(line["force"]).max() + np.abs(line["moment"]).max() + 1e-12
    gap = np.abs(line["force"] - force).max() + np.abs(line["moment"] - moment - np.cross(arm, force)).max()
    return bool(gap < 1e-9 * size)


def _use(cases: LoadCases, index: int, wheel: int) -> dict[str, float]:
    """Share of its grip that a tyre uses, where friction is known."""
    known = len(cases.tyre_use) > 0 and np.isfinite(cases.tyre_use[index, wheel])
    return {"tyre_use": cases.tyre_use[index, wheel]} if known else {}


def _contact(case: Case, corner: str) -> np.ndarray[Any, Any]:
    axle = case.axles["front" if corner[0] == "F" else "rear"]
    return np.array([axle.x, (0.5 if corner[1] == "L" else -0.5) * axle.track, 0.0])


def _includes(case: Case) -> dict[str, Any]:
    """Say that a face's wrench holds what second load paths carry past its studs, where there are any."""
    return {"includes_paths": True} if case.paths else {}


def _face(cases: LoadCases, name: str, index: int) -> dict[str, Any]:
    face = cases.faces[name]
    wrench = face.wrench[index].sum(axis=0)
    axial, shear = face.stud_axial[index].sum(axis=0), face.stud_shear[index].sum(axis=0)
    return {
        "reference": face.reference,
        "force": wrench[:3],
        "moment": wrench[3:],
        "section": dict(zip(SECTION, cases.section(name)[index], strict=True)),
        "sources": {
            source: wrench
            for source, wrench in zip(cases.sources, face.wrench[index], strict=True)
            if np.abs(wrench).max() > 0.0
        },
        "studs": {
            stud: {"axial": axial[k], "shear": math.hypot(*shear[k]), "shear_yz": shear[k], "at": face.stud_at[k]}
            for k, stud in enumerate(face.studs)
        },
    }


def _pads(library: Library, pads: PadLoads, index: int) -> dict[str, Any]:
    weights = pads.weights[pads.middle, index].sum(axis=0)
    found: dict[str, dict[str, Any]] = {"front": {}, "rear": {}}
    for kind, name in library.attachments:
        if kind in found:
            wrench = weights[library.rows(kind, name)]
            found[kind][name] = {"force": wrench[:3], "moment": wrench[3:]}
    return found


def _document(data: Mapping[str, Any]) -> dict[str, Any]:
    return {key: plain(value) for key, value in data.items()}


def plain(value: Any) -> Any:
    """Return a value as JSON knows it: lists, dicts, floats, with None for what is not finite."""
    if isinstance(value, Mapping):
        return {str(key): plain(item) for key, item in value.items()}
    if isinstance(value, np.ndarray):
        return plain(value.tolist())
    if isinstance(value, np.generic):
        return plain(value.item())
    if isinstance(value, float):
        return value + 0.0 if math.isfinite(value) else None  # adding zero turns -0.0 into 0.0
    if isinstance(value, str | bool | int) or value is None:
        return value
    if isinstance(value, Sequence):
        return [plain(item) for item in value]
    return str(value)


def write_json(path: Path, data: Mapping[str, Any]) -> None:
    """Write results as JSON, beside and then renamed; raises OutputError where the place cannot be written."""
    write_beside(path, json.dumps(data, indent=1, ensure_ascii=False, allow_nan=False).encode() + b"\n")
