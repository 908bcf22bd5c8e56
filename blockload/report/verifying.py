"""Reading a run back: its balance reassembled from what was written, its inputs compared by hash."""

from __future__ import annotations

import hashlib
import json
from pathlib import Path
from typing import Any

import numpy as np

from ..car.model import SECTION
from ..case.model import Check
from ..errors import CaseError
from ..margins.wording import LARGEST
from .results import reassembled_residual

RESIDUAL = 1e-6
ROUNDING = 1e-6
NEEDED = ("inputs", "load_cases", "margins", "checks", "verdict")


def read_results(folder: Path) -> dict[str, Any]:
    """Return the results.json of a run's folder.

    Raises
    ------
    CaseError
        Where the folder holds no whole run.

    """
    path = folder / "results.json"
    remedy = "name the folder given to 'blockload check --output'"
    try:
        data = json.loads(path.read_text(encoding="utf-8"))
    except OSError as error:
        raise CaseError(
            str(path), f"cannot be read ({error.strerror})", "the folder of a finished run", remedy
        ) from error
    except ValueError as error:
        raise CaseError(
            str(path), f"is damaged ({error})", "the file as it was written", "run the check again"
        ) from error
    if not isinstance(data, dict) or data.get("format") != "blockload.results/1":
        raise CaseError(str(path), "is not a result of this format", "blockload.results/1", remedy)
    missing = [key for key in NEEDED if key not in data]
    if "inputs" in data and "files" not in data["inputs"]:
        missing.append("inputs.files")
    if missing:
        raise CaseError(str(path), f"lacks {', '.join(missing)}", "the file as 'blockload check' wrote it", remedy)
    return data


def verify_run(folder: Path) -> tuple[Check, ...]:
    """Return what can be reassembled from a run's own files.

    Of each load case its balance, and sections and stud forces from the face wrenches; every margin from what it was
    made of; the lowest margin and the verdict from the margins and checks; the hash of every input file.
    """
    data = read_results(folder)
    checks = [_balance(name, load_case) for name, load_case in data["load_cases"].items()]
    checks += [_faces(name, load_case) for name, load_case in data["load_cases"].items()]
    checks += [_margins(data), _lowest(data), _verdict(data)]
    return (*checks, *(_input_hash(folder, name, known) for name, known in data["inputs"]["files"].items()))


def _balance(name: str, load_case: dict[str, Any]) -> Check:
    value = reassembled_residual(load_case)
    return Check(name=f"balance of {name}", ok=value <= RESIDUAL, value=value, limit=RESIDUAL)


def _faces(name: str, load_case: dict[str, Any]) -> Check:
    """Section and rigid studs against the written wrench: signs, and the sum of the studs' axial forces."""
    worst = 0.0
    for side, face in load_case["faces"].items():
        wrench = np.array([*face["force"], *face["moment"]])
        section = np.array([face["section"][key] for key in SECTION])
        expected = wrench * (1.0, 1.0, 1.0, 1.0, -1.0, -1.0) * (1.0 if side == "front" else -1.0)
        axial = [stud["axial"] for stud in face["studs"].values()]
        size = max(float(np.abs(wrench).max()), float(np.abs(axial).max()), 1.0)
        worst = max(worst, float(np.abs(section - expected).max()) / size, abs(sum(axial) - section[0]) / size)
    return Check(name=f"faces of {name}", ok=worst <= ROUNDING, value=worst, limit=ROUNDING)


def _margins(data: dict[str, Any]) -> Check:
    """Every margin of strength and joints against allowable / (factor × applied) − 1, and inside its own band."""
    worst = 0.0
    for item in data["margins"]:
        margin = item["margin"]
        if item["criterion"].endswith("stiffness"):
            continue
        if margin is None or item["applied"] <= 0.0:  # without load there is no margin
            worst = max(worst, float(margin is not None or item["applied"] > 0.0))
            continue
        expected = min(item["allowable"] / (item["factor"] * item["applied"]) - 1.0, LARGEST)
        outside = 0.0 if item["band"] is None else abs(min(item["band"]) - margin)
        worst = max(worst, abs(margin - expected) / (1.0 + abs(expected)), outside)
    return Check(name="margins from what they are made of", ok=worst <= ROUNDING, value=worst, limit=ROUNDING)


def _lowest(data: dict[str, Any]) -> Check:
    found = min((item["margin"] for item in data["margins"] if item["margin"] is not None), default=None)
    stated = data["verdict"]["lowest_margin"]
    gap = 0.0 if found == stated else 1.0 if found is None or stated is None else abs(found - stated)
    return Check(name="lowest margin is the lowest", ok=gap <= ROUNDING, value=gap, limit=ROUNDING)


def _verdict(data: dict[str, Any]) -> Check:
    """A block is shown only where nothing fails, and ruled out only where something does."""
    word, level = data["verdict"]["word"], data["verdict"]["level"]
    fails = any(item["margin"] is not None and item["margin"] < 0.0 for item in data["margins"])
    broken = any(not item["ok"] for item in data["checks"])
    shown = word == "shown within scope" and (fails or broken or level in ("faces", "beam"))
    wrong = shown or (word == "ruled out" and not fails)
    return Check(name="verdict follows from margins and checks", ok=not wrong, value=float(wrong), limit=0.0)


def _input_hash(folder: Path, name: str, known: str) -> Check:
    path = folder / "inputs" / name
    try:
        found = hashlib.sha256(path.read_bytes()).hexdigest()
    except OSError:
        found = "missing"
    ok = found == known
    note = "" if ok else f"written {known[:12]}, found {found[:12]}"
    return Check(name=f"input {name} unchanged", ok=ok, value=float(not ok), limit=0.0, note=note)
