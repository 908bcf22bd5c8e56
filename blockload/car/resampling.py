"""A lap brought to even steps in time.

Between samples a history is a straight line. At a finer step it is read off that line. At a coarser one each sample is
the mean over one step about it, the exact integral of the line over the step: what is faster than the step is averaged
away instead of being folded into something slow (any textbook of signal processing on aliasing). At both ends the
window narrows, so that it stays centred and a straight history stays exact. Averaging lowers peaks; how far is said.

Distance becomes time with constant acceleration between samples, dt = 2 ds / (v_1 + v_2).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import LapHistory
from ..errors import CaseError

HELD = ("overall_ratio",)
"""Channels that change in steps: each sample keeps the last value."""
_MOST = 2_000_000  # samples of one lap


@dataclass(frozen=True, slots=True, kw_only=True)
class Lost:
    """Largest magnitude of one signal as recorded and after averaging [SI]."""

    signal: str
    recorded: float
    kept: float


def timed(history: LapHistory) -> LapHistory:
    """The history with its time; CaseError where distance does not tell it."""
    if history.time is not None or history.distance is None:
        return history
    step, both = np.diff(history.distance), history.speed[1:] + history.speed[:-1]
    still = both <= 0.0
    if still.any():
        k = int(np.argmax(still))
        raise CaseError(
            str(history.path),
            f"the car stands at {history.distance[k]:.6g} m, where distance says nothing of time",
            "a car that moves, or a column of time",
            "add 'time [s]', or cut out where the car stands",
        )
    if not (step > 0.0).all():
        k = int(np.argmin(step > 0.0))
        found = f"two samples at {history.distance[k]:.6g} m while the car moves"
        raise CaseError(str(history.path), found, "distance that grows while the car moves", "delete one of the two")
    time = np.concatenate([[0.0], np.cumsum(2.0 * step / both)])
    return replace(history, time=frozen(time))


def resampled(history: LapHistory, step: float | None) -> tuple[LapHistory, tuple[Lost, ...]]:
    """The history at even steps [s] in time, as recorded for None; and the peaks that averaging has lowered."""
    history = timed(history)
    time = history.time
    if time is None or step is None or len(time) < 2:
        return history, ()
    count = int(np.floor((time[-1] - time[0]) / step * (1.0 + 1e-12))) + 1
    if count > _MOST:
        raise CaseError(str(history.path), f"{count} samples at steps of {step:g} s", f"{_MOST}", "take a longer step")
    at = np.minimum(time[0] + step * np.arange(count), time[-1])
    coarser = step > float(np.median(np.diff(time))) * (1.0 + 1e-9)
    half = np.minimum(step / 2.0, np.minimum(at - time[0], time[-1] - at)) if coarser else np.zeros(count)
    last = np.searchsorted(time, at + 1e-9 * step, side="right") - 1

    def signal(values: Floats) -> Floats:
        return frozen(averaged(time, values, at, half))

    channels = {
        name: frozen(values[last]) if name in HELD else signal(values) for name, values in history.channels.items()
    }
    made = replace(
        history,
        time=frozen(at),
        distance=None if history.distance is None else frozen(np.interp(at, time, history.distance)),
        speed=signal(history.speed),
        acceleration=frozen(np.stack([signal(part) for part in history.acceleration.T], axis=1)),
        channels=MappingProxyType(channels),
        state=None if history.state is None else tuple(history.state[k] for k in last.tolist()),
    )
    return made, _lost(history, made) if coarser else ()


def averaged(time: Floats, values: Floats, at: Floats, half: Floats) -> Floats:
    """Means (M,) over at -/+ half (M,) of the straight lines through values (N,) at times (N,); half 0: values."""
    points: Floats = np.interp(at, time, values)
    wide = half > 0.0
    if wide.any():
        about, half = at[wide], half[wide]
        points[wide] = (_integral(time, values, about + half) - _integral(time, values, about - half)) / (2.0 * half)
    return points


def _integral(time: Floats, values: Floats, until: Floats) -> Floats:
    """Integral (M,) of the straight lines from the first time to `until` (M,)."""
    width = np.diff(time)
    whole = np.concatenate([[0.0], np.cumsum(width * (values[1:] + values[:-1]) / 2.0)])
    k = np.clip(np.searchsorted(time, until, side="right") - 1, 0, len(time) - 2)
    part = until - time[k]
    result: Floats = whole[k] + part * (values[k] + (values[k + 1] - values[k]) / width[k] * part / 2.0)
    return result


def _lost(before: LapHistory, after: LapHistory) -> tuple[Lost, ...]:
    rows = []
    for k, name in enumerate(("a_x", "a_y", "a_z")):
        recorded, kept = (float(np.abs(item.acceleration[:, k]).max()) for item in (before, after))
        rows.append(Lost(signal=name, recorded=recorded, kept=kept))
    return tuple(row for row in rows if row.recorded > 0.0)
