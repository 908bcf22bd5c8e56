"""Portal with fixed feet: A. Kleinlogel, Rahmenformeln (fixed portal; formulas from memory, confirmed by stiffness).

k = (I_beam / I_column) (h / L). Side load H at the beam: foot (Hh/2)(3k + 1)/(6k + 1), corner (Hh/2) 3k/(6k + 1).
Even load w on the beam: foot wL²/(12 (k + 2)), corner wL²/(6 (k + 2)), thrust 3 M_foot / h.
"""

from __future__ import annotations

import sys
from pathlib import Path

sys.path.append(str(Path(__file__).parents[1] / "response"))
from frames import Frame, stiffness_of_section

SOURCE = "Kleinlogel, Rahmenformeln"
HEIGHT, SPAN = 4.0, 6.0
X, MY = 0, 4


def portal() -> Frame:
    points = [(0, 0, 0), (0, 0, HEIGHT), (SPAN, 0, HEIGHT), (SPAN, 0, 0)]
    column, beam = (stiffness_of_section(value, length=SPAN) for value in (1.0, 2.0))
    return Frame(points, [(0, 1), (1, 2), (2, 3)], [column, beam, column])


FEET = [*range(6), *range(18, 24)]


def test_side_load(published) -> None:
    _, force = portal().solve(FEET, {6 * 1 + X: 10.0})

    for foot in (force[0, 0, MY], force[2, 1, MY]):
        published(
            "portal, side load: foot moment", SOURCE, expected=11.1111, got=abs(foot), unit="kN·m", tolerance=1e-5
        )
    for corner in (force[1, 0, MY], force[1, 1, MY]):
        published(
            "portal, side load: corner moment", SOURCE, expected=8.8889, got=abs(corner), unit="kN·m", tolerance=1e-5
        )


def test_even_load_on_the_beam(published) -> None:
    frame = portal()
    frame.load_evenly(1, (0.0, 0.0, -5.0))
    _, force = frame.solve(FEET, {})

    published(
        "portal, even load: foot moment", SOURCE, expected=4.5, got=abs(force[0, 0, MY]), unit="kN·m", tolerance=1e-5
    )
    published(
        "portal, even load: corner moment", SOURCE, expected=9.0, got=abs(force[1, 0, MY]), unit="kN·m", tolerance=1e-5
    )
    published("portal, even load: thrust", SOURCE, expected=3.375, got=abs(force[0, 0, X]), unit="kN", tolerance=1e-5)
    assert force[0, 0, MY] * force[0, 1, MY] > 0.0  # double curvature: both end moments turn a column the same way
