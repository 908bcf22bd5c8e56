"""Torsion and bending of prisms.

Timoshenko & Goodier, Theory of Elasticity, 3rd ed. 1970, art. 109 (rectangles); Bredt, VDI-Zeitschrift 40 (1896), as
in Roark's Formulas for Stress and Strain, table 10.7 (closed box).

Each prism is a free block loaded by the library's own unit wrenches on its ends; twist is read between two sections
away from the ends.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from skfem import MeshTet, MeshTet2

from blockload.block.model import Block
from blockload.response.fields import field
from blockload.response.respond import solve

sys.path.append(str(Path(__file__).parents[1] / "response"))
from boxes import attachment, block_of, near, tetrahedra

G = 71e9 / (2 * 1.33)


def prism(mesh: MeshTet2, length: float) -> Block:
    ends = [
        attachment(mesh, "A", "front", near(mesh, 0, length, (0, 0), 10.0)),
        attachment(mesh, "B", "rear", near(mesh, 0, 0.0, (0, 0), 10.0)),
    ]
    return block_of(mesh, ends)


def twist(mesh: MeshTet2, motion: np.ndarray, x: float) -> float:
    """Least-squares rotation about x of the nodes of one section."""
    here = np.abs(mesh.doflocs[0] - x) < 1e-9
    _, y, z = mesh.doflocs[:, here]
    moved = motion.reshape(-1, 3)[here]
    return float((y * moved[:, 2] - z * moved[:, 1]).sum() / (y**2 + z**2).sum())


@pytest.mark.parametrize(
    ("ratio", "beta", "alpha"), [(1.0, 0.1406, 0.2082), (1.5, 0.1958, 0.2310), (2.0, 0.2287, 0.2459)]
)
def test_rectangles_in_torsion(ratio: float, beta: float, alpha: float, published) -> None:
    b, length, torque = 0.04, 0.24, 500.0
    a = ratio * b
    mesh = tetrahedra(np.linspace(0, length, 13), np.linspace(-a / 2, a / 2, 7), np.linspace(-b / 2, b / 2, 7))
    library = solve(prism(mesh, length))
    weights = np.zeros(library.unit_count)
    weights[3], weights[9] = torque, -torque
    motion = field(library, weights)
    rate = (twist(mesh, motion, 0.16) - twist(mesh, motion, 0.08)) / 0.08
    middle = np.linalg.norm(library.surface_points - [0.12, 0.0, b / 2], axis=1).argmin()
    stress = library.stress[np.flatnonzero(library.entry_node == middle)[0]] @ weights
    source = "Timoshenko & Goodier (1970), art. 109"

    got = torque / (G * rate * a * b**3)
    published(f"torsion constant, a/b = {ratio:g}", source, expected=beta, got=got, unit="a b³", tolerance=0.02)
    got = torque / (np.hypot(stress[3], stress[5]) * a * b**2)
    published(f"torsion modulus, a/b = {ratio:g}", source, expected=alpha, got=got, unit="a b²", tolerance=0.02)


def closed_box() -> MeshTet2:
    """400 × 300 mm outside, walls of 10 mm, 480 mm long; one element through the wall."""
    y = np.concatenate([[-0.2], np.linspace(-0.19, 0.19, 9), [0.2]])
    z = np.concatenate([[-0.15], np.linspace(-0.14, 0.14, 7), [0.15]])
    mesh = MeshTet.init_tensor(np.linspace(0, 0.48, 13), y, z)
    middle = mesh.p[:, mesh.t].mean(axis=1)
    hollow = (np.abs(middle[1]) < 0.19) & (np.abs(middle[2]) < 0.14)
    return MeshTet2.from_mesh(mesh.remove_elements(np.flatnonzero(hollow)))


def walls(mesh: MeshTet2) -> list:
    """The four walls of each end as attachments of their own, so that a shear flow can be applied."""
    found = []
    for kind, x in (("front", 0.48), ("rear", 0.0)):
        facets = near(mesh, 0, x, (0, 0), 1.0)
        _, y, z = mesh.doflocs[:, mesh.facets[:, facets]].mean(axis=1)
        flange = np.abs(z) > 0.14
        for name, chosen in (
            ("top", flange & (z > 0)),
            ("bottom", flange & (z < 0)),
            ("left", ~flange & (y > 0)),
            ("right", ~flange & (y < 0)),
        ):
            found.append(attachment(mesh, name, kind, facets[chosen]))
    return found


def walls_twist(mesh: MeshTet2, motion: np.ndarray, x: float) -> float:
    """Mean rotation of flange pair and web pair: shearing the section into a lozenge turns them oppositely."""
    here = np.abs(mesh.doflocs[0] - x) < 1e-9
    _, y, z = mesh.doflocs
    moved = motion.reshape(-1, 3)

    def mean(chosen: np.ndarray, component: int) -> float:
        return float(moved[here & chosen, component].mean())

    flange, web = np.abs(y) < 0.15, np.abs(z) < 0.1
    flanges = mean(flange & (z < -0.139), 1) - mean(flange & (z > 0.139), 1)
    webs = mean(web & (y > 0.189), 2) - mean(web & (y < -0.189), 2)
    return (flanges / 0.29 + webs / 0.39) / 2


def test_closed_box_in_torsion(published) -> None:
    """A constant shear flow T / 2A enters at both ends; an even torsion traction would bend the thin walls."""
    mesh = closed_box()
    library = solve(block_of(mesh, walls(mesh)))
    flow = 6e3 / (2 * 0.39 * 0.29)
    weights = np.zeros(library.unit_count)
    for kind, sign in (("front", 1.0), ("rear", -1.0)):
        for name, component, force in (
            ("top", 1, -flow * 0.39),
            ("bottom", 1, flow * 0.39),
            ("left", 2, flow * 0.29),
            ("right", 2, -flow * 0.29),
        ):
            weights[library.rows(kind, name)][component] = sign * force
    motion = field(library, weights)
    rate = (walls_twist(mesh, motion, 0.32) - walls_twist(mesh, motion, 0.16)) / 0.16
    entries = np.abs(library.surface_points[library.entry_node] - [0.24, 0.0, 0.0])
    webs = (entries[:, 0] < 1e-9) & (entries[:, 1] > 0.18) & (entries[:, 2] < 0.1)
    shear = np.abs(library.stress[webs] @ weights)[:, 5].mean()
    source = "Bredt (1896); Roark table 10.7"

    got = 6e3 / (rate * 0.48) * np.pi / 180 / 1e3
    published("closed box, torsional stiffness", source, expected=365.1, got=got, unit="kN·m/deg", tolerance=0.03)
    published("closed box, shear stress", source, expected=2.6525, got=shear / 1e6, unit="MPa", tolerance=0.03)


def test_closed_box_in_bending(published) -> None:
    library = solve(prism(closed_box(), 0.48))
    weights = np.zeros(library.unit_count)
    weights[4], weights[10] = 10e3, -10e3
    place = library.surface_points[library.entry_node]
    stress = library.stress[:, 0] @ weights
    top = stress[(np.abs(place[:, 0] - 0.24) < 1e-9) & (np.abs(place[:, 2] - 0.15) < 1e-9)]
    bottom = stress[(np.abs(place[:, 0] - 0.24) < 1e-9) & (np.abs(place[:, 2] + 0.15) < 1e-9)]

    assert np.sign(top.mean()) == -np.sign(bottom.mean())
    for name, got in (("top", top), ("bottom", bottom)):
        published(
            f"closed box in bending, {name} stress",
            "beam theory, I = 2.04853e-4 m⁴",
            expected=7.322,
            got=np.abs(got).mean() / 1e6,
            unit="MPa",
            tolerance=0.02,
        )
