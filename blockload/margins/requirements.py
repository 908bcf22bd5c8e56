"""What each face asks of a block that does not exist yet: the sheet for the engine maker.

A section that carries bending about one axis needs the section modulus W = factor |M|/σ, one that carries torsion the
torsion modulus W_t = factor |T|/τ with τ = σ/√3 (von Mises). Worst together, a section alike in both bendings with
W_t = 2 W (a closed round tube) needs W = factor √((|M_sag| + |M_lat|)² + ¾ T²)/σ, the equivalent bending moment of
the textbooks on shafts. σ is the casting's yield strength, the factor the case's own. Thrust N needs the area
factor |N|/σ. These are nominal: bosses and ribs come on top.

Twist: in series each part takes the share K/K_i of the twist. With the springs of both axles (roll stiffness K_f, K_r)
in series and tub and gearbox rigid, an engine that may take the share s of the twist between front and rear wheels
needs K = (1 − s)/s · K_f K_r/(K_f + K_r); of the twist from hub to hub it needs 1/s times the hub-to-hub stiffness,
whatever that is.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..block.model import Material
from ..car.model import FaceLoads, LoadCases
from ..case.model import Case
from .splits import rigid_splits
from .studs import joint, separation_load, slip_load


def requirements(case: Case, cases: LoadCases, material: Material | None = None) -> dict[str, dict[str, float]]:
    """Return the requirements of each face and between the faces; keys end in the SI unit.

    Parameters
    ----------
    case, cases : Case, LoadCases
        The car.
    material : Material, optional
        The grade the block would be cast in; without it only loads and studs are given.

    """
    sheet = {f"{name} face": _face(case, cases, name, material) for name in cases.faces}
    for name, loads in cases.faces.items():
        sheet[f"{name} studs"] = _preloads(case, loads)
    twist = _twist(case, cases, material)
    return {**sheet, "between the faces": twist} if twist else sheet


def _face(case: Case, cases: LoadCases, name: str, material: Material | None) -> dict[str, float]:
    thrust, _vy, _vz, torsion, sag, lateral = np.abs(cases.section(name)).T
    together = np.sqrt((sag + lateral) ** 2 + 0.75 * torsion**2)
    worst = {
        "vertical_bending_Nm": float(sag.max()),
        "lateral_bending_Nm": float(lateral.max()),
        "torsion_Nm": float(torsion.max()),
        "equivalent_bending_Nm": float(together.max()),
        "thrust_N": float(thrust.max()),
    }
    if material is None:
        return worst
    allowed = material.yield_strength / _factor(case, material)
    return worst | {
        "allowed_stress_Pa": float(allowed),
        "section_modulus_vertical_bending_m3": worst["vertical_bending_Nm"] / allowed,
        "section_modulus_lateral_bending_m3": worst["lateral_bending_Nm"] / allowed,
        "torsion_modulus_m3": worst["torsion_Nm"] * np.sqrt(3.0) / allowed,
        "section_modulus_all_together_m3": worst["equivalent_bending_Nm"] / allowed,
        "area_for_thrust_m2": worst["thrust_N"] / allowed,
    }


def _factor(case: Case, material: Material) -> float:
    return case.limits.yield_factor * (case.limits.casting_factor if material.cast else 1.0)


def _preloads(case: Case, loads: FaceLoads) -> dict[str, float]:
    """Nominal preload each stud needs, scatter and factor included: on the rigid face, and at the worst split."""
    needed: dict[str, float] = {}
    splits = np.stack([split.force.sum(axis=1) for split in rigid_splits(loads, case)])
    for index, stud in enumerate(case.faces[loads.name].studs):
        of, forces = joint(stud), splits[:, :, index]
        share = 1.0 - stud.preload_scatter
        slip = case.limits.slip_factor / (stud.friction * share) * _worst(slip_load(of, forces))
        opening = case.limits.separation_factor / share * _worst(separation_load(of, forces))
        needed |= {
            f"{stud.name}_preload_against_slip_rigid_face_N": float(slip[0]),
            f"{stud.name}_preload_against_slip_worst_split_N": float(slip.max()),
            f"{stud.name}_preload_against_separation_rigid_face_N": float(opening[0]),
            f"{stud.name}_preload_against_separation_worst_split_N": float(opening.max()),
        }
    return needed


def _worst(load: Floats) -> Floats:
    """Largest load over the cases for each split, nothing below zero."""
    result: Floats = np.maximum(load.max(axis=1), 0.0)
    return result


def _twist(case: Case, cases: LoadCases, material: Material | None) -> dict[str, float]:
    share = case.limits.twist_share
    if share is None or not 0.0 < share < 1.0:
        return {}
    front, rear = case.axles["front"].roll_stiffness, case.axles["rear"].roll_stiffness
    stiffness = (1.0 - share) / share * front * rear / (front + rear)
    found = {
        "torsional_stiffness_with_axle_springs_in_series_Nm_per_rad": stiffness,
        "torsional_stiffness_over_hub_to_hub_stiffness": 1.0 / share,
    }
    if material is not None:
        shear = material.youngs_modulus / (2.0 * (1.0 + material.poissons_ratio))
        length = cases.faces["front"].reference[0] - cases.faces["rear"].reference[0]
        found["torsion_constant_for_that_stiffness_m4"] = float(stiffness * length / shear)
    return found
