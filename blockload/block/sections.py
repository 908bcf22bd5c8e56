"""A cross-section as beam theory sees it: what it resists with, and the stress at its fibres.

Axes y, z in the plane x = const. With u_x = u + θ_y z − θ_z y the forces of a section about a point are
N = ∫σ dA, M_y = ∫σ z dA, M_z = −∫σ y dA, so with g = (1, z, −y) and D = ∫ g gᵀ dA

    σ_xx = g · D⁻¹ (N, M_y, M_z)

which holds for any axes, principal or not (Timoshenko, Strength of Materials, part I, 3rd ed. 1955, on unsymmetrical
bending). A shear force is felt at the shear centre; T about another point is moved there. Transverse shear is measured
by energy with Poisson's ratio taken as zero: 1/A_s = ∫τ²dA for unit force, a symmetric 2×2.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats

_NORMAL, _SHEAR = [0, 4, 5], [1, 2, 3]
FORCES = ("N", "V_y", "V_z", "T", "M_y", "M_z")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Section:
    """Area [m²], centroid (2,) = (y, z) [m], second (2, 2) = ∫ r rᵀ dA about it [m⁴], torsion constant [m⁴].

    shear_centre (2,) [m]; shear_area (2, 2) [m²], its inverse symmetric and positive.
    fibres (p, 2) are the places where stress is known, recovery (p, 3, 6) the stress xx, xy, xz there for unit forces
    N, V_y, V_z, T, M_y, M_z about the point y = z = 0. warping_constant [m⁶] is ∫w² dA about the shear centre, 0 where
    it is not known.
    """

    area: float
    centroid: Floats
    second: Floats
    torsion_constant: float
    shear_centre: Floats
    shear_area: Floats
    fibres: Floats
    recovery: Floats
    warping_constant: float = 0.0

    @property
    def about_y(self) -> float:
        """∫ z² dA about the centroid: resists vertical bending [m⁴]."""
        return float(self.second[1, 1])

    @property
    def about_z(self) -> float:
        """∫ y² dA about the centroid: resists lateral bending [m⁴]."""
        return float(self.second[0, 0])


def normal_moments(area: float, centroid: Floats, second: Floats) -> Floats:
    """Return D = ∫ g gᵀ dA, g = (1, z, −y), about the point y = z = 0, (3, 3)."""
    turn = np.array([[0.0, 1.0], [-1.0, 0.0]])
    lever = turn @ centroid
    moments = np.empty((3, 3))
    moments[0, 0] = area
    moments[0, 1:] = moments[1:, 0] = area * lever
    moments[1:, 1:] = turn @ second @ turn.T + area * np.outer(lever, lever)
    return moments


def normal_recovery(fibres: Floats, area: float, centroid: Floats, second: Floats) -> Floats:
    """Return σ_xx at the fibres (p, 6) for unit forces about y = z = 0."""
    g = np.column_stack([np.ones(len(fibres)), fibres[:, 1], -fibres[:, 0]])
    recovery = np.zeros((len(fibres), 6))
    recovery[:, [0, 4, 5]] = g @ np.linalg.inv(normal_moments(area, centroid, second))
    return recovery


def torque_at(shear_centre: Floats) -> Floats:
    """Return the row (6,) that moves T from the point y = z = 0 to the shear centre: T − y_s V_z + z_s V_y."""
    y, z = shear_centre
    return np.array([0.0, z, -y, 1.0, 0.0, 0.0])


def given_section(
    *,
    area: float,
    centroid: Floats,
    second: Floats,
    torsion_constant: float,
    shear_centre: Floats,
    shear_area: Floats,
    fibres: Floats,
    torsion_modulus: float | None = None,
    warping_constant: float = 0.0,
) -> Section:
    """Return a section from its properties as known.

    The stress at `fibres` (p, 2) is that of N, M_y and M_z, and where `torsion_modulus` [m³] is given that of T as
    well, τ = T / W_t at every fibre, square to its distance from the shear centre. The shear forces' own stress is
    zero at an extreme fibre and is left out.
    """
    recovery = np.zeros((len(fibres), 3, 6))
    recovery[:, 0] = normal_recovery(fibres, area, centroid, second)
    if torsion_modulus is not None and len(fibres):
        arm = fibres - shear_centre
        size = np.maximum(np.linalg.norm(arm, axis=1), np.finfo(float).tiny)
        along = np.column_stack([-arm[:, 1], arm[:, 0]]) / size[:, None]
        recovery[:, 1:] = along[:, :, None] * torque_at(shear_centre) / torsion_modulus
    return Section(
        area=area,
        centroid=np.asarray(centroid, dtype=float),
        second=np.asarray(second, dtype=float),
        torsion_constant=torsion_constant,
        shear_centre=np.asarray(shear_centre, dtype=float),
        shear_area=np.asarray(shear_area, dtype=float),
        fibres=np.asarray(fibres, dtype=float),
        recovery=recovery,
        warping_constant=warping_constant,
    )


def section_stiffness(section: Section, young: float, shear: float) -> Floats:
    """Return C (6, 6): N V_y V_z T M_y M_z about y = z = 0 for unit ε γ_y γ_z κ_x κ_y κ_z there [N, N·m, N·m²]."""
    stiffness = np.zeros((6, 6))
    stiffness[np.ix_(_NORMAL, _NORMAL)] = young * normal_moments(section.area, section.centroid, section.second)
    y, z = section.shear_centre
    at_centre = np.array([[1.0, 0.0, -z], [0.0, 1.0, y]])
    stiffness[np.ix_(_SHEAR, _SHEAR)] = shear * at_centre.T @ section.shear_area @ at_centre
    stiffness[3, 3] += shear * section.torsion_constant
    return stiffness


def section_mass(section: Section, density: float) -> Floats:
    """Return the mass (6, 6) per length about y = z = 0 for u and θ [kg/m, kg, kg·m]."""
    return mass_per_length(density * section.area, section.centroid, density * section.second)


def mass_per_length(mass: float, centroid: Floats, second: Floats) -> Floats:
    """Return the mass (6, 6) of a slice with this mass, centroid (2,) and second moments of mass (2, 2) about it."""
    arm = np.array([0.0, *centroid])
    first = mass * _cross(arm)
    moments = np.zeros((3, 3))
    moments[1:, 1:] = second
    moments += mass * np.outer(arm, arm)
    result = np.zeros((6, 6))
    result[:3, :3] = mass * np.eye(3)
    result[:3, 3:], result[3:, :3] = -first, first
    result[3:, 3:] = np.trace(moments) * np.eye(3) - moments
    return result


def _cross(arm: Floats) -> Floats:
    x, y, z = arm
    return np.array([[0.0, -z, y], [z, 0.0, -x], [-y, x, 0.0]])
