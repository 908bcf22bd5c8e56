"""Stiffness between the faces against springs worked by hand, and against beam theory on the brick."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import solid_car
from installation import synthetic_car as car

from blockload.installation.install import install
from blockload.margins.stiffness import (
    face_to_face,
    rear_face_motion,
    stiffness_margins,
    stiffnesses,
)

K_N, K_T = 8e8, 4e8


def arms(case, face) -> np.ndarray:
    at = np.array([stud.at for stud in case.faces[face].studs])
    return at - at.mean(axis=0)


def test_a_rigid_block_is_as_stiff_as_its_joints() -> None:
    """Torsion Σ k_t r² and bending Σ k_n z², Σ k_n y² of each face's pads, the two faces in series."""
    case = car.case()
    block = car.block(case)
    rigid = car.library(block, flexibility=1e-9 * car.library(block).flexibility)

    found = face_to_face(block, rigid, case, (K_N, K_T))

    joints = []
    for face in ("front", "rear"):
        y, z = arms(case, face).T
        joints.append([K_T * (y**2 + z**2).sum(), K_N * (z**2).sum(), K_N * (y**2).sum()])
    np.testing.assert_allclose(found, 1 / (1 / np.array(joints)).sum(axis=0), rtol=1e-6)


def test_pads_without_compliance_leave_the_block_alone() -> None:
    """Compliance of block and joints do not add exactly (planes are rigid), but softer pads are always softer."""
    block, library = solid_car.solved()
    found = stiffnesses(block, library, solid_car.case())
    for mode in ("torsion", "bending_vertical", "bending_lateral"):
        values = [found[f"{mode}_with_{label}_pads_Nm_per_rad"] for label in ("soft", "middle", "stiff")]
        assert values == sorted(values)
        assert values[-1] < found[f"{mode}_Nm_per_rad"]


def test_stiffness_is_proportional_to_youngs_modulus() -> None:
    block, library = solid_car.solved()
    case = solid_car.case()
    twice = replace(library, flexibility=library.flexibility / 2)
    np.testing.assert_allclose(face_to_face(block, twice, case), 2 * face_to_face(block, library, case), rtol=1e-9)


def test_the_brick_is_no_stiffer_than_its_whole_section() -> None:
    """EI/L and GJ/L of the full rectangle bound a brick that is held at four spots of each end."""
    block, library = solid_car.solved()
    metal = block.materials["block"]
    width, height, length = 0.48, 0.36, car.FRONT_X - car.REAR_X
    shear = metal.youngs_modulus / (2 * (1 + metal.poissons_ratio))
    # J = β b h³ with β = 0.2 for a side ratio of 4/3: between 0.141 (square) and 0.333; Roark, table of torsion.
    torsion = shear * 0.18 * width * height**3 / length
    bending = metal.youngs_modulus * np.array([width * height**3, height * width**3]) / 12 / length

    found = face_to_face(block, library, solid_car.case())

    assert 0.2 * torsion < found[0] < 1.1 * torsion
    assert (0.2 * bending < found[1:]).all()
    assert (found[1:] < bending).all()


def test_stiffness_against_limits() -> None:
    case = car.case(limits=replace(car.LIMITS, torsion_min=2e6, bending_min=5e6))
    found = {"torsion_Nm_per_rad": 3e6, "bending_vertical_Nm_per_rad": 4e6, "bending_lateral_Nm_per_rad": 5e6}

    margins = {item.criterion: item.margin for item in stiffness_margins(found, case)}

    assert margins == pytest.approx(
        {"torsion stiffness": 0.5, "bending vertical stiffness": -0.2, "bending lateral stiffness": 0.0}
    )


def test_the_rear_face_moves_as_a_rigid_block_on_springs_would() -> None:
    """Thrust on a rigid block between equal faces: front and rear pads in series, F/(n k_n) each."""
    case = car.case(rear=car.FRONT)
    block = car.block(case, carried=())
    rigid = car.library(block, flexibility=1e-9 * car.library(block).flexibility)
    cases = car.load_cases(case, rear=np.array([[[-1e3, 0.0, 0.0, 0.0, 0.0, 0.0]]]))
    pads = install(cases, block, rigid, case)

    moved = rear_face_motion(cases, pads)["case 0"]

    assert moved[0] == pytest.approx(-1e3 / (4 * K_N) * 2, rel=1e-6)
