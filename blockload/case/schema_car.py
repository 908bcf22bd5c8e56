"""The case file's tables for the car itself: frame, bodies, axles, tyres, drive and engine."""

from typing import Any, Literal

from .tables import Table, Vector, quantity, table, words

Carrier = Literal["tub", "engine", "gearbox"]


class FrameTable(Table):
    """[frame]: how this file writes coordinates; everything is turned into the car's axes once, on reading."""

    axes: str | None = words(
        "the three axes in words; every place, direction and crank direction of this file follows them",
        default="x forward, y left, z up",
        source="ISO 8855",
        example='"x rearward, y right, z up"',
    )
    origin: Vector | None = quantity(
        "length_vector",
        "this frame's origin in the car frame (x forward, y left, z up, on the ground under the front axle)",
        default="(0, 0, 0) m",
        source="ISO 8855",
        example='"(0, 0, 0) m"',
        band=("-20 m", "20 m"),
    )
    points: str | None = words(
        "CSV file with name,x,y,z and a unit in the header, in this frame; any place may then be a point's name",
        frame="path",
        example='"hardpoints.csv"',
    )


class CarTable(Table):
    """[car]: short entry; the tub is what is left after engine, gearbox and corners."""

    mass: float = quantity(
        "mass", "mass of the whole car, ready to run", needed=True, example='"1100 kg"', band=("300 kg", "3000 kg")
    )
    front_weight_share: float = quantity(
        "ratio", "front axle's share of the weight", needed=True, example="0.45", band=("0.2", "0.8")
    )
    cg_height: float = quantity(
        "length",
        "height of the whole car's CG over the ground",
        needed=True,
        example='"0.35 m"',
        band=("0.1 m", "1.2 m"),
    )


class BodyTable(Table):
    """[bodies.NAME]: a rigid mass."""

    mass: float | None = quantity(
        "mass", "mass; asked for the engine, bounded for the gearbox", example='"185 kg"', band=("10 kg", "2500 kg")
    )
    cg: Vector | None = quantity(
        "length_vector", "centre of gravity", frame="place", example='"(-1.80, 0, 0.28) m"', band=("-10 m", "10 m")
    )
    inertia: Vector | None = quantity(
        "inertia_vector",
        "principal moments about its own CG, axes as the car's; estimated from a box and bounded when absent",
        frame="moments",
        example='"(9, 11, 12) kg*m^2"',
    )


class BodiesTable(Table):
    """[bodies]: the three bodies of the chain."""

    tub: BodyTable | None = table("everything ahead of the engine; leave out with [car]")
    engine: BodyTable | None = table("the engine, whole: block, heads, cranktrain, fluids, what is bolted to it")
    gearbox: BodyTable | None = table("gearbox, final drive and what they carry")


class CornerTable(Table):
    """[axles.NAME.corner]: the left unsprung mass, mirrored to the right."""

    mass: float | None = quantity(
        "mass", "one corner's unsprung mass; bounded when absent", example='"38 kg"', band=("5 kg", "150 kg")
    )
    cg: Vector | None = quantity(
        "length_vector",
        "its CG; the wheel centre when absent",
        frame="place",
        example='"(0, 0.80, 0.33) m"',
        band=("-10 m", "10 m"),
    )
    inertia: Vector | None = quantity(
        "inertia_vector",
        "principal moments about its own CG; estimated from a disc and bounded when absent",
        frame="moments",
        example='"(0.8, 1.2, 0.8) kg*m^2"',
    )


class LinkTable(Table):
    """[axles.NAME.links.LINK]: one two-force member of the left corner."""

    outboard: Vector = quantity(
        "length_vector",
        "end at the upright",
        needed=True,
        frame="place",
        example='"(0, 0.72, 0.46) m"',
        band=("-10 m", "10 m"),
    )
    inboard: Vector = quantity(
        "length_vector",
        "end at the chassis",
        needed=True,
        frame="place",
        example='"(0.2, 0.3, 0.43) m"',
        band=("-10 m", "10 m"),
    )
    carried_by: Carrier | None = words("body of the inboard end; the axle's carrier when absent", example='"gearbox"')
    meets: Literal["upright", "upper", "lower"] | None = words(
        "what the outboard end sits on: the upright, or a wishbone that a push or pull rod works on",
        default="upright",
        source="all six end at the upright",
        example='"lower"',
    )
    attachments: list[str] | None = words(
        "where the left and the right one enter the block, when the engine carries them", example='["pick_l", "pick_r"]'
    )


class LinksTable(Table):
    """[axles.NAME.links]: the set of six, left side."""

    upper_fore: LinkTable = table("upper wishbone, front leg", needed=True)
    upper_aft: LinkTable = table("upper wishbone, rear leg", needed=True)
    lower_fore: LinkTable = table("lower wishbone, front leg", needed=True)
    lower_aft: LinkTable = table("lower wishbone, rear leg", needed=True)
    steer: LinkTable = table("track rod or toe link", needed=True)
    pushrod: LinkTable = table("push or pull rod", needed=True)


