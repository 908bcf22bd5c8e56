"""The requirements sheet against hand calculations."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import synthetic_car as car

from blockload.margins.requirements import requirements
from blockload.margins.studs import Split, criteria, joint, margin_of

REAR = np.array([[[0.0, 0.0, 3e3, 1.2e3, -4e3, 2e3]], [[500.0, 2e3, 0.0, 0.0, 1e3, 5e3]]])


def sheet(material=car.METAL, **limits):
    case = car.case(limits=replace(car.LIMITS, **limits))
    return requirements(case, car.load_cases(case, rear=REAR), material)


def test_section_moduli_by_hand() -> None:
    """W = 1.25 M/147 MPa; torsion modulus 1.25 T √3/147 MPa; together √((|Ms|+|Ml|)² + ¾T²)."""
    rear = sheet()["rear face"]
    allowed = 147e6 / 1.25

    assert rear["section_modulus_vertical_bending_m3"] == pytest.approx(4e3 / allowed)
    assert rear["section_modulus_lateral_bending_m3"] == pytest.approx(5e3 / allowed)
    assert rear["torsion_modulus_m3"] == pytest.approx(1.2e3 * np.sqrt(3) / allowed)
    together = max(np.hypot(6e3, np.sqrt(0.75) * 1.2e3), 6e3)
    assert rear["section_modulus_all_together_m3"] == pytest.approx(together / allowed)
    assert rear["area_for_thrust_m2"] == pytest.approx(500 / allowed)


def test_a_round_tube_with_the_modulus_asked_is_at_the_allowable() -> None:
    """Von Mises at the skin of a tube with W_t = 2W under bending M and torsion T: σ = M/W, τ = T/2W."""
    rear = sheet()["rear face"]
    w = rear["section_modulus_all_together_m3"]
    stresses = [np.hypot((abs(case[4]) + abs(case[5])) / w, np.sqrt(3) * case[3] / (2 * w)) for case in REAR[:, 0]]
    assert max(stresses) == pytest.approx(147e6 / 1.25)


def test_the_casting_factor_is_asked_of_castings() -> None:
    plain, cast = sheet(), sheet(casting_factor=1.5)
    ratio = cast["rear face"]["torsion_modulus_m3"] / plain["rear face"]["torsion_modulus_m3"]
    assert ratio == pytest.approx(1.5)


def test_without_a_grade_only_loads_and_studs_are_given() -> None:
    found = sheet(material=None)
    assert "section_modulus_vertical_bending_m3" not in found["rear face"]
    assert found["rear face"]["lateral_bending_Nm"] == pytest.approx(5e3)


def test_the_preload_asked_for_gives_exactly_the_margin_zero() -> None:
    """Put the preload of the sheet into the stud and its rigid-face margin vanishes."""
    case = car.case()
    cases = car.load_cases(case, rear=REAR)
    needed = requirements(case, cases)["rear studs"]
    stud = case.faces["rear"].studs[0]
    loads = cases.faces["rear"]
    force = np.concatenate([loads.stud_axial[..., None], loads.stud_shear], axis=-1)[:, :, 0]
    for name, row in (("slip", 2), ("separation", 1)):
        of = joint(replace(stud, preload=needed[f"TL_preload_against_{name}_rigid_face_N"]))
        found = margin_of(
            criteria(of, case.limits)[row],
            of,
            [Split(label="", force=force)],
            place="",
            at=(0.0, 0.0, 0.0),
            names=cases.names,
            sources=cases.sources,
        )
        assert found.margin == pytest.approx(0.0, abs=1e-9)


def test_twist_share_by_springs_in_series() -> None:
    """With axle springs of 250 kN·m/rad and a share of 20 %: K = 4 · 125 kN·m/rad; the engine then twists a fifth."""
    between = sheet(twist_share=0.2)["between the faces"]
    stiffness = between["torsional_stiffness_with_axle_springs_in_series_Nm_per_rad"]
    assert stiffness == pytest.approx(500e3)
    assert (1 / stiffness) / (1 / stiffness + 2 / 250e3) == pytest.approx(0.2)
    assert between["torsional_stiffness_over_hub_to_hub_stiffness"] == pytest.approx(5.0)

    shear = 70e9 / (2 * 1.33)
    assert between["torsion_constant_for_that_stiffness_m4"] == pytest.approx(500e3 * 0.6 / shear)


def test_no_twist_share_no_twist_requirement() -> None:
    assert "between the faces" not in sheet()
