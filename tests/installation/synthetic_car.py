"""A made-up installed engine for tests: a plain brick with pads, a random elastic body, load cases in balance.

Nothing here comes from the rooms under test: the flexibility is any symmetric positive matrix, and the front face's
wrench is closed by hand from the engine's own equilibrium.
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
from skfem import MeshTet, MeshTet2

from blockload.block.model import Attachment, Block, CarriedMass, Material
from blockload.car.model import FaceLoads, LoadCases, LocalLoad
from blockload.case.model import (
    Axle,
    BlockSpec,
    Body,
    Case,
    Drive,
    Engine,
    Face,
    Installation,
    Limits,
    Manoeuvre,
    SecondPath,
    Stud,
)
from blockload.response.model import Library

FRONT_X, REAR_X = -1.5, -2.1
FRONT = {"TL": (0.24, 0.47), "TR": (-0.24, 0.47), "BL": (0.17, 0.08), "BR": (-0.17, 0.08)}
REAR = {"TL": (0.25, 0.40), "TR": (-0.25, 0.40), "BL": (0.13, 0.06), "BR": (-0.13, 0.06)}
ENGINE = Body(name="engine", mass=190.0, cg=np.array([-1.80, 0.0, 0.27]), inertia=np.diag([9.0, 11.0, 12.0]))
LIMITS = Limits(
    yield_factor=1.25, rupture_factor=1.5, casting_factor=1.0, separation_factor=1.5, slip_factor=1.5, bolt_factor=1.5
)
METAL = Material(
    name="test alloy",
    youngs_modulus=70e9,
    poissons_ratio=0.33,
    density=2700.0,
    thermal_expansion=21e-6,
    yield_strength=147e6,
    tensile_strength=203e6,
    bar_yield_strength=210e6,
    bar_tensile_strength=290e6,
    casting_knock_down=0.7,
    temperature=293.15,
    temperature_factor=1.0,
    cast=True,
    sources={},
)


def studs(places: Mapping[str, tuple[float, float]]) -> tuple[Stud, ...]:
    return tuple(
        Stud(
            name=name,
            at=np.array(at),
            size="M12",
            property_class="12.9",
            preload=60e3,
            preload_scatter=0.25,
            load_factor=0.2,
            friction=0.15,
        )
        for name, at in places.items()
    )


def case(
    *,
    front: Mapping[str, tuple[float, float]] = FRONT,
    rear: Mapping[str, tuple[float, float]] = REAR,
    pad_stiffness: tuple[tuple[str, float, float], ...] = (("given", 8e8, 4e8),),
    tub: np.ndarray | None = None,
    paths: tuple[SecondPath, ...] = (),
    limits: Limits = LIMITS,
    manoeuvres: tuple[str, ...] = (),
    second_paths: str | None = "none",
) -> Case:
    corner = Body(name="corner", mass=40.0, cg=np.array([0.0, 0.79, 0.33]), inertia=np.eye(3))
    axles = {
        name: Axle(
            name=name,
            x=x,
            track=1.6,
            loaded_radius=0.33,
            roll_centre_height=0.03,
            roll_stiffness=250e3,
            bar_share=0.4,
            carried_by=on,
            brakes="outboard",
            corner=corner,
        )
        for name, x, on in (("front", 0.0, "tub"), ("rear", -2.75, "gearbox"))
    }
    nothing: Mapping[str, str] = {}
    spec = BlockSpec(
        mesh=Path("none"),
        mesh_unit=1.0,
        turn=np.zeros(3),
        place=np.zeros(3),
        carried_on="mains",
        carried=(),
        materials=(),
        front=nothing,
        rear=nothing,
        other=nothing,
    )
    return Case(
        path=Path("synthetic.toml"),
        title="synthetic",
        sha256="0" * 64,
        document={},
        overrides=(),
        air_density=1.2,
        gravity=9.80665,
        bodies={"engine": ENGINE},
        axles=axles,
        devices=(),
        aero_total=None,
        drive=Drive(axle="rear", brake_front_share=0.58, crank_direction=-1, crank_inertia=None),
        engine=Engine(),
        tyre_friction=1.7,
        faces={
            "front": Face(name="front", x=FRONT_X, studs=studs(front)),
            "rear": Face(name="rear", x=REAR_X, studs=studs(rear)),
        },
        manoeuvres=tuple(Manoeuvre(name=name, acceleration=np.zeros(3), overall_ratio=4.0) for name in manoeuvres),
        block=spec,
        installation=Installation(
            pad_stiffness=pad_stiffness, pad_stiffness_given=True, tub=tub, second_paths=second_paths
        ),
        paths=paths,
        limits=limits,
        engine_maker_consent="not asked",
        known={},
        bounds=(),
        defaults=(),
        checks=(),
    )


def brick(cells: tuple[int, int, int] = (3, 2, 2)) -> MeshTet2:
    """A brick between the faces, as 10-node tetrahedra."""
    axes = (
        np.linspace(REAR_X, FRONT_X, cells[0] + 1),
        np.linspace(-0.26, 0.26, cells[1] + 1),
        np.linspace(0.04, 0.5, cells[2] + 1),
    )
    return MeshTet2.from_mesh(MeshTet.init_tensor(*axes))


def pad(name: str, kind: str, centroid: tuple[float, float, float], normal: tuple[float, float, float]) -> Attachment:
    """A round pad of 40 mm on no facets in particular."""
    area = np.pi * 0.02**2
    n = np.array(normal)
    return Attachment(
        name=name,
        kind=kind,
        sets=(name,),
        facets=np.array([0]),
        area=area,
        centroid=np.array(centroid),
        normal=n,
        moments=(np.eye(3) - np.outer(n, n)) * area * 0.02**2 / 4.0,
    )


def block(of: Case, *, carried: tuple[CarriedMass, ...] | None = None) -> Block:
    """The brick with a pad at every stud, mains at the bottom, and the rest of the engine's mass on them."""
    mesh = brick()
    size = np.array([FRONT_X - REAR_X, 0.52, 0.46])
    cg = np.array([(FRONT_X + REAR_X) / 2, 0.0, 0.27])
    mass = 50.0
    inertia = mass / 12.0 * np.diag((size**2).sum() - size**2)
    pads = [pad(s.name, "front", (FRONT_X, *s.at), (1.0, 0.0, 0.0)) for s in of.faces["front"].studs]
    pads += [pad(s.name, "rear", (REAR_X, *s.at), (-1.0, 0.0, 0.0)) for s in of.faces["rear"].studs]
    mains = pad("mains", "other", (-1.8, 0.0, 0.14), (0.0, 0.0, -1.0))
    if carried is None:
        carried = (rest_of_engine(mass, cg, inertia),)
    return Block(
        mesh=mesh,
        volumes=("block",),
        volume_of=np.zeros(mesh.nelements, dtype=np.int64),
        materials={"block": METAL},
        attachments=(*pads, mains),
        sha256="0" * 64,
        mass=mass,
        cg=cg,
        inertia=inertia,
        metadata={},
        carried=carried,
    )


