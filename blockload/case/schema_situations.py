"""The case file's tables for standard situations: points of the car, performance, catalogue, envelope and laps."""

from typing import Literal

from .schema_car import Carrier
from .tables import Table, Vector, quantity, table, tables, words

Lifts = Literal["front", "rear", "left", "right", "FL", "FR", "RL", "RR"]


class PointTable(Table):
    """A place of a body where something other than a tyre loads the car."""

    at: Vector = quantity(
        "length_vector",
        "the place",
        needed=True,
        frame="place",
        example='"(-1.45, 0, 1.00) m"',
        band=("-10 m", "10 m"),
    )
    on: Carrier = words("body it belongs to: tub, engine or gearbox", needed=True, example='"tub"')
    attachment: str | None = words("where it enters the block, for a point of the engine", example='"lifting_eye"')


class JackTable(PointTable):
    """[points.jacks.NAME]: where the car is jacked up."""

    lifts: Lifts = words("wheels it takes off the ground", needed=True, example='"rear"')


class PointsTable(Table):
    """[points]: places the standard situations ask for; one whose point is missing is listed as left out."""

    hoop: PointTable | None = table("top of the main roll hoop: crane hook and roll-structure load")
    impact: PointTable | None = table("where the rear impact structure meets the car")
    rig_load: PointTable | None = table("where the bending rig presses; the tub's CG when absent")
    jacks: dict[str, JackTable] = tables("jacking points by name")
    towing: dict[str, PointTable] = tables("towing eyes by name")
    hoist: dict[str, PointTable] = tables("lifting points used together, by name; one alone is a hook")
    trolley: dict[str, PointTable] = tables("supports of an assembly trolley, three or more, by name")


class PerformanceTable(Table):
    """[performance]: what the car can do; enough to build the steady situations."""

    speed: float | None = quantity("speed", "highest speed", example='"75 m/s"', band=("5 m/s", "150 m/s"))
    power: float | None = quantity("power", "at the driven wheels", example='"360 kW"', band=("5 kW", "2000 kW"))
    lateral: float | None = quantity(
        "acceleration",
        "highest cornering acceleration, at the fast corner",
        example='"2.4 g"',
        band=("0.2 g", "7 g"),
    )
    braking: float | None = quantity(
        "acceleration",
        "highest deceleration at the highest speed, drag included",
        example='"3 g"',
        band=("0.2 g", "8 g"),
    )
    traction: float | None = quantity(
        "acceleration", "highest acceleration from rest", example='"1 g"', band=("0.1 g", "4 g")
    )
    crest: float | None = quantity(
        "acceleration", "vertical acceleration over a crest, negative", example='"-1 g"', band=("-6 g", "0 g")
    )
    compression: float | None = quantity(
        "acceleration",
        "vertical acceleration in a compression; the vertical factor serves when absent",
        example='"2 g"',
        band=("0 g", "10 g"),
    )
    fast_corner: float | None = quantity(
        "speed",
        "speed of the fast corner; 0.8 times the highest when absent (unsourced)",
        example='"60 m/s"',
        band=("5 m/s", "150 m/s"),
    )
    slow_corner: float | None = quantity(
        "speed",
        "speed of the slow corner; 0.35 times the highest when absent (unsourced)",
        example='"25 m/s"',
        band=("2 m/s", "150 m/s"),
    )
    ratios: list[float] | None = words(
        "overall ratios, crank speed over wheel speed, from the first gear to the last", example="[10.0, 7.2, 5.5, 4.5]"
    )


class FactorTable(Table):
    """[catalogue.factors.NAME]: a dynamic factor of your own."""

    value: float = quantity("ratio", "the factor", needed=True, example="3.0", band=("0.1", "12"))
    source: str = words("where it comes from", needed=True, example='"damper records of a test week"')
    applies_to: str | None = words(
        "what it multiplies; weight and inertia alone, never aero", example='"static wheel load"'
    )


class GivenForceTable(Table):
    """[catalogue.forces.NAME]: a force known better than by a factor."""

    force: Vector = quantity(
        "force_vector",
        "road on a left tyre, or the pull at a point; mirrored for the other side",
        needed=True,
        frame="vector",
        example='"(-2, 0, 10) kN"',
        band=("-1000 kN", "1000 kN"),
    )
    basis: str = words("where it comes from: what transmits it", needed=True, example='"damper force at speed"')
    speed: float | None = quantity("speed", "speed at which it acts", example='"40 m/s"', band=("0 m/s", "150 m/s"))


class CatalogueTable(Table):
    """[catalogue]: standard situations, built with the car's own figures."""

    groups: list[str] = words(
        'groups to run: "all", "steady", "transient", "handling", "regulation", "rig", or single ones',
        needed=True,
        example='["steady", "transient"]',
    )
    factors: dict[str, FactorTable] = tables(
        "dynamic factors in place of the catalogue's: vertical, kerb, side, towing"
    )
    forces: dict[str, GivenForceTable] = tables(
        "forces in place of factors: kerb, landing, spin, towing, roll_structure, rear_impact"
    )


class EnvelopeTable(Table):
    """[envelope]: the grip- and power-limited boundary over speed and heading, every vertex a load case."""

    speeds: list[float] | None = quantity(
        "speed",
        "speeds; ten even steps up to the highest when absent",
        many=True,
        example='["20 m/s", "40 m/s", "60 m/s"]',
        band=("0 m/s", "150 m/s"),
    )
    headings: int | None = words(
        "directions in the plane of accelerations",
        default="24",
        source="common practice, unsourced: 24 to 36",
        example="24",
    )


class LapTable(Table):
    """[laps.NAME]: a recorded or simulated lap."""

    file: str = words("CSV file with columns that carry their units", needed=True, frame="path", example='"lap.csv"')
    step: float | None = quantity(
        "time",
        "even step to resample it at, averaged where that is coarser; as recorded when absent",
        example='"20 ms"',
        band=("0.1 ms", "10 s"),
    )
    overall_ratio: float | None = quantity(
        "ratio", "crank speed over wheel speed, where the file has no such column", example="5.2", band=("0.5", "60")
    )