class RockerTable(Table):
    """[axles.NAME.rocker]: what the left pushrod works on; its axis mirrors as an axial vector."""

    pivot: Vector = quantity(
        "length_vector", "pivot", needed=True, frame="place", example='"(0, 0.3, 0.47) m"', band=("-10 m", "10 m")
    )
    axis: Vector = quantity(
        "ratio_vector", "direction of the pivot axis", needed=True, frame="axial", example="[1, 0, 0]"
    )
    spring: list[Vector] | None = quantity(
        "length_vector",
        "spring: rocker end, body end",
        many=True,
        frame="place",
        example='["(0, 0.28, 0.54) m", "(0, 0.03, 0.56) m"]',
        band=("-10 m", "10 m"),
    )
    bar_link: list[Vector] | None = quantity(
        "length_vector",
        "anti-roll bar drop link: rocker end, bar-arm end",
        many=True,
        frame="place",
        example='["(0, 0.24, 0.49) m", "(0, 0.24, 0.38) m"]',
        band=("-10 m", "10 m"),
    )
    bar_bearing_y: float | None = quantity(
        "length", "y of the bar's left bearing", frame="y", example='"0.18 m"', band=("-2 m", "2 m")
    )
    heave: Vector | None = quantity(
        "length_vector",
        "left rocker's end of an element across both rockers",
        frame="place",
        example='"(0, 0.2, 0.55) m"',
        band=("-10 m", "10 m"),
    )
    heave_share: float | None = quantity(
        "ratio", "that element's part of the rockers' mean torque", example="0.3", band=("0", "1")
    )
    attachments: list[str] | None = words(
        "where the left and the right rocker enter the block, when the engine carries them",
        example='["rocker_l", "rocker_r"]',
    )


class AxleTable(Table):
    """[axles.NAME]: one axle."""

    x: float | None = quantity(
        "length",
        "axle position; the front one is the origin, the rear one is asked",
        frame="x",
        example='"-2.70 m"',
        band=("-10 m", "10 m"),
    )
    track: float | None = quantity(
        "length",
        "distance between the wheels' contact points",
        bound=("1.45 m", "1.6 m", "1.75 m"),
        source="unsourced: usual for a car of this kind",
        example='"1.62 m"',
        band=("1 m", "2.2 m"),
    )
    loaded_radius: float | None = quantity(
        "length",
        "height of the wheel centre",
        bound=("0.3 m", "0.33 m", "0.36 m"),
        source="unsourced: usual for a car of this kind",
        example='"0.33 m"',
        band=("0.2 m", "0.45 m"),
    )
    roll_centre_height: float | None = quantity(
        "length",
        "roll centre over the ground",
        bound=("0 mm", "40 mm", "80 mm"),
        source="unsourced: usual for a car of this kind",
        example='"40 mm"',
        band=("-0.3 m", "0.6 m"),
    )
    roll_stiffness: Any = quantity(
        "torsional_stiffness",
        "axle roll stiffness, springs and bar, or a percentage: this axle's share of both; only the split matters",
        share=True,
        example='"250 kNm/rad"',
        band=("5 kNm/rad", "10000 kNm/rad"),
    )
    bar_share: float | None = quantity(
        "ratio",
        "share of the axle's elastic roll couple in the anti-roll bar; used with a rocker",
        default="0.4",
        source="unsourced",
        example="0.40",
        band=("0", "1"),
    )
    ride_height: float | None = quantity(
        "length", "ride height at rest, where aero maps need it", example='"40 mm"', band=("-0.1 m", "0.5 m")
    )
    ride_stiffness: float | None = quantity(
        "stiffness", "vertical, per axle, wheel to body", example='"400 N/mm"', band=("5 kN/m", "50 kN/mm")
    )
    tyre_stiffness: float | None = quantity(
        "stiffness", "vertical, per axle", example='"600 N/mm"', band=("50 kN/m", "50 kN/mm")
    )
    carried_by: Carrier | None = words(
        "body that takes the axle's loads: tub in front and gearbox behind when absent", example='"gearbox"'
    )
    brakes: Literal["outboard", "inboard"] | None = words(
        "where the brake torque is taken; the faces do not depend on it",
        default="outboard",
        source="common practice, unsourced",
        example='"outboard"',
    )
    corner: CornerTable | None = table("the left unsprung mass")
    links: LinksTable | None = table("the six links of the left corner; without them it acts as one wrench")
    rocker: RockerTable | None = table("what the left pushrod works on")


