"""The whole case file, blockload.case/1: one table per concept, gathered here.

Tables whose use comes later are kept as they stand in the file; they are read by the room that uses them.
"""

from typing import Any, Literal

from .schema_block import BlockTable, ConceptTable, FacesTable, InstallationTable, KnownTable, LimitsTable, PathTable
from .schema_car import AxlesTable, BodiesTable, CarTable, ChassisTable, DriveTable, EngineTable, FrameTable, TyresTable
from .schema_loads import AeroSplitTable, AeroTotalTable, DeviceTable, ManoeuvreTable
from .schema_situations import CatalogueTable, EnvelopeTable, LapTable, PerformanceTable, PointsTable
from .tables import Table, quantity, table, tables, words

FORMAT = "blockload.case/1"
LATER = ("gauges", "heat", "duty", "scatter", "measured", "accepted")
"""Tables kept as they stand in the file."""


class CaseTable(Table):
    """A case file."""

    format: Literal["blockload.case/1"] = words("names this file format", needed=True, example=f'"{FORMAT}"')
    title: str | None = words(
        "one line for the head of the report", default="", source="none given", example='"My car"'
    )
    extends: str | None = words("another case file; this file's keys go over that file's", example='"base.toml"')
    air_density: float | None = quantity(
        "density",
        "air density",
        default="1.225 kg/m^3",
        source="ISO 2533, sea level",
        example='"1.20 kg/m^3"',
        band=("0.3 kg/m^3", "2 kg/m^3"),
    )
    gravity: float | None = quantity(
        "acceleration",
        "acceleration of free fall",
        default="9.80665 m/s^2",
        source="standard value: 3rd CGPM 1901, ISO 80000-3",
        example='"9.81 m/s^2"',
        band=("0 m/s^2", "30 m/s^2"),
    )
    frame: FrameTable | None = table("how this file writes coordinates")
    car: CarTable | None = table("short entry: the tub is what is left after engine, gearbox and corners")
    bodies: BodiesTable = table("the rigid masses of the chain", needed=True)
    axles: AxlesTable = table("front and rear axle", needed=True)
    chassis: ChassisTable | None = table("the chassis between the axles")
    aero: dict[str, DeviceTable] = tables("aero devices by name")
    aero_total: AeroTotalTable | None = table("cross-check of the devices")
    aero_split: dict[str, AeroSplitTable] = tables("possible carriers of [aero_total] where no devices are known")
    tyres: TyresTable | None = table("grip")
    drive: DriveTable | None = table("how the car is driven and braked")
    engine: EngineTable | None = table("figures of the engine")
    faces: FacesTable = table("the two planes the engine is bolted to", needed=True)
    manoeuvres: dict[str, ManoeuvreTable] = tables("what driver and road do, by name")
    block: BlockTable | None = table("the block; without it the case is judged by its faces alone")
    installation: InstallationTable | None = table("how the block is held")
    paths: dict[str, PathTable] = tables("second load paths by name")
    limits: LimitsTable | None = table("factors and allowables")
    known: dict[str, KnownTable] = tables("how well a key is known, by its full dotted name")
    concept: ConceptTable | None = table("what is chosen before there is a block")
    points: PointsTable | None = table("places the standard situations ask for")
    performance: PerformanceTable | None = table("what the car can do")
    catalogue: CatalogueTable | None = table("groups of standard situations")
    envelope: EnvelopeTable | None = table("boundary of what grip and power allow, every vertex a load case")
    laps: dict[str, LapTable] = tables("recorded or simulated laps by name: a load case per sample")
    gauges: Any = words("named places whose motion is reported (kept for later use)")
    heat: Any = words("temperatures (kept for later use)")
    duty: Any = words("duty cycle for life (kept for later use)")
    scatter: Any = words("scatter of inputs (kept for later use)")
    measured: Any = words("rig and track measurements (kept for later use)")
    accepted: Any = words("findings accepted with a reason (kept for later use)")
