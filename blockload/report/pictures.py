"""Still pictures of the block for the report, drawn in a child process so that a crash of the driver costs nothing."""

from __future__ import annotations

import json
import math
import os
import subprocess
import sys
import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from ..margins.model import Margin, Margins
from .choice import lowest
from .surface import Surface, equivalent
from .wording import fixed, plain_name, point

TIMEOUT = 180.0  # s
MISSING = "Pictures of the block are missing"
REMEDY = "On Debian and its kin: apt-get install libegl1 libgl1-mesa-dri; then run the check again."
TITLES = {
    "margin_front_left": "From ahead, left and above: margin, worst over all load cases",
    "margin_rear_right": "From behind, right and above: margin, worst over all load cases",
    "margin_below": "From below, left: margin, worst over all load cases",
    "stress_front_left": "From ahead, left and above: equivalent stress in the governing load case",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Picture:
    """One PNG with its caption; `alt` says it in words."""

    name: str
    png: bytes
    caption: str
    alt: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Pictures:
    """What was drawn; `missing` says why nothing was, and what to install."""

    overview: tuple[Picture, ...] = ()
    hotspots: tuple[Picture, ...] = ()
    deformation: float = 1.0
    stress_range: float = 0.0
    stress_peak: float = 0.0
    missing: str = ""
    hot: tuple[Margin, ...] = field(default=())


def draw(seen: Surface, margins: Margins, *, close_ups: int = 6, python: str = sys.executable) -> Pictures:
    """Draw the block from three sides and one close-up per hotspot.

    Parameters
    ----------
    seen : Surface
        The surface in the governing load case.
    margins : Margins
        For the hotspots: strength margins with a place on the surface.
    close_ups : int
        How many hotspots at most.
    python : str
        Interpreter of the child process.

    Returns
    -------
    Pictures
        With `missing` set, and no picture, where this machine cannot draw.

    """
    stress = equivalent(seen.stress)
    hot = hotspots_of(margins, close_ups)
    scale, most = deformation_scale(seen), _round_up(float(np.quantile(stress, 0.995)))
    arrays = {
        "points": seen.points,
        "triangles": seen.triangles,
        "displacement": seen.displacement,
        "use": seen.ratio,
        "stress": stress,
        "hotspots": np.array([item.at for item in hot]).reshape(-1, 3),
        "deformation": np.float64(scale),
        "stress_range": np.float64(most),
    }
    with tempfile.TemporaryDirectory(prefix="blockload-draw-") as name:
        folder = Path(name)
        np.savez(folder / "data.npz", **arrays)  # type: ignore[arg-type]
        missing = _run(python, folder)
        if missing:
            return Pictures(missing=missing)
        drawn = json.loads((folder / "drawn.json").read_text(encoding="utf-8"))
        images = {key: (folder / f"{key}.png").read_bytes() for key in drawn}
    return Pictures(
        overview=tuple(_overview(key, images[key], seen, scale) for key in TITLES),
        hotspots=tuple(_close_up(k, item, images[f"hotspot_{k}"], drawn[f"hotspot_{k}"]) for k, item in enumerate(hot)),
        deformation=scale,
        stress_range=most,
        stress_peak=float(stress.max()),
        hot=hot,
    )


def hotspots_of(margins: Margins, count: int) -> tuple[Margin, ...]:
    """Return the lowest strength margins, no two of them within 15 mm of each other."""
    chosen: list[Margin] = []
    for item in lowest(margins.margins):
        if item.unit != "Pa" or item.margin is None or len(chosen) == count:
            continue
        if all(math.dist(item.at, other.at) > 0.015 for other in chosen):
            chosen.append(item)
    return tuple(chosen)


def deformation_scale(seen: Surface) -> float:
    """Return the scale, 1, 2 or 5 times a power of ten, at which the largest movement is some 5 % of the block."""
    most = float(np.linalg.norm(seen.displacement, axis=1).max(initial=0.0))
    size = float(np.ptp(seen.points, axis=0).max(initial=0.0))
    return max(_round_down(0.05 * size / most), 1.0) if most > 0 else 1.0


def _round_down(value: float) -> float:
    power: float = 10.0 ** math.floor(math.log10(value))
    return max(k * power for k in (1.0, 2.0, 5.0) if k * power <= value)


def _round_up(value: float) -> float:
    if value <= 0:
        return 1.0
    power: float = 10.0 ** math.floor(math.log10(value))
    return min(k * power for k in (1.0, 2.0, 5.0, 10.0) if k * power >= value)


def _run(python: str, folder: Path) -> str:
    """Run the child; return what is missing, or nothing when all was drawn."""
    try:
        done = subprocess.run(
            [python, "-m", "blockload.report.draw_child", str(folder / "data.npz"), str(folder)],
            env=_environment(os.environ),
            capture_output=True,
            text=True,
            errors="replace",
            timeout=TIMEOUT,
            check=False,
        )
    except (OSError, subprocess.TimeoutExpired) as error:
        return f"{MISSING}: the drawing process did not finish ({type(error).__name__}). {REMEDY}"
    if done.returncode == 0 and (folder / "drawn.json").is_file():
        return ""
    last = [line for line in done.stderr.strip().splitlines() if line.strip()][-1:]
    why = f"exit code {done.returncode}" + (f": {last[0][:160]}" if last else "")
    return f"{MISSING}: drawing off screen failed ({why}). {REMEDY}"


def _environment(given: Mapping[str, str]) -> dict[str, str]:
    """The child's environment: off-screen drawing on the processor, and this package where it is now."""
    home = str(Path(__file__).resolve().parents[2])
    paths = [home, *filter(None, [given.get("PYTHONPATH")])]
    made = {**given, "PYTHONPATH": os.pathsep.join(paths)}
    if sys.platform.startswith("linux"):
        made["VTK_DEFAULT_OPENGL_WINDOW"] = "vtkEGLRenderWindow"
    return made


def _overview(key: str, png: bytes, seen: Surface, scale: float) -> Picture:
    where = plain_name(seen.load_case)
    caption = f"{TITLES[key]}. Drawn deformed ×{scale:.0f} as in {where}; thin lines: undeformed."
    alt = f"{caption} Highest use of strength {seen.ratio.max():.2f} (1 fails)."
    return Picture(name=key, png=png, caption=caption, alt=alt)


def _close_up(index: int, item: Margin, png: bytes, drawn: Mapping[str, object]) -> Picture:
    value = "" if item.margin is None else f"margin {fixed(item.margin, 2)}, "
    notes: Sequence[str] = [
        *(["cut open in front of the spot: the cut is hollow"] if drawn["cut"] else []),
        *([] if drawn["visible"] else ["the spot itself is hidden in this view"]),
    ]
    where = f"{plain_name(item.place)} {point(item.at)} m"
    caption = f"{index + 1}. {item.criterion}, {where}: {value}{plain_name(item.load_case)}"
    caption += f" ({'; '.join(notes)})" if notes else ""
    return Picture(name=f"hotspot_{index}", png=png, caption=caption, alt=f"Close-up of hotspot {caption}")