class AxlesTable(Table):
    """[axles]: front and rear."""

    front: AxleTable | None = table("the front axle")
    rear: AxleTable = table("the rear axle", needed=True)


class ChassisTable(Table):
    """[chassis]: what lies between the axles as a whole."""

    torsion_stiffness: float | None = quantity(
        "torsional_stiffness",
        "torsional stiffness between the axles; it shifts the roll split, and a rigid chassis is taken when absent",
        example='"12 kNm/deg"',
        band=("0.2 kNm/deg", "500 kNm/deg"),
    )
    without_block: bool | None = words(
        "true where that is tub and gearbox alone: the block's own stiffness is then put in series once it is known",
        default="false",
        source="a chassis is measured with its engine in",
        example="true",
    )


class TyresTable(Table):
    """[tyres]: grip, to show how much of it a load case uses."""

    mu_x: float | None = quantity("ratio", "peak friction lengthwise", example="1.6", band=("0.05", "3"))
    mu_y: float | None = quantity("ratio", "peak friction sideways", example="1.6", band=("0.05", "3"))
    load_sensitivity: float | None = quantity(
        "per_force",
        "loss of friction per newton of wheel load, as a share of the friction at the reference load",
        example='"0.03 1/kN"',
        band=("0 1/kN", "0.3 1/kN"),
    )
    reference_load: float | None = quantity(
        "force",
        "wheel load at which mu_x and mu_y hold; asked with load_sensitivity",
        example='"4 kN"',
        band=("0.1 kN", "50 kN"),
    )


class DriveTable(Table):
    """[drive]: how the car is driven and braked."""

    axle: Literal["front", "rear"] | None = words(
        "driven axle", default="rear", source="a gearbox behind the engine drives the rear axle", example='"rear"'
    )
    brake_front_share: float | None = quantity(
        "ratio",
        "front axle's share of the tyre braking force",
        bound=("0.52", "0.58", "0.64"),
        source="unsourced: usual for a car of this kind",
        example="0.58",
        band=("0", "1"),
    )
    crank_direction: int | None = words(
        "sign of crank rotation about this file's x (right-hand rule): 1 or -1",
        frame="sign",
        default="-1",
        source="anticlockwise seen from the flywheel at the rear: SAE J824 standard rotation (from memory)",
        example="-1",
    )
    crank_inertia: float | None = quantity(
        "inertia",
        "crank, flywheel and clutch about the crank axis; asked with crank_acceleration",
        example='"0.05 kg*m^2"',
        band=("0.0005 kg*m^2", "2 kg*m^2"),
    )
    clutch_capacity: float | None = quantity(
        "moment", "torque at which the clutch slips", example='"800 Nm"', band=("20 Nm", "5000 Nm")
    )


class EngineTable(Table):
    """[engine]: figures of the engine, all optional."""

    bore: float | None = quantity("length", "cylinder bore", example='"90 mm"', band=("30 mm", "200 mm"))
    stroke: float | None = quantity("length", "piston stroke", example='"78 mm"', band=("20 mm", "250 mm"))
    cylinders: int | None = words("number of cylinders", example="8")
    bank_angle: float | None = quantity("angle", "angle between the banks (kept for later use)", example='"90 deg"')
    firing_order: list[int] | None = words("cylinders in firing order", example="[1, 8, 4, 3, 6, 5, 7, 2]")
    reciprocating_mass: float | None = quantity("mass", "per cylinder (kept for later use)", example='"0.55 kg"')
    rod_mass: float | None = quantity("mass", "per connecting rod (kept for later use)", example='"0.48 kg"')
    rod_length: float | None = quantity("length", "centre distance (kept for later use)", example='"150 mm"')
    peak_torque: float | None = quantity("moment", "peak crank torque", example='"450 Nm"', band=("10 Nm", "3000 Nm"))
    torque_curve: Any = words(
        'full load: pairs of speed and torque, [["3000 rpm", "350 Nm"], ...], or a CSV file (kept for later use)',
        example='[["3000 rpm", "350 Nm"], ["6000 rpm", "430 Nm"]]',
    )
    bmep: float | None = quantity(
        "pressure", "peak brake mean effective pressure", example='"13 bar"', band=("1 bar", "60 bar")
    )
    flywheel: bool | None = words(
        "false for an engine that revs freely", default="true", source="a flywheel and clutch", example="true"
    )
    charged: bool | None = words("true for a turbocharger or supercharger", example="false")
    max_speed: float | None = quantity(
        "angular_speed", "highest crank speed", example='"9000 rpm"', band=("500 rpm", "25000 rpm")
    )
    maker_consent: Literal["given", "not given", "not asked"] | None = words(
        "whether the engine's maker agrees to chassis loads through it",
        default="not asked",
        source="nothing was stated",
        example='"not asked"',
    )