def rest_of_engine(mass: float, cg: np.ndarray, inertia: np.ndarray) -> CarriedMass:
    """What is left of the engine: mass, first and second moments subtracted about the engine's cg."""
    rest = ENGINE.mass - mass
    place = (ENGINE.mass * ENGINE.cg - mass * cg) / rest

    def parallel(m: float, at: np.ndarray) -> np.ndarray:
        d = at - ENGINE.cg
        return m * (d @ d * np.eye(3) - np.outer(d, d))

    own = ENGINE.inertia - inertia - parallel(mass, cg) - parallel(rest, place)
    return CarriedMass(name="rest of the engine", attachment="mains", mass=rest, cg=place, inertia=own)


def library(of: Block, *, flexibility: np.ndarray | None = None, seed: int = 1) -> Library:
    """A random elastic body: symmetric, positive, of an engine block's order of magnitude."""
    count = 6 * len(of.attachments)
    lengths = np.tile([1.0, 1.0, 1.0, 0.1, 0.1, 0.1], len(of.attachments))
    if flexibility is None:
        noise = np.random.default_rng(seed).normal(size=(count, count))
        flexibility = 1e-9 * (noise @ noise.T / count + np.eye(count)) / np.outer(lengths, lengths)
    nodes = of.mesh.doflocs.shape[1]
    empty = np.zeros((0, 3), dtype=np.int64)
    return Library(
        key="synthetic",
        attachments=tuple((item.kind, item.name) for item in of.attachments),
        volumes=of.volumes,
        centroids=np.array([item.centroid for item in of.attachments]),
        mass=of.mass,
        cg=of.cg,
        inertia=of.inertia,
        flexibility=flexibility,
        thermal_motion=1e-6 * np.random.default_rng(seed + 1).normal(size=(count, 1)),
        motion=np.zeros((3 * nodes, count + 1)),
        surface_nodes=np.array([], dtype=np.int64),
        surface_points=np.zeros((0, 3)),
        surface_triangles=empty,
        triangle_volume=np.array([], dtype=np.int64),
        entry_node=np.array([], dtype=np.int64),
        entry_volume=np.array([], dtype=np.int64),
        stress=np.zeros((0, 6, count + 1)),
        checks={},
        solver="none",
        from_cache=False,
    )


