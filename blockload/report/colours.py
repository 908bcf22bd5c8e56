"""Our colours for margin and stress, and their legends.

Margin is drawn by use of strength, factor × applied / allowable, so that the hot places are large and the quiet ones
pale; the scale is written in margins. Two parts with a hard edge at margin zero: blue deepens toward the edge, brown
banded beyond it, so that a grey print and any kind of colour vision still see where zero is. Stress goes from light
to dark in one hue with even steps of lightness.
"""

from __future__ import annotations

from html import escape
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .drawing import FONT, INK, num, text
from .wording import fixed

USE_LIMIT = 2.0  # the end of the colour range, in use of strength; zero margin sits in the middle
STEPS = 400
SAFE = ((244, 245, 245), (204, 224, 236), (146, 188, 217), (83, 142, 186), (28, 92, 143))
SAFE_AT = (0.0, 0.08, 0.25, 0.55, 1.0)  # use of strength of each: a well-used block shows its load paths too
FAILED = ((231, 167, 94), (176, 101, 27), (84, 40, 4))
STRESS = ((247, 242, 232), (224, 197, 173), (184, 144, 138), (128, 93, 113), (66, 48, 84), (22, 16, 44))
BANDS = 0.1  # width of a band beyond zero margin, in use of strength


def use_colours(steps: int = STEPS) -> NDArray[np.uint8]:
    """Return colours (steps, 3) for use of strength from 0 to USE_LIMIT, hard edge at 1."""
    use = (np.arange(steps) + 0.5) * USE_LIMIT / steps
    safe = _ramp(SAFE, use, SAFE_AT)
    failed = _ramp(FAILED, (use - 1.0) / (USE_LIMIT - 1.0))
    dark = (np.floor((use - 1.0) / BANDS) % 2 == 1)[:, None]
    failed = np.where(dark, 0.78 * failed, failed)
    colours: NDArray[np.uint8] = np.where((use < 1.0)[:, None], safe, failed).round().astype(np.uint8)
    return colours


def stress_colours(steps: int = STEPS) -> NDArray[np.uint8]:
    """Return colours (steps, 3) for stress from nothing to the end of the range, light to dark."""
    return _ramp(STRESS, (np.arange(steps) + 0.5) / steps).round().astype(np.uint8)


def _ramp(
    stops: tuple[tuple[int, int, int], ...], share: Any, at: tuple[float, ...] | None = None
) -> NDArray[np.float64]:
    places = np.linspace(0.0, 1.0, len(stops)) if at is None else np.array(at)
    channels = [np.interp(share, places, [stop[k] for stop in stops]) for k in range(3)]
    return np.stack(channels, axis=-1)


def margin_legend() -> str:
    """Return the legend of the margin pictures as SVG."""
    ticks = [(1 / (1 + m), _margin_word(m)) for m in (9.0, 3.0, 1.0, 0.5, 0.25, 0.0, -0.2, -0.5)]
    title = "margin = allowable / (factor × applied) − 1"
    return _legend(use_colours(), [(use / USE_LIMIT, word) for use, word in ticks], title, "below zero fails, banded")


def stress_legend(most: float, peak: float) -> str:
    """Return the legend of a stress picture whose colours end at `most` [Pa]; the peak is named."""
    ticks = [(share, fixed(share * most, 0, scale=1e6)) for share in (0.0, 0.25, 0.5, 0.75, 1.0)]
    note = f"largest value {fixed(peak, 0, scale=1e6)} MPa; darker beyond the range"
    return _legend(stress_colours(), ticks, "equivalent stress (von Mises), MPa", note)


def _margin_word(margin: float) -> str:
    return fixed(margin, 2, sign=True) if margin else "0"


def _legend(colours: NDArray[np.uint8], ticks: list[tuple[float, str]], title: str, note: str) -> str:
    width, left, top, high = 620.0, 20.0, 24.0, 18.0
    step = width / len(colours)
    bars = "".join(
        f"<rect x='{num(left + k * step)}' y='{num(top)}' width='{num(step + 0.5)}' height='{num(high)}' "
        f"fill='#{r:02x}{g:02x}{b:02x}'/>"
        for k, (r, g, b) in enumerate(colours)
    )
    marks = "".join(
        f"<line x1='{num(left + share * width)}' x2='{num(left + share * width)}' y1='{num(top)}' "
        f"y2='{num(top + high + 5)}' stroke='{INK}'/>"
        + text((left + share * width, top + high + 18), word, size=13, anchor="middle")
        for share, word in ticks
    )
    return (
        f"<svg xmlns='http://www.w3.org/2000/svg' viewBox='0 0 660 66' class='legend' role='img' "
        f"aria-label='{escape(f'{title}; {note}')}' {FONT}>{bars}{marks}"
        f"{text((left, 16), title, size=13, weight='bold')}"
        f"{text((left + width, 16), note, size=13, anchor='end')}</svg>"
    )
