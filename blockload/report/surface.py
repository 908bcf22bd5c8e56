"""The block's surface in the governing load case, for pictures and for fields.vtu.

Points are the library's surface entries (one per node and volume), so a stress is never averaged across a change of
material. Stress, displacement and case are those of one load case at the middle pad stiffness; `ratio` is the
envelope over all cases and strength criteria: factor × applied / allowable, above 1 fails.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from ..car.model import LoadCases
from ..installation.model import PadLoads
from ..margins.model import SurfaceMargins
from ..margins.strength import CRITERIA
from ..response.model import Library
from .files import fill_beside


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Surface:
    """The surface of the block under one load case.

    points (m, 3) [m] and triangles (t, 3) into them; volume (m,) indexes `volumes`; stress (m, 6) xx yy zz xy yz xz
    [Pa]; displacement (m, 3) [m], against the tub; ratio, case and criterion (m,) are the envelope's.
    """

    load_case: str
    cases: tuple[str, ...]
    volumes: tuple[str, ...]
    points: Floats
    triangles: Ints
    volume: Ints
    stress: Floats
    displacement: Floats
    ratio: Floats
    case: Ints
    criterion: Ints


def surface(cases: LoadCases, library: Library, pads: PadLoads, field: SurfaceMargins, index: int) -> Surface:
    """Return the block's surface under the load case of this index.

    Parameters
    ----------
    cases, library, pads : LoadCases, Library, PadLoads
        The loads, the unit responses and the installed wrenches.
    field : SurfaceMargins
        The envelope over cases and criteria.
    index : int
        Which load case stress and displacement are of.

    """
    weights = pads.weights[pads.middle, index].sum(axis=0)
    nodes = library.surface_nodes[library.entry_node]
    points = library.surface_points[library.entry_node]
    rows = 3 * nodes[:, None] + np.arange(3)
    elastic = np.asarray(library.motion[rows.ravel()]) @ weights
    rigid = pads.block_motion[pads.middle, index].sum(axis=0)
    return Surface(
        load_case=cases.names[index],
        cases=cases.names,
        volumes=library.volumes,
        points=points,
        triangles=_entry_triangles(library),
        volume=library.entry_volume,
        stress=np.asarray(library.stress) @ weights,
        displacement=elastic.reshape(-1, 3) + rigid[:3] + np.cross(rigid[3:], points),
        ratio=field.ratio,
        case=field.case,
        criterion=field.criterion,
    )


def _entry_triangles(library: Library) -> Ints:
    """Triangles with their corners as entries: the node as it belongs to the triangle's own volume."""
    count = len(library.volumes)
    keys = library.entry_node * count + library.entry_volume
    order = np.argsort(keys)
    wanted = library.surface_triangles * count + library.triangle_volume[:, None]
    found: Ints = order[np.searchsorted(keys, wanted, sorter=order)]
    return found


def principal(stress: Floats) -> Floats:
    """Return the principal stresses (m, 3) of components xx yy zz xy yz xz, largest first."""
    xx, yy, zz, xy, yz, xz = stress.T
    tensor = np.stack([xx, xy, xz, xy, yy, yz, xz, yz, zz], axis=-1).reshape(-1, 3, 3)
    values: Floats = np.linalg.eigvalsh(tensor)[:, ::-1]
    return values


def equivalent(stress: Floats) -> Floats:
    """Return von Mises' equivalent stress (m,) of components xx yy zz xy yz xz."""
    xx, yy, zz, xy, yz, xz = stress.T
    squares = (xx - yy) ** 2 + (yy - zz) ** 2 + (zz - xx) ** 2 + 6.0 * (xy**2 + yz**2 + xz**2)
    value: Floats = np.sqrt(0.5 * squares)
    return value


def write_fields(path: Path, seen: Surface, *, run_id: str) -> None:
    """Write fields.vtu: ten fields on the surface, with names for the numbers of cases, volumes and criteria.

    Raises
    ------
    OutputError
        Where the file cannot be written.

    """
    import pyvista

    count = len(seen.triangles)
    cells = np.column_stack([np.full(count, 3), seen.triangles])
    grid = pyvista.UnstructuredGrid(cells, np.full(count, pyvista.CellType.TRIANGLE), np.asarray(seen.points))
    main = principal(seen.stress)
    with np.errstate(divide="ignore"):
        margin = np.minimum(1.0 / seen.ratio - 1.0, 1e6)
    fields: dict[str, Any] = {
        "stress [Pa] xx yy zz xy yz xz": seen.stress,
        "equivalent stress [Pa]": equivalent(seen.stress),
        "largest principal stress [Pa]": main[:, 0],
        "smallest principal stress [Pa]": main[:, 2],
        "displacement [m]": seen.displacement,
        "use of strength, envelope": seen.ratio,
        "margin, envelope": margin,
        "governing load case": seen.case,
        "governing criterion": seen.criterion,
        "volume": seen.volume,
    }
    for name, values in fields.items():
        grid.point_data[name] = values
    for name, number in _legend(seen, run_id).items():
        grid.field_data[name] = np.array([number])
    save: Callable[[Path], None] = grid.save
    fill_beside(path, save)


def _legend(seen: Surface, run_id: str) -> dict[str, int]:
    """What the numbers of the fields stand for, as names with a number: texts would shut some readers out."""
    named = {
        f"run {run_id}": 0,
        f"stress and displacement are of {seen.load_case}": seen.cases.index(seen.load_case),
        "displacement is against the tub": 0,
    }
    for kind, names in (
        ("load case", seen.cases),
        ("volume", seen.volumes),
        ("criterion", tuple(criterion.name for criterion in CRITERIA)),
    ):
        named |= {f"{kind} {k} is {name}": k for k, name in enumerate(names)}
    return named
