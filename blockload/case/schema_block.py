"""The case file's tables for faces and studs, the block, how it is held, and what is asked of it."""

from typing import Any, Literal

from .schema_beam import BeamTable
from .schema_car import Carrier
from .tables import Table, Vector, quantity, table, tables, words

COMMON = "common practice, unsourced"


class StudTable(Table):
    """[faces.NAME] stud = {...}: what all studs of the face share; a stud's own table overrides it."""

    size: str | None = words("metric size, coarse pitch unless written M12x1.25; asked", example='"M12"')
    property_class: str | None = words("ISO 898-1 property class; asked", example='"12.9"')
    preload: Any = quantity(
        "force",
        "clamping force, or a percentage of the proof load; bounded when absent",
        share=True,
        example='"55 kN"',
        band=("0 kN", "1000 kN"),
    )
    preload_scatter: float | None = quantity(
        "ratio",
        "scatter of the preload",
        default="0.25",
        source="torque-controlled tightening: " + COMMON,
        example="0.25",
        band=("0", "0.9"),
    )
    load_factor: float | None = quantity(
        "ratio",
        "share of an axial load that the stud feels while clamped",
        default="0.2",
        source=COMMON,
        example="0.20",
        band=("0", "1"),
    )
    friction: float | None = quantity(
        "ratio",
        "friction between the faces",
        default="0.15",
        source="dry machined metal: " + COMMON,
        example="0.15",
        band=("0.05", "3"),
    )
    grip: float | None = quantity(
        "length", "clamped length; 3 diameters when absent", example='"36 mm"', band=("2 mm", "500 mm")
    )
    engagement: float | None = quantity("length", "length of thread engaged (kept for later use)", example='"24 mm"')
    hole: float | None = quantity("length", "clearance hole (kept for later use)", example='"13 mm"')
    washer: float | None = quantity("length", "washer diameter (kept for later use)", example='"24 mm"')
    shear: Literal["friction", "dowel", "close_fit"] | None = words(
        "what carries shear (kept for later use)", example='"friction"'
    )


class OneStudTable(StudTable):
    """[faces.NAME.studs] NAME = {...}: one stud."""

    at: Vector = quantity(
        "length_pair",
        "(y, z) of the stud",
        needed=True,
        frame="yz",
        example='"(0.24, 0.45) m"',
        band=("-1.5 m", "1.5 m"),
    )


class FaceTable(Table):
    """[faces.NAME]: a plane across the car with its studs."""

    x: float = quantity(
        "length", "where the plane is", needed=True, frame="x", example='"-1.50 m"', band=("-10 m", "10 m")
    )
    stud: StudTable | None = table("what all studs of the face share; the front face's when absent at the rear")
    mirrored: bool | None = words(
        "each stud named ...L also stands for one named ...R on the right",
        default="false",
        source="as written",
        example="true",
    )
    studs: dict[str, OneStudTable] = tables(
        'name = "(y, z) m", or name = { at = ..., size = ... }', short="at", example='"(0.24, 0.45) m"'
    )


class FacesTable(Table):
    """[faces]: front (tub to engine) and rear (engine to gearbox)."""

    front: FaceTable = table("tub to engine", needed=True)
    rear: FaceTable = table("engine to gearbox", needed=True)


class MaterialTable(Table):
    """[block.materials] VOLUME = {...}: a grade, or a material of your own."""

    grade: str | None = words("grade of the materials list", example='"EN AC-42100 KT6"')
    temperature: float | None = quantity(
        "temperature", "metal temperature of this volume", example='"110 degC"', band=("150 K", "1000 K")
    )
    youngs_modulus: float | None = quantity(
        "pressure", "Young's modulus", example='"72 GPa"', band=("1 GPa", "500 GPa")
    )
    poissons_ratio: float | None = quantity("ratio", "Poisson's ratio", example="0.33", band=("0", "0.499"))
    density: float | None = quantity("density", "density", example='"2680 kg/m^3"', band=("500 kg/m^3", "20000 kg/m^3"))
    thermal_expansion: float | None = quantity(
        "thermal_expansion", "linear expansion", example='"21.5e-6 1/K"', band=("-1e-6 1/K", "1e-4 1/K")
    )
    yield_strength: float | None = quantity(
        "pressure", "in the casting, at its temperature", example='"190 MPa"', band=("1 MPa", "3000 MPa")
    )
    tensile_strength: float | None = quantity(
        "pressure", "in the casting, at its temperature", example='"240 MPa"', band=("1 MPa", "3000 MPa")
    )
    source: str | None = words("where these properties come from", example='"supplier data sheet"')


