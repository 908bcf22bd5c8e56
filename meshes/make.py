"""Make the demo meshes: `python meshes/make.py [--finer H] [--output DIR] [NAME ...]`.

An invented 90-degree V8 for the invented car of cases/demo.toml, and the same block with thinner walls. Each mesh is
written as NAME.vtu (points in mm) with NAME.json beside it: dimensions, contents, settings, versions.
"""

from __future__ import annotations

import argparse
import json
import math
import sys
from dataclasses import replace
from pathlib import Path

from blockload.block.recipe import mesh_shape
from blockload.block.shape import PadShape, Rib, VeeShape

UP = math.sqrt(0.5)


def _pads() -> tuple[PadShape, ...]:
    pads = []
    for letter, side, sign in (("L", "left", 1.0), ("R", "right", -1.0)):
        head = f"head_{side}"
        spine = Rib(toward=(-sign * UP, -UP), above=0.008, reach=0.011, thickness=0.028, length=0.260)
        ear = Rib(toward=(-sign, 0.0), above=0.008, reach=0.078, thickness=0.030, length=0.195)
        pads += [
            _pad("front", f"T{letter}", (sign * 0.240, 0.470), head, boss=0.030, depth=0.188, tail=0.012, rib=spine),
            _pad("front", f"B{letter}", (sign * 0.170, 0.080), "sump", boss=0.028, depth=0.140),
            _pad("rear", f"T{letter}", (sign * 0.250, 0.400), head, boss=0.032, depth=0.130),
            _pad("rear", f"M{letter}", (sign * 0.200, 0.240), "block", boss=0.028, depth=0.150, rib=ear),
            _pad("rear", f"B{letter}", (sign * 0.130, 0.060), "sump", boss=0.029, depth=0.140),
        ]
    return tuple(pads)


def _pad(
    face: str,
    name: str,
    at: tuple[float, float],
    volume: str,
    *,
    boss: float,
    depth: float,
    tail: float = 0.018,
    rib: Rib | None = None,
) -> PadShape:
    return PadShape(
        face=face,
        name=name,
        at=at,
        volume=volume,
        radius=0.019,
        boss=boss,
        column=0.030,
        depth=depth,
        tail=tail,
        rib=rib,
    )


def _slight(pad: PadShape) -> PadShape:
    """Return the pad on a short boss and a thin rib."""
    rib = None if pad.rib is None else replace(pad.rib, thickness=0.6 * pad.rib.thickness, length=0.6 * pad.rib.length)
    return replace(pad, radius=0.012, boss=0.0135, column=0.012, tail=0.013, depth=0.024, rib=rib)


DEMO = VeeShape(
    front_x=-1.500,
    rear_x=-2.120,
    crank_z=0.200,
    vee_angle=math.pi / 2,
    cylinders_per_bank=4,
    bore=0.100,
    bore_spacing=0.118,
    bore_end=0.050,
    first_main=0.062,
    stagger=0.010,
    deck=0.202,
    bank_half_width=0.057,
    deck_plate=0.012,
    main_bore=0.066,
    bulkhead=0.014,
    cap_half_width=0.066,
    cap_depth=0.054,
    chamber_roof=0.096,
    chamber_top_z=0.278,
    valley_z=0.294,
    wall=0.007,
    end_wall=0.010,
    recess=0.006,
    nose_bore=0.080,
    tail_bore=0.104,
    skirt_front=0.174,
    skirt_rear=0.138,
    shoulder_z=0.245,
    parting_z=0.130,
    flange=0.012,
    side_rib=0.008,
    sump_z=0.030,
    sump_floor=0.008,
    sump_rib=0.010,
    sump_rib_z=0.078,
    head_half_width=0.072,
    head_height=0.152,
    cam_floor=0.042,
    cam_chamfer=0.022,
    head_wall=0.008,
    cam_wall=0.010,
    port_wide=0.050,
    port_tall=0.020,
    port_at=0.016,
    port_depth=0.040,
    pads=_pads(),
)
THIN = replace(
    DEMO,
    wall=0.0017,
    head_wall=0.0035,
    end_wall=0.004,
    bulkhead=0.009,
    cam_wall=0.006,
    sump_floor=0.005,
    pads=tuple(_slight(pad) for pad in DEMO.pads),
)

SHAPES = {"demo-v8": (DEMO, 0.080), "demo-v8-thin": (THIN, 0.080)}


def main(arguments: list[str]) -> int:
    """Mesh the shapes asked for and write them."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("names", nargs="*", default=list(SHAPES), metavar="NAME", help=", ".join(SHAPES))
    parser.add_argument("--finer", type=float, metavar="H", help="element size in mm for a finer mesh (NAME-fine)")
    parser.add_argument("--output", type=Path, default=Path(__file__).parent)
    options = parser.parse_args(arguments)
    for name in options.names:
        shape, size = SHAPES[name]
        finer = options.finer is not None
        made = mesh_shape(shape, size=1e-3 * options.finer if finer else size, coarse=not finer)
        stem = f"{name}-fine" if finer else name
        made.mesh.scaled(1e3).save(options.output / f"{stem}.vtu")
        (options.output / f"{stem}.json").write_text(json.dumps(made.report, indent=1, sort_keys=True) + "\n")
        print(f"{stem}: {made.report['nodes']} nodes, {made.report['elements']} elements")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
