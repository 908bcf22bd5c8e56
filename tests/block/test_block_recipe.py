"""The recipe: the same shape gives the same mesh, other shapes give valid ones, impossible shapes are refused."""

from __future__ import annotations

import importlib.util
import math
from dataclasses import asdict, replace
from pathlib import Path

import numpy as np
import pytest

from blockload.block.curved import determinant_bound
from blockload.block.recipe import mesh_shape
from blockload.block.shape import shape_from
from blockload.errors import BlockError

pytest.importorskip("netgen", reason="the mesher has no wheel on this platform")

_spec = importlib.util.spec_from_file_location("make", Path(__file__).parents[2] / "meshes" / "make.py")
assert _spec is not None
assert _spec.loader is not None
make = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(make)


@pytest.mark.slow
def test_the_same_shape_gives_the_same_mesh() -> None:
    one, other = (mesh_shape(make.DEMO, size=0.08, coarse=True) for _ in range(2))

    np.testing.assert_array_equal(one.mesh.doflocs, other.mesh.doflocs)
    np.testing.assert_array_equal(one.mesh.t, other.mesh.t)
    assert one.report == other.report
    for name, facets in one.mesh.boundaries.items():
        np.testing.assert_array_equal(facets, other.mesh.boundaries[name])


@pytest.mark.slow
def test_another_engine_meshes_with_every_name() -> None:
    """Three cylinders a bank at 75 degrees: bores, chambers and mains follow; every element stays valid."""
    shape = replace(make.DEMO, cylinders_per_bank=3, vee_angle=math.radians(80), bore_spacing=0.150, pads=())
    made = mesh_shape(shape, size=0.06, coarse=True)
    elements = made.mesh.dofs.element_dofs.T

    assert {f"bore_{bank}{i}" for bank in "LR" for i in (1, 2, 3)} <= set(made.mesh.boundaries)
    assert {f"chamber_{bank}{i}" for bank in "LR" for i in (1, 2, 3)} <= set(made.mesh.boundaries)
    assert "main_4" in made.mesh.boundaries
    assert "main_5" not in made.mesh.boundaries
    assert np.all(determinant_bound(made.mesh.doflocs.T, elements) > 0)
    cad, meshed = (sum(made.report[key].values()) for key in ("cad_volume_m3", "mesh_volume_m3"))
    assert meshed == pytest.approx(cad, rel=2e-3)


def test_the_mesher_is_stopped_at_its_time_limit() -> None:
    with pytest.raises(BlockError, match="no mesh within 0 s"):
        mesh_shape(make.DEMO, size=0.06, time_limit=0.05)


def test_a_shape_survives_being_written_and_read() -> None:
    assert shape_from(asdict(make.DEMO)) == make.DEMO


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"bore": 0.116}, "wall between bores"),
        ({"bank_half_width": 0.051}, "outer bore wall"),
        ({"first_main": 0.020}, "before the first main"),
        ({"vee_angle": math.radians(20)}, "vee_angle"),
        ({"wall": -0.01}, "positive"),
        ({"deck": math.nan}, "positive"),
        ({"pads": make.DEMO.pads + make.DEMO.pads[:1]}, "share a name"),
    ],
)
def test_impossible_dimensions_are_refused(changes: dict, said: str) -> None:
    with pytest.raises(BlockError, match=said):
        replace(make.DEMO, **changes)