def load_cases(
    of: Case,
    *,
    rear: np.ndarray,
    acceleration: np.ndarray | None = None,
    rotation: np.ndarray | None = None,
    crank: np.ndarray | None = None,
    engine_loads: tuple[LocalLoad, ...] = (),
    **other: Any,
) -> LoadCases:
    """Load cases with this rear face wrench (C, S, 6); the front face closes the engine's equilibrium."""
    shape = rear.shape[:2]
    zero = np.zeros((*shape, 3))
    acceleration = zero if acceleration is None else acceleration
    rotation = zero if rotation is None else rotation
    crank = np.zeros(shape) if crank is None else crank
    places = {
        name: np.array([(of.faces[name].x, *stud.at) for stud in of.faces[name].studs]) for name in ("front", "rear")
    }
    centre = {name: at.mean(axis=0) for name, at in places.items()}
    force = -ENGINE.mass * acceleration
    moment = -rotation @ ENGINE.inertia + np.cross(ENGINE.cg, force)
    moment[..., 0] += crank
    for load in engine_loads:
        force = force + load.force
        moment = moment + load.moment + np.cross(load.at, load.force)
    force = force + rear[..., :3]
    moment = moment + rear[..., 3:] + np.cross(centre["rear"], rear[..., :3])
    front = np.concatenate([-force, -moment - np.cross(centre["front"], -force)], axis=-1)
    values: dict[str, Any] = {
        "names": tuple(f"case {i}" for i in range(shape[0])),
        "sources": tuple(f"source {i}" for i in range(shape[1])),
        "speed": np.zeros(shape[0]),
        "downforce": np.zeros(shape[0]),
        "drag": np.zeros(shape[0]),
        "acceleration": zero,
        "angular_acceleration": rotation,
        "engine_acceleration": acceleration,
        "wheel_force": np.ones((*shape, 4, 3)),
        "crank_torque": np.zeros(shape[0]),
        "crank_couple": crank,
        "faces": {
            "front": face_loads("front", places["front"], front, of, 1.0),
            "rear": face_loads("rear", places["rear"], rear, of, -1.0),
        },
        "engine_loads": engine_loads,
        "terms": (),
        "residual": np.zeros(shape[0]),
        "front_rear_gap": np.zeros(shape[0]),
        "omega_squared": np.zeros(shape[0]),
    }
    return LoadCases(**{**values, **other})


def face_loads(name: str, at: np.ndarray, wrench: np.ndarray, of: Case, sign: float) -> FaceLoads:
    """Rigid face, equal studs, by least squares: the shortest set of axial and shear forces in balance."""
    d = at - at.mean(axis=0)
    axial_map = np.stack([np.ones(len(d)), d[:, 2], -d[:, 1]])
    axial = wrench[..., [0, 4, 5]] @ np.linalg.pinv(axial_map).T
    polar = (d[:, 1:] ** 2).sum()
    turn = np.stack([-d[:, 2], d[:, 1]], axis=1)
    shear = wrench[..., None, 1:3] / len(d) + wrench[..., 3, None, None] * turn / polar
    return FaceLoads(
        name=name,
        reference=at.mean(axis=0),
        studs=tuple(stud.name for stud in of.faces[name].studs),
        stud_at=at,
        wrench=wrench,
        stud_axial=sign * axial,
        stud_shear=shear,
    )


def random_cases(of: Case, *, count: int = 5, sources: int = 4, seed: int = 3, **other: Any) -> LoadCases:
    rng = np.random.default_rng(seed)
    shape = (count, sources)
    return load_cases(
        of,
        rear=rng.normal(size=(*shape, 6)) * [4e3, 4e3, 4e3, 1e3, 1e3, 1e3],
        acceleration=rng.normal(size=(*shape, 3)) * 20.0,
        rotation=rng.normal(size=(*shape, 3)) * 20.0,
        crank=rng.normal(size=shape) * 300.0,
        **other,
    )
