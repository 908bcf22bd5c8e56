"""The house rules that can be read off the source: which room may import which, and what start-up may load."""

from __future__ import annotations

import ast
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

import blockload

ROOT = Path(__file__).parent.parent
PACKAGE = ROOT / "blockload"
LEAVES = ("errors", "arrays", "unit_table", "units")
ROOMS = ("case", "car", "block", "response", "installation", "margins", "report", "window", "variants")
MESHING = {"skfem", "meshio", "pyvista", "netgen", "ngsolve"}
SOURCES = sorted(PACKAGE.rglob("*.py"))


def imports(path: Path) -> set[str]:
    """Every module a file imports, as absolute dotted names."""
    package = ("blockload", *path.relative_to(PACKAGE).parts[:-1])
    found: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            base = ".".join(package[: len(package) - node.level + 1]) if node.level else ""
            module = ".".join(part for part in (base, node.module or "") if part)
            found |= {module} | {f"{module}.{alias.name}" for alias in node.names}
    return found


def room_of(path: Path) -> str:
    """First folder below the package, or the module's own name."""
    parts = path.relative_to(PACKAGE).parts
    return parts[0] if len(parts) > 1 else path.stem


@pytest.mark.parametrize("path", SOURCES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_a_room_imports_only_leaves_and_rooms_above_it(path: Path) -> None:
    room = room_of(path)
    if room in ("pipeline", "cli", "__main__", "__init__"):
        return
    allowed = set(LEAVES) if room in LEAVES else set(LEAVES) | set(ROOMS[: ROOMS.index(room) + 1])
    if room in ("car", "block"):
        allowed -= {"car", "block"} - {room}
    used = {name.split(".")[1] for name in imports(path) if name.startswith("blockload.")}
    used -= {"__version__"}

    assert used <= allowed, f"{room} imports {sorted(used - allowed)}"


@pytest.mark.parametrize("room", ["case", "car"])
def test_case_and_car_never_import_a_mesher_a_solver_or_a_viewer(room: str) -> None:
    used = {name.split(".")[0] for path in (PACKAGE / room).rglob("*.py") for name in imports(path)}

    assert not used & MESHING


def test_only_case_knows_pydantic_and_only_units_knows_the_units_library() -> None:
    for path in SOURCES:
        used = {name.split(".")[0] for name in imports(path)}
        assert "pydantic" not in used or room_of(path) == "case"
        assert "pint" not in used or room_of(path) == "units"


@pytest.mark.parametrize("start", ["import blockload", "from blockload.cli import app"])
def test_starting_up_loads_nothing_heavy(start: str) -> None:
    heavy = "{'skfem','meshio','pyvista','netgen','ngsolve','scipy','matplotlib','pint','pydantic'}"
    code = f"{start}; import sys; print(sorted({heavy} & set(sys.modules)))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)

    assert done.stdout.strip() == "[]"


def test_public_names_are_few_and_each_can_be_had() -> None:
    assert len(blockload.__all__) <= 15
    for name in blockload.__all__:
        assert getattr(blockload, name) is not None


def test_version_is_the_same_in_package_and_metadata() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]

    assert project["version"] == blockload.__version__


def test_every_default_that_ships_names_its_source() -> None:
    for path in sorted((PACKAGE / "data").glob("*.toml")):
        text = path.read_text(encoding="utf-8")
        assert "source" in text, path.name
