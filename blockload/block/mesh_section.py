"""The section of a mesh at any x: area, centroid, second moments, torsion constant, shear centre, shear areas.

The cut is a mesh of triangles whose integrals give area and moments. Torsion and shear are Saint-Venant's problem on
it, solved for warping w with quadratic elements, so that cells and holes need no care (Sokolnikoff, Mathematical Theory
of Elasticity, 2nd ed. 1956, chapter 4):

    ∫ (∇w + (−z, y)) · ∇v = 0      J = ∫ |∇w + (−z, y)|² dA        r = (y, z) from the centroid

The shear centre is Trefftz's, where torsion and bending do no work on each other (E. Trefftz, ZAMM 15 (1935) 220):
∫ r (w + y_s z − z_s y) dA = 0. Shear areas are by energy with Poisson's ratio taken as zero; Cowper's shear factors
(J. Appl. Mech. 33 (1966) 335-340), meant for a section with an axis of symmetry, use the ratio given. One material
throughout: where volumes of unlike stiffness are cut the figures are those of the shape alone.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Floats
from .model import Block
from .plane_cut import plane_cut
from .sections import Section, normal_moments, normal_recovery

if TYPE_CHECKING:
    from skfem import MeshTri


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeshSection:
    """The section at x [m] and the number of pieces of metal in it; its shear centre and areas are nan for several.

    shear_factors (2,) are Cowper's for force along y and along z: shear area over area.
    `section.fibres` are the corners of the convex hull, with the stress of N, M_y and M_z alone.
    """

    x: float
    pieces: int
    section: Section
    shear_factors: Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class SectionTable:
    """Sections as texts: title, columns, rows, note."""

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    note: str = ""


def section_table(block: Block, x: float | Sequence[float]) -> SectionTable:
    """Return the sections of a block at one or several x as texts for printing."""
    found = [mesh_section(block, float(place)) for place in np.atleast_1d(np.asarray(x, dtype=float))]
    return SectionTable(
        title="Sections of the mesh",
        columns=(
            "x mm",
            "area cm²",
            "y_c mm",
            "z_c mm",
            "I_y cm⁴",
            "I_z cm⁴",
            "J cm⁴",
            "y_s mm",
            "z_s mm",
            "k_y",
            "k_z",
            "pieces",
        ),
        rows=tuple(_row(item) for item in found),
        note="I_y resists vertical bending, I_z lateral, both at the centroid (y_c, z_c); J is Saint-Venant's, free to "
        "warp; the shear centre (y_s, z_s) is an estimate (Trefftz) and k the shear factor (Cowper), none where the "
        "metal is in several pieces",
    )


def _row(found: MeshSection) -> tuple[str, ...]:
    it = found.section
    scaled = [1e3 * found.x, 1e4 * it.area, *(1e3 * it.centroid), 1e8 * it.about_y, 1e8 * it.about_z]
    scaled += [1e8 * it.torsion_constant, *(1e3 * it.shear_centre), *found.shear_factors]
    return (*("none" if np.isnan(value) else f"{value:.4g}" for value in scaled), str(found.pieces))


def mesh_section(block: Block, x: float, poisson: float | None = None) -> MeshSection:
    """Return the section of a mesh at x, with the properties of its shape.

    `poisson` is for Cowper's factors alone; that of the block's first volume when absent.
    Raises BlockError where the plane misses the metal.
    """
    mesh = plane_cut(block, x)
    from skfem import Basis, ElementTriP2

    basis = Basis(mesh, ElementTriP2(), intorder=4)
    dA = np.asarray(basis.dx)
    place = np.asarray(basis.global_coordinates())
    area = float(dA.sum())
    centroid = np.einsum("eq,ieq->i", dA, place) / area
    arm = place - centroid[:, None, None]
    second = np.einsum("eq,ieq,jeq->ij", dA, arm, arm)
    pieces, torsion, centre, shear, warping = _saint_venant(basis, arm, dA, area, second)
    ratio = block.materials[block.volumes[0]].poissons_ratio if poisson is None else poisson
    fibres = _hull(mesh)
    recovery = np.zeros((len(fibres), 3, 6))
    recovery[:, 0] = normal_recovery(fibres, area, centroid, second)
    return MeshSection(
        x=x,
        pieces=pieces,
        shear_factors=_cowper(basis, arm, dA, area, second, ratio) if pieces == 1 else np.full(2, np.nan),
        section=Section(
            area=area,
            centroid=centroid,
            second=second,
            torsion_constant=torsion,
            shear_centre=centroid + centre,
            shear_area=shear,
            fibres=fibres,
            recovery=recovery,
            warping_constant=warping,
        ),
    )


def _saint_venant(
    basis: Any, arm: Floats, dA: Floats, area: float, second: Floats
) -> tuple[int, float, Floats, Floats, float]:
    """Number of pieces, torsion constant, shear centre from the centroid (2,), shear areas (2, 2), warping constant."""
    from skfem import BilinearForm, LinearForm
    from skfem.helpers import dot, grad

    stiffness = BilinearForm(lambda u, v, _: dot(grad(u), grad(v))).assemble(basis)
    swirl = LinearForm(lambda v, w: w["z"] * grad(v)[0] - w["y"] * grad(v)[1])
    pull = LinearForm(lambda v, w: w["rate"] * v)
    y, z = arm
    slope = np.linalg.inv(normal_moments(area, np.zeros(2), second))[:, 1:] @ np.array([[0.0, 1.0], [-1.0, 0.0]])
    rates = [slope[0, k] + slope[1, k] * z - slope[2, k] * y for k in (0, 1)]
    load = np.column_stack([swirl.assemble(basis, y=y, z=z), *(pull.assemble(basis, rate=rate) for rate in rates)])
    pieces, warping = _solved(stiffness, load)
    fields = [basis.interpolate(warping[:, k]) for k in range(3)]
    twist = np.asarray(grad(fields[0])) + np.stack([-z, y])
    torsion = float((dA * (twist**2).sum(axis=0)).sum())
    if pieces > 1:
        return pieces, torsion, np.full(2, np.nan), np.full((2, 2), np.nan), 0.0
    work = np.array([(dA * np.asarray(fields[0]) * item).sum() for item in (y, z)])
    centre = np.linalg.solve(np.array([[second[0, 1], -second[0, 0]], [second[1, 1], -second[0, 1]]]), -work)
    flows = [np.asarray(grad(field)) for field in fields[1:]]
    flexibility = np.array([[(dA * (a * b).sum(axis=0)).sum() for b in flows] for a in flows])
    about = np.asarray(fields[0]) + centre[0] * z - centre[1] * y
    about -= (dA * about).sum() / area
    return pieces, torsion, centre, np.linalg.inv(flexibility), float((dA * about**2).sum())


def _cowper(basis: Any, arm: Floats, dA: Floats, area: float, second: Floats, poisson: float) -> Floats:
    """Cowper's shear factors for force along y and z: harmonic χ with ∂χ/∂n = n · p on the edge.

    With a along the force and b across it p = −(ν a²/2 + (1 − ν/2) b², (2 + ν) a b) and
    k = 2 (1 + ν) I / (ν (I_b − I)/2 − (A/I) ∫ a (χ + a b²) dA), I = ∫ a² dA, I_b = ∫ b² dA.
    """
    from skfem import BilinearForm, LinearForm
    from skfem.helpers import dot, grad

    stiffness = BilinearForm(lambda u, v, _: dot(grad(u), grad(v))).assemble(basis)
    edge = LinearForm(lambda v, w: w["p"] * grad(v)[0] + w["q"] * grad(v)[1] + w["r"] * v)
    factors = []
    for k in (0, 1):
        a, b = arm[k], arm[1 - k]
        pull = [-(poisson * a**2 + (2 - poisson) * b**2) / 2, -(2 + poisson) * a * b]
        p, q = pull if k == 0 else pull[::-1]
        _, flexure = _solved(stiffness, edge.assemble(basis, p=p, q=q, r=-2 * (1 + poisson) * a)[:, None])
        own, other = second[k, k], second[1 - k, 1 - k]
        rest = (dA * a * (np.asarray(basis.interpolate(flexure[:, 0])) + a * b**2)).sum() * area / own
        factors.append(2 * (1 + poisson) * own / (poisson * (other - own) / 2 - rest))
    return np.array(factors)


def _solved(stiffness: Any, load: Floats) -> tuple[int, Floats]:
    """Number of pieces and the warping of each load; one unknown of every piece stays."""
    from scipy.sparse.csgraph import connected_components
    from scipy.sparse.linalg import splu

    pieces, label = connected_components(stiffness, directed=False)
    held = np.array([np.flatnonzero(label == k)[0] for k in range(pieces)])
    free = np.setdiff1d(np.arange(len(load)), held)
    warping = np.zeros_like(load)
    warping[free] = splu(stiffness[free][:, free].tocsc()).solve(load[free])
    return int(pieces), warping


def _hull(mesh: MeshTri) -> Floats:
    from scipy.spatial import ConvexHull

    points = mesh.p.T
    return np.asarray(points[ConvexHull(points).vertices])