class CarriedTable(Table):
    """[block.carried.NAME]: a mass the mesh does not have."""

    mass: float = quantity("mass", "mass", needed=True, example='"14 kg"', band=("0.001 kg", "1000 kg"))
    cg: Vector = quantity(
        "length_vector", "its CG", needed=True, frame="place", example='"(-1.8, 0, 0.5) m"', band=("-10 m", "10 m")
    )
    inertia: Vector | None = quantity(
        "inertia_vector", "principal moments about its CG; 0 when absent", frame="moments", example='"(1, 1, 1) kg*m^2"'
    )
    on: str = words("attachment that carries it", needed=True, example='"plenum"')


class AttachmentsTable(Table):
    """[block.attachments]: stud name = face-set name or pattern; several matches are united."""

    front: dict[str, str] = tables("tub pads", example='"pad_front_*"')
    rear: dict[str, str] = tables("gearbox pads", example='"pad_rear_*"')
    other: dict[str, str] = tables("bearing saddles and whatever else loads enter by", example='"main_*"')


class BlockTable(Table):
    """[block]: where the block comes from and how its names meet the car's."""

    use: Literal["mesh", "beam"] | None = words(
        "which description is judged where several are given; the mesh when absent", example='"mesh"'
    )
    mesh: str | None = words("mesh file", frame="path", example='"../meshes/block.vtu"')
    mesh_unit: Literal["m", "mm", "cm", "in"] | None = words(
        "unit of the mesh's coordinates", default="m", source="SI", example='"mm"'
    )
    turn: Vector | None = quantity(
        "angle_vector",
        "turns the mesh into the car's axes: p_car = Rz Ry Rx (unit p) + place",
        default="(0, 0, 0) deg",
        source="as meshed",
        example='"(0, 0, 180) deg"',
    )
    place: Vector | None = quantity(
        "length_vector",
        "where the mesh's origin sits in the car, after turning",
        frame="place",
        default="(0, 0, 0) m",
        source="as meshed",
        example='"(-1.50, 0, 0.10) m"',
        band=("-10 m", "10 m"),
    )
    carried_on: str | None = words(
        "attachment that takes the engine mass, CG and inertia the mesh does not have",
        default="main_bearings",
        source="the cranktrain is most of it",
        example='"main_bearings"',
    )
    carried: dict[str, CarriedTable] = tables("parts known better")
    materials: dict[str, MaterialTable] = tables("volume name or pattern = grade, or a table", short="grade")
    attachments: AttachmentsTable | None = table("names of the mesh's face sets by stud")
    shape: Any = words("dimensions of a shape (kept for later use)")
    beam: BeamTable | None = table("the block as a beam between its faces; it can rule a block out, never show it")
    cad: str | None = words("STEP file (kept for later use)", frame="path")


class PadTable(Table):
    """[installation] pad_stiffness = {...}."""

    normal: float = quantity(
        "stiffness", "per pad, along x", needed=True, example='"800 kN/mm"', band=("1 kN/mm", "100000 kN/mm")
    )
    tangential: float = quantity(
        "stiffness", "per pad, across", needed=True, example='"400 kN/mm"', band=("0.1 kN/mm", "100000 kN/mm")
    )


class InstallationTable(Table):
    """[installation]: how the block is held."""

    pad_stiffness: PadTable | None = table(
        "per pad, spread over its area; estimated from the studs and bounded by 1/10 and 10 when absent"
    )
    tub: Any = words(
        '"rigid", or a 3n x 3n stiffness matrix in stud order [N/m], in the car\'s axes',
        default="rigid",
        source="unsourced",
        example='"rigid"',
    )
    second_paths: str | None = words('"none": the statement that nothing else joins the bodies', example='"none"')


