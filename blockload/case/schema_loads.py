"""The case file's tables for what acts on the car: aero devices and manoeuvres."""

from typing import Literal

from .schema_car import Carrier
from .tables import Table, Vector, quantity, table, words

Part = Literal["downforce", "drag", "aero", "weight", "inertia", "crank", "crank_inertia", "extra"]


class DeviceTable(Table):
    """[aero.NAME]: one aero element, acting at a point of one body; an omitted area is 0."""

    on: Carrier = words("body that carries it: tub, engine or gearbox", needed=True, example='"gearbox"')
    at: Vector = quantity(
        "length_vector",
        "centre of pressure",
        needed=True,
        frame="place",
        example='"(-3.0, 0, 0.9) m"',
        band=("-10 m", "10 m"),
    )
    downforce_area: float | None = quantity(
        "area", "Cz*A, positive pressing down", example='"1.3 m^2"', band=("-10 m^2", "20 m^2")
    )
    drag_area: float | None = quantity("area", "Cx*A", example='"0.4 m^2"', band=("-2 m^2", "10 m^2"))
    downforce: float | None = quantity(
        "force", "instead of the area, with at_speed", example='"7 kN"', band=("-50 kN", "100 kN")
    )
    drag: float | None = quantity(
        "force", "instead of the area, with at_speed", example='"2 kN"', band=("-10 kN", "50 kN")
    )
    at_speed: float | None = quantity(
        "speed", "speed at which downforce and drag hold", example='"250 km/h"', band=("1 m/s", "150 m/s")
    )
    map: str | None = words(
        "aero map, CSV: its figures over speed, ride heights, yaw, steer and state stand instead of the areas",
        frame="path",
        example='"aero.csv"',
    )
    outside: Literal["refuse", "clamp"] | None = words(
        "beyond the map's grid: refuse, or clamp to its edge and mark the load case",
        default="refuse",
        source="no guess beyond the data",
        example='"refuse"',
    )
    attachment: str | None = words("where it enters the block, for a device on the engine", example='"wing_post"')


class AeroTotalTable(Table):
    """[aero_total]: the whole car's downforce and balance, a cross-check of the devices."""

    downforce: float = quantity("force", "total downforce", needed=True, example='"15 kN"', band=("-50 kN", "100 kN"))
    at_speed: float = quantity(
        "speed", "speed at which it holds", needed=True, example='"75 m/s"', band=("1 m/s", "150 m/s")
    )
    drag: float | None = quantity("force", "total drag", example='"5 kN"', band=("0 kN", "50 kN"))
    front_share: float = quantity("ratio", "front axle's share of it", needed=True, example="0.40", band=("-1", "2"))
    share_includes_drag_moment: bool = words(
        "whether the share counts the load that drag moves from front to rear axle; asked, no default",
        needed=True,
        example="true",
    )


class AeroSplitTable(Table):
    """[aero_split.NAME]: a possible carrier of [aero_total] where no devices are known."""

    on: Carrier = words("body that may carry it", needed=True, example='"tub"')
    at: Vector = quantity(
        "length_vector",
        "where it would act",
        needed=True,
        frame="place",
        example='"(-1.4, 0, 0.08) m"',
        band=("-10 m", "10 m"),
    )


class WheelForcesTable(Table):
    """[manoeuvres.NAME.extra_wheel_force]: forces at the contact points, road on tyre."""

    FL: Vector | None = quantity(
        "force_vector", "front left", frame="vector", example='"(-4, 0, 14) kN"', band=("-200 kN", "200 kN")
    )
    FR: Vector | None = quantity(
        "force_vector", "front right", frame="vector", example='"(-4, 0, 14) kN"', band=("-200 kN", "200 kN")
    )
    RL: Vector | None = quantity(
        "force_vector", "rear left", frame="vector", example='"(-2, 0, 10) kN"', band=("-200 kN", "200 kN")
    )
    RR: Vector | None = quantity(
        "force_vector", "rear right", frame="vector", example='"(-2, 0, 10) kN"', band=("-200 kN", "200 kN")
    )


class ManoeuvreTable(Table):
    """[manoeuvres.NAME]: what driver and road do."""

    speed: float | None = quantity(
        "speed", "speed of the car", default="0 m/s", source="at rest", example='"75 m/s"', band=("0 m/s", "150 m/s")
    )
    acceleration: Vector | None = quantity(
        "acceleration_vector",
        "of the whole car's CG",
        frame="vector",
        default="(0, 0, 0) m/s^2",
        source="steady",
        example='"(-25, 0, 0) m/s^2"',
        band=("-100 m/s^2", "100 m/s^2"),
    )
    drive: Literal["hold_speed", "accelerate", "brake", "coast"] | None = words(
        "hold_speed: the driven axle pushes against drag; accelerate; brake; coast: no tyre force along x",
        default="hold_speed",
        source="coast with an extra wheel force, else hold_speed",
        example='"brake"',
    )
    overall_ratio: float | None = quantity(
        "ratio",
        "crank speed over wheel speed; without it crank torque is not judged",
        example="4.5",
        band=("0.5", "60"),
    )
    crank_acceleration: float | None = quantity(
        "angular_acceleration",
        "rate of crank speed, negative slows",
        default="0 rad/s^2",
        source="steady",
        example='"-1000 rad/s^2"',
        band=("-20000 rad/s^2", "20000 rad/s^2"),
    )
    extra_wheel_force: WheelForcesTable | None = table("makes this a force-mode manoeuvre: the rigid car accelerates")
    parts: list[Part] | None = words("only these kinds of source; all when absent", example='["downforce"]')
    yaw: float | None = quantity(
        "angle",
        "where aero maps are read",
        default="0 deg",
        source="straight",
        example='"0 deg"',
        band=("-60 deg", "60 deg"),
    )
    steer: float | None = quantity(
        "angle",
        "where aero maps are read",
        default="0 deg",
        source="straight",
        example='"0 deg"',
        band=("-60 deg", "60 deg"),
    )
    state: str | None = words("named state of the aero maps", example='"open"')
    basis: str | None = words("where a force-mode figure comes from", example='"damper measurement of a test day"')
