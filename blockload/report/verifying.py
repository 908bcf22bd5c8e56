"""Reading a run back: its balance reassembled from what was written, its inputs compared by hash."""

from __future__ import annotations

import hashlib
import json
from pathlib import Path
from typing import Any

from ..case.model import Check
from ..errors import CaseError
from .results import reassembled_residual

RESIDUAL = 1e-6


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
    return data


def verify_run(folder: Path) -> tuple[Check, ...]:
    """Return one check per load case (balance from the written numbers) and one per input file (its hash)."""
    data = read_results(folder)
    checks = [_balance(name, load_case) for name, load_case in data["load_cases"].items()]
    return (*checks, *(_input_hash(folder, name, known) for name, known in data["inputs"]["files"].items()))


def _balance(name: str, load_case: dict[str, Any]) -> Check:
    value = reassembled_residual(load_case)
    return Check(name=f"balance of {name}", ok=value <= RESIDUAL, value=value, limit=RESIDUAL)


def _input_hash(folder: Path, name: str, known: str) -> Check:
    path = folder / "inputs" / name
    try:
        found = hashlib.sha256(path.read_bytes()).hexdigest()
    except OSError:
        found = "missing"
    ok = found == known
    note = "" if ok else f"written {known[:12]}, found {found[:12]}"
    return Check(name=f"input {name} unchanged", ok=ok, value=float(not ok), limit=0.0, note=note)
