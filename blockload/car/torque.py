"""From road speed to crank and back: whether the engine turns, and pulls, as a load case asks of it.

Crank speed is v i / R without slip, i the overall ratio and R the driven wheels' loaded radius; crank torque comes from
the tyres (`crank`). Against them stand the engine's own figures: a torque curve, else a mean effective pressure
(T = p V / 4 pi, four strokes), else a peak torque. Outside usual figures a note is made; nothing is changed.

Usual peak mean effective pressures: J. B. Heywood, *Internal Combustion Engine Fundamentals* (1988), section 2.7, 0.85
to 1.05 MPa without and 1.25 to 1.7 MPa with charging; racing engines without charging 1.2 to 1.5 MPa (from memory).
Mean piston speed: Heywood section 2.2, 8 to 15 m/s on the road; racing engines reach about 25 m/s (unsourced).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..case.model import Case, Engine
from .bodies import AXLES
from .engine import bmep, displacement, mean_piston_speed, torque_at
from .manoeuvres import DRIVEN
from .model import LoadCases
from .wrench import sealed

PISTON_SPEED = 25.0
"""Highest usual mean piston speed [m/s]; unsourced."""
PRESSURE = {False: 1.5e6, True: 1.7e6}
"""Highest usual peak mean effective pressure [Pa] without and with charging; sources in the module's head."""
_RPM = np.pi / 30.0
_SLACK = 1e-6


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PowerTrain:
    """What each load case (C,) asks of the engine; nan where a figure it needs is missing.

    speed [rad/s] of the crank (nan at rest, where the clutch slips), torque [N·m] at the clutch, available [N·m] at
    that speed, piston_speed [m/s], pressure [Pa]: brake mean effective pressure, power [W].
    """

    speed: Floats
    torque: Floats
    available: Floats
    piston_speed: Floats
    pressure: Floats
    power: Floats


def crank_speed(speed: Floats, ratio: Floats, radius: float) -> Floats:
    """Crank speed [rad/s] from road speed [m/s], overall ratio and loaded radius [m]; no slip in tyre or clutch."""
    result: Floats = speed * ratio / radius
    return result


def full_load_torque(engine: Engine, speed: Floats) -> Floats:
    """Torque [N·m] the engine can give at crank speeds (...) [rad/s]; nan outside its curve or without figures."""
    if engine.torque_curve is not None:
        at, torque = engine.torque_curve.T
        return np.asarray(np.interp(speed, at, torque, left=np.nan, right=np.nan))
    volume = swept_volume(engine)
    if engine.bmep is not None and volume is not None:
        peak: float | None = torque_at(engine.bmep, volume)
    else:
        peak = engine.peak_torque
    known = np.isfinite(speed) if peak is not None else np.zeros(np.shape(speed), dtype=bool)
    if engine.max_speed is not None:
        known = known & (speed <= engine.max_speed * (1 + _SLACK))
    return np.where(known, np.nan if peak is None else peak, np.nan)


def swept_volume(engine: Engine) -> float | None:
    """Swept volume [m^3] of all cylinders, None where bore, stroke or cylinders are missing."""
    if engine.bore is None or engine.stroke is None or engine.cylinders is None:
        return None
    return displacement(engine.bore, engine.stroke, engine.cylinders)


def power_train(case: Case, cases: LoadCases) -> PowerTrain:
    """What the load cases ask of the engine."""
    engine, torque = case.engine, cases.crank_torque
    rolling = np.where(cases.speed > 0, cases.speed, np.nan)
    speed = crank_speed(rolling, cases.overall_ratio, driven_radius(case))
    volume = swept_volume(engine)
    nothing = np.full_like(speed, np.nan)
    return PowerTrain(
        speed=sealed(speed),
        torque=torque,
        available=sealed(full_load_torque(engine, speed)),
        piston_speed=sealed(nothing if engine.stroke is None else mean_piston_speed(engine.stroke, 1.0) * speed),
        pressure=sealed(nothing.copy() if volume is None else bmep(1.0, volume) * torque),
        power=sealed(torque * speed),
    )


def driven_radius(case: Case) -> float:
    """Loaded radius [m] of the driven wheels, their mean where both axles drive."""
    shares = zip(AXLES, DRIVEN[case.drive.axle], strict=True)
    return float(np.mean([case.axles[name].loaded_radius for name, share in shares if share > 0]))


def engine_notes(case: Case, cases: LoadCases) -> Iterator[str]:
    """Sentences on load cases that ask of the engine what it cannot, or does not usually, do."""
    train, engine = power_train(case, cases), case.engine
    limit = PRESSURE[bool(engine.charged)]
    for c, name in enumerate(cases.names):
        if engine.max_speed is not None and train.speed[c] > engine.max_speed * (1 + _SLACK):
            yield (
                f"{name}: the crank would turn at {train.speed[c] / _RPM:.0f} rpm, above its highest "
                f"{engine.max_speed / _RPM:.0f} rpm: road speed and overall_ratio do not go together"
            )
        elif _beyond_curve(engine, train.speed[c]):
            yield f"{name}: the torque curve does not reach the crank's {train.speed[c] / _RPM:.0f} rpm"
        if train.torque[c] > train.available[c] * (1 + _SLACK):
            yield (
                f"{name}: the tyres ask {train.torque[c]:.4g} N·m of the crank, the engine gives "
                f"{train.available[c]:.4g} N·m there: a higher overall_ratio or a lower acceleration"
            )
        if train.piston_speed[c] > PISTON_SPEED:
            speed = f"mean piston speed {train.piston_speed[c]:.3g} m/s"
            yield f"{name}: {speed}, usual up to {PISTON_SPEED:g} m/s (unsourced)"
        if train.pressure[c] > limit:
            kind = "with" if engine.charged else "without"
            yield (
                f"{name}: mean effective pressure {train.pressure[c] / 1e5:.3g} bar, usual up to {limit / 1e5:g} bar "
                f"{kind} charging (Heywood 1988, section 2.7, and racing practice from memory)"
            )


def _beyond_curve(engine: Engine, speed: float) -> bool:
    return engine.torque_curve is not None and bool(speed > engine.torque_curve[-1, 0] * (1 + _SLACK))
