"""The recipe of demo-lap.csv: an invented circuit, driven by a point mass at four fifths of the demo car's grip.

Run by hand from this folder: python make.py
"""

from __future__ import annotations

from pathlib import Path

import numpy as np

# Length [m] and radius [m] of each piece of the circuit; + turns left, 0 is straight.
PIECES = (
    (420, 0), (90, -45), (160, 0), (130, 85), (60, 0), (110, -70), (520, 0), (75, 28), (140, 0), (220, 190),
    (200, 0), (95, -38), (90, 0), (100, 42), (340, 0), (260, -240), (180, 0), (85, 33), (300, 0),
)  # fmt: skip
MASS, POWER, GRIP, SHARE = 1150.0, 360e3, 1.7, 0.8
DOWNFORCE_AREA, DRAG_AREA, DENSITY, GRAVITY = 5.35, 1.35, 1.20, 9.80665
RADIUS, RATIOS, HIGHEST = 0.34, (10.0, 7.6, 6.2, 5.2, 4.5), 900.0  # m, crank over wheel, rad/s
STEP, SAMPLE = 1.0, 0.1  # m, s
CREST, DIP = 700.0, 1960.0  # m along the lap: a crest and a compression
HEAD = """\
# An invented lap of an invented circuit in the demo car; made by make.py beside this file.
# axes = x forward, y left, z up
# a_z = without gravity
time [s],distance [m],speed [km/h],a_x [g],a_y [g],a_z [g],overall_ratio [1]
"""


def main() -> None:
    """Write the lap."""
    curvature = np.concatenate([np.full(int(n / STEP), 1.0 / r if r else 0.0) for n, r in PIECES])
    window = np.hanning(41) / np.hanning(41).sum()
    curvature = np.convolve(np.concatenate([curvature[-40:], curvature, curvature[:40]]), window, "same")[40:-40]
    speed = np.minimum(_cornering(curvature), 75.0)
    for _ in range(2):  # twice round, so that the lap closes on itself
        for k in range(len(speed)):
            speed[k] = min(speed[k], _next(speed[k - 1], curvature[k - 1], push=True))
        for k in range(len(speed) - 1, -1, -1):
            following = (k + 1) % len(speed)
            speed[k] = min(speed[k], _next(speed[following], curvature[following], push=False))
    distance = STEP * np.arange(len(speed))
    time = np.concatenate([[0.0], np.cumsum(2 * STEP / (speed[1:] + speed[:-1]))])
    at = np.arange(0.0, time[-1], SAMPLE)
    s, v = np.interp(at, time, distance), np.interp(at, time, speed)
    along = np.interp(at, time, np.gradient(speed, time))
    across = v**2 * np.interp(s, distance, curvature)
    up = 6.0 * np.exp(-(((s - DIP) / 15.0) ** 2)) - 4.0 * np.exp(-(((s - CREST) / 20.0) ** 2))
    ratio = np.array([next((r for r in RATIOS if u * r / RADIUS < HIGHEST), RATIOS[-1]) for u in v])
    rows = zip(at, s, 3.6 * v, along / GRAVITY, across / GRAVITY, up / GRAVITY, ratio, strict=True)
    lines = (",".join(f"{x:.4g}" if k == 6 else f"{x:.3f}" for k, x in enumerate(row)) for row in rows)
    Path(__file__).with_name("demo-lap.csv").write_text(HEAD + "\n".join(lines) + "\n", encoding="utf-8")


def _grip(speed: np.ndarray) -> np.ndarray:
    return SHARE * GRIP * (GRAVITY + 0.5 * DENSITY * DOWNFORCE_AREA * speed**2 / MASS)


def _cornering(curvature: np.ndarray) -> np.ndarray:
    """Speed at which a corner takes all of the grip: v² k = share mu (g + c v²)."""
    rest = np.abs(curvature) - SHARE * GRIP * 0.5 * DENSITY * DOWNFORCE_AREA / MASS
    return np.sqrt(SHARE * GRIP * GRAVITY / np.maximum(rest, 1e-6))


def _next(speed: float, curvature: float, *, push: bool) -> float:
    """Speed one step on (pushing) or one step back (braking), with what the corner leaves of the grip."""
    left = np.sqrt(max(float(_grip(speed)) ** 2 - (speed**2 * curvature) ** 2, 0.0))
    drag = 0.5 * DENSITY * DRAG_AREA * speed**2 / MASS
    change = min(0.55 * left, POWER / (MASS * speed)) - drag if push else left + drag
    return float(np.sqrt(max(speed**2 + 2 * STEP * change, 25.0)))


if __name__ == "__main__":
    main()
