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
        common = {"radius": 0.019}
        pads += [
            PadShape(
                face="front",
                name=f"T{letter}",
                at=(sign * 0.240, 0.470),
                volume=head,
                boss=0.030,
                column=0.060,
                depth=0.150,
                tail=0.020,
                rib=Rib(toward=(-sign * UP, -UP), above=0.014, reach=0.0155, thickness=0.032, length=0.240),
                **common,
            ),
            PadShape(
                face="front",
                name=f"B{letter}",
                at=(sign * 0.170, 0.080),
                volume="sump",
                boss=0.026,
                column=0.050,
                depth=0.130,
                tail=0.018,
                **common,
            ),
            PadShape(
                face="rear",
                name=f"T{letter}",
                at=(sign * 0.250, 0.400),
                volume=head,
                boss=0.030,
                column=0.040,
                depth=0.110,
                tail=0.022,
                **common,
            ),
            PadShape(
                face="rear",
                name=f"M{letter}",
                at=(sign * 0.200, 0.240),
                volume="block",
                boss=0.026,
                column=0.050,
                depth=0.130,
                tail=0.019,
                rib=Rib(toward=(-sign, 0.0), above=0.014, reach=0.062, thickness=0.034, length=0.240),
                **common,
            ),
            PadShape(
                face="rear",
                name=f"B{letter}",
                at=(sign * 0.130, 0.060),
                volume="sump",
                boss=0.026,
                column=0.050,
                depth=0.130,
                tail=0.018,
                **common,
            ),
        ]
    return tuple(pads)


DEMO = VeeShape(
    front_x=-1.500,
    rear_x=-2.120,
    crank_z=0.200,
    vee_angle=math.pi / 2,
    cylinders_per_bank=4,
    bore=0.096,
    bore_spacing=0.118,
    bore_end=0.056,
    first_main=0.062,
    stagger=0.010,
    deck=0.210,
    bank_half_width=0.058,
    main_bore=0.066,
    bulkhead=0.022,
    cap_half_width=0.066,
    cap_depth=0.054,
    chamber_roof=0.088,
    chamber_top_z=0.278,
    valley_z=0.300,
    wall=0.009,
    end_wall=0.013,
    recess=0.006,
    nose_bore=0.080,
    tail_bore=0.104,
    skirt_front=0.174,
    skirt_rear=0.138,
    shoulder_z=0.245,
    parting_z=0.130,
    flange=0.012,
    sump_z=0.030,
    sump_floor=0.009,
    sump_rib=0.012,
    sump_rib_z=0.078,
    head_half_width=0.072,
    head_height=0.140,
    cam_floor=0.046,
    head_wall=0.009,
    cam_wall=0.014,
    port_radius=0.019,
    port_depth=0.045,
    port_height=0.026,
    pads=_pads(),
)

THIN = replace(DEMO, wall=0.005, head_wall=0.005, end_wall=0.008, bulkhead=0.014, cam_wall=0.008)

SHAPES = {"demo-v8": (DEMO, 0.040), "demo-v8-thin": (THIN, 0.040)}


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
