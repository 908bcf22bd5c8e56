"""The case file's tables for a block known as a beam between its faces: sections, thin walls, or measured stiffness."""

from .tables import Table, Vector, quantity, table, tables, words

_AREA = ("0.1 cm^2", "10000 cm^2")
_MOMENT = ("0.01 cm^4", "10000000 cm^4")
_ACROSS = ("-2 m", "2 m")


class WallTable(Table):
    """[block.beam.stations.NAME.walls.WALL]: one wall of a thin-walled section."""

    points: list[Vector] = quantity(
        "length_pair",
        "(y, z) along the wall's centre line; walls meet where their points coincide",
        needed=True,
        many=True,
        frame="yz",
        example='["(0.15, 0.10) m", "(0.15, 0.40) m", "(-0.15, 0.40) m", "(-0.15, 0.10) m"]',
        band=_ACROSS,
    )
    thickness: float = quantity("length", "thickness", needed=True, example='"6 mm"', band=("0.5 mm", "200 mm"))
    closed: bool | None = words("the last point joins the first", default="false", source="as written", example="true")


class StationTable(Table):
    """[block.beam.stations.NAME]: the section at one x, by its properties or by its walls; linear between stations."""

    x: float = quantity(
        "length", "where the section is", needed=True, frame="x", example='"-1.80 m"', band=("-10 m", "10 m")
    )
    area: float | None = quantity("area", "area; asked without walls", example='"80 cm^2"', band=_AREA)
    centroid: Vector | None = quantity(
        "length_pair",
        "(y, z) of the area's centroid; asked without walls",
        frame="yz",
        example='"(0, 0.26) m"',
        band=_ACROSS,
    )
    second_moments: Vector | None = quantity(
        "second_moment_pair",
        "(about y: integral of z^2, about z: integral of y^2), at the centroid; asked without walls",
        frame="pair",
        example='"(12000, 9000) cm^4"',
        band=_MOMENT,
    )
    product: float | None = quantity(
        "second_moment",
        "integral of y z at the centroid",
        frame="product",
        default="0 m^4",
        source="as for a section with a plane of symmetry",
        example='"0 cm^4"',
    )
    torsion_constant: float | None = quantity(
        "second_moment", "Saint-Venant's torsion constant; asked without walls", example='"8000 cm^4"', band=_MOMENT
    )
    shear_areas: Vector | None = quantity(
        "area_pair",
        "(along y, along z), shear force over G times shear strain; when absent that of a thin square tube, "
        "20(1+nu)/(48+39nu) of the area (Cowper, J. Appl. Mech. 33 (1966) 335)",
        frame="pair",
        example='"(35, 35) cm^2"',
        band=_AREA,
    )
    shear_centre: Vector | None = quantity(
        "length_pair", "(y, z) of the shear centre; the centroid when absent", frame="yz", example='"(0, 0.26) m"'
    )
    torsion_modulus: float | None = quantity(
        "section_modulus",
        "torque over its largest shear stress; without it torsion makes stiffness but no stress",
        example='"500 cm^3"',
        band=("0.1 cm^3", "1000000 cm^3"),
    )
    warping_constant: float | None = quantity(
        "warping_constant",
        "integral of the squared warping about the shear centre, for an open section: how far its faces hold it",
        default="0 m^6",
        source="as for a closed section: unsourced",
        example='"0 cm^6"',
        band=("0 cm^6", "1000000000 cm^6"),
    )
    fibres: list[Vector] | None = quantity(
        "length_pair",
        "(y, z) of the extreme fibres, in one order at all stations; without them no stress is judged",
        many=True,
        frame="yz",
        example='["(0.18, 0.46) m", "(-0.18, 0.46) m", "(0, 0.06) m"]',
        band=_ACROSS,
    )
    walls: dict[str, WallTable] = tables("instead of properties: the walls of a thin-walled section by name")


class MeasuredStiffnessTable(Table):
    """[block.beam.stiffness]: a supplier's measured stiffness between the faces, instead of stations."""

    torsion: float = quantity(
        "torsional_stiffness",
        "couple about x over the twist between the faces",
        needed=True,
        example='"150 kNm/deg"',
        band=("0.1 kNm/deg", "100000 kNm/deg"),
    )
    bending_vertical: float = quantity(
        "torsional_stiffness",
        "couple about y over the rotation between the faces",
        needed=True,
        example='"250 kNm/deg"',
        band=("0.1 kNm/deg", "100000 kNm/deg"),
    )
    bending_lateral: float = quantity(
        "torsional_stiffness",
        "couple about z over the rotation between the faces",
        needed=True,
        example='"250 kNm/deg"',
        band=("0.1 kNm/deg", "100000 kNm/deg"),
    )
    source: str = words("who measured it, and how", needed=True, example='"engine maker, rig test of 3 May"')


class PlaceTable(Table):
    """[block.beam.places] NAME = {...}: a point joined to the beam by a rigid arm."""

    at: Vector = quantity(
        "length_vector",
        "the point",
        needed=True,
        frame="place",
        example='"(-1.81, 0, 0.22) m"',
        band=("-10 m", "10 m"),
    )


class BeamTable(Table):
    """[block.beam]: the block as a beam between its faces; its one volume is named beam."""

    mass: float | None = quantity(
        "mass",
        "metal of the block, spread as the sections' area is; area times density when absent",
        example='"55 kg"',
        band=("1 kg", "1000 kg"),
    )
    stations: dict[str, StationTable] = tables("sections along x by name; one alone serves from face to face")
    stiffness: MeasuredStiffnessTable | None = table("or what was measured between the faces")
    places: dict[str, PlaceTable] = tables(
        "attachments besides the studs: where saddles, brackets and links meet the block; that of carried_on is "
        "half-way between the faces when absent",
        short="at",
        example='"(-1.81, 0, 0.22) m"',
    )