class EndTable(Table):
    """One end of a second load path."""

    body: Carrier = words("tub, engine or gearbox", needed=True, example='"tub"')
    at: Vector = quantity(
        "length_vector", "the point", needed=True, frame="place", example='"(-1.4, 0.3, 0.5) m"', band=("-10 m", "10 m")
    )


class PathTable(Table):
    """[paths.NAME]: a second load path, as a spring along its line."""

    from_: EndTable = table("one end", needed=True, alias="from")
    to: EndTable = table("the other end", needed=True)
    stiffness: float = quantity(
        "stiffness", "along the line", needed=True, example='"50 kN/mm"', band=("0.01 kN/mm", "10000 kN/mm")
    )


class LimitsTable(Table):
    """[limits]: factors and allowables."""

    yield_factor: float | None = quantity(
        "ratio",
        "on limit load against yield",
        default="1.25",
        source="estimated loads: " + COMMON,
        example="1.25",
        band=("1", "10"),
    )
    rupture_factor: float | None = quantity(
        "ratio",
        "on limit load against rupture",
        default="1.5",
        source="14 CFR 25.303 (from memory)",
        example="1.5",
        band=("1", "10"),
    )
    casting_factor: float | None = quantity(
        "ratio",
        "further factor for castings, on top of the EN 1706 knock-down",
        default="1.0",
        source="qualified process: 14 CFR 25.621 (from memory)",
        example="1.0",
        band=("1", "10"),
    )
    separation_factor: float | None = quantity(
        "ratio", "against a joint opening", default="1.5", source=COMMON, example="1.5", band=("1", "10")
    )
    slip_factor: float | None = quantity(
        "ratio", "against a joint slipping", default="1.5", source=COMMON, example="1.5", band=("1", "10")
    )
    bolt_factor: float | None = quantity(
        "ratio",
        "on stud tension against proof",
        default="1.25",
        source="estimated loads: " + COMMON,
        example="1.25",
        band=("1", "10"),
    )
    torsion_min: float | None = quantity(
        "torsional_stiffness",
        "least torsional stiffness, face to face",
        example='"40 kNm/deg"',
        band=("0.1 kNm/deg", "10000 kNm/deg"),
    )
    bending_min: float | None = quantity(
        "torsional_stiffness",
        "least bending stiffness, face to face",
        example='"60 kNm/deg"',
        band=("0.1 kNm/deg", "10000 kNm/deg"),
    )
    twist_share: float | None = quantity(
        "ratio",
        "the engine's share of the car's hub-to-hub twist that is allowed",
        example='"15 %"',
        band=("0.001", "1"),
    )
    stud_axial: float | None = quantity(
        "force", "a supplier's own limit of stud tension", example='"45 kN"', band=("0.1 kN", "1000 kN")
    )
    stud_shear: float | None = quantity(
        "force", "a supplier's own limit of stud shear", example='"20 kN"', band=("0.1 kN", "1000 kN")
    )
    face_moment: float | None = quantity(
        "moment", "a supplier's own limit of a face's moment", example='"15 kNm"', band=("0.01 kNm", "1000 kNm")
    )
    source: str | None = words("where the supplier's limits come from", example='"engine maker, letter of 3 May"')
    life_distance: float | None = quantity("length", "distance to survive (kept for later use)", example='"10000 km"')
    bearing_line: float | None = quantity(
        "length", "allowed bearing line error (kept for later use)", example='"12 um"'
    )
    bore_shape: Any = words("allowed bore distortion (kept for later use)")


class KnownTable(Table):
    """[known."KEY"]: how well one number is known."""

    basis: Literal["measured", "drawing", "estimate", "guess"] = words(
        "measured, drawing, estimate or guess", needed=True, example='"drawing"'
    )
    source: str | None = words("where it comes from", default="", source="unsourced", example='"weighed, 2 May"')
    band: float | None = quantity("ratio", "half width as a share of the value", example='"5 %"', band=("0", "1"))


class ConceptTable(Table):
    """[concept]: what is chosen before there is a block."""

    grade: str | None = words("grade of the materials list the block would be made of", example='"EN AC-42100 KT6"')
