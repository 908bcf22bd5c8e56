"""Bolted joint in tension: R. G. Budynas, J. K. Nisbett, *Shigley's Mechanical Engineering Design*, ch. 8.

Example 8-4 (9th ed. numbering): 5/8-11 UNC SAE grade 5 bolts, A_t = 0.226 in², S_p = 85 kpsi, joint constant C = 0.368
from the members, preload 0.75 A_t S_p = 14.4 kip, six bolts on 36 kip. Load factor n_L = (S_p A_t − F_i)/(C P) = 2.18
and n_0 = F_i/[P(1 − C)] = 3.80 (eqs. 8-29, 8-30). C and F_i as seen in public worked solutions; the two factors from
memory, consistent with the inputs to the digits given. A margin with factor one is the book's factor less one.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import synthetic_car as car

from blockload.case.fasteners import Fastener
from blockload.margins.model import Margin
from blockload.margins.studs import Joint, Split, criteria, margin_of

KIP = 4448.2216
SQUARE_INCH = 0.0254**2
KPSI = 6.894757e6


def joint(preload: float, load_factor: float) -> Joint:
    stud = replace(car.studs({"bolt": (0.0, 0.0)})[0], preload=preload, preload_scatter=0.0, load_factor=load_factor)
    bolt = Fastener(
        size="5/8-11 UNC",
        property_class="SAE 5",
        diameter=0.625 * 0.0254,
        pitch=0.0254 / 11,
        area=0.226 * SQUARE_INCH,
        tensile_strength=120 * KPSI,
        yield_strength=92 * KPSI,
        proof_stress=85 * KPSI,
        source="SAE J429",
    )
    return Joint(stud=stud, fastener=bolt, least=preload, most=preload)


def margin(of: Joint, name: str, axial: float, factor: float = 1.0) -> Margin:
    row = next(item for item in criteria(of, car.LIMITS) if item.name == name)
    force = np.array([[[axial, 0.0, 0.0]]])
    return margin_of(
        replace(row, factor=factor),
        of,
        [Split(label="one bolt", force=force)],
        place="bolt",
        at=(0.0, 0.0, 0.0),
        names=("pressure",),
        sources=("pressure",),
    )


@pytest.mark.parametrize(("name", "expected"), [("stud tension", 2.18), ("separation", 3.80)])
def test_example_8_4(published, name, expected) -> None:
    of = joint(0.75 * 0.226 * 85.0 * KIP, 0.368)
    got = margin(of, name, 6.0 * KIP).margin
    assert got is not None
    published(f"bolt factor, {name}", "Shigley ex. 8-4", expected=expected, got=got + 1.0, unit="1", tolerance=5e-3)


def test_separation_of_nasa_std_5020b(published) -> None:
    """NASA-STD-5020B (2021) eq. 19: P_p,min/(FF FS P_L) − 1 with 26 kN, 1.15, 1.2, 20 kN: −0.0580.

    The standard takes the whole load off the clamp, the load factor being none of its business: ours with Φ = 0.
    """
    got = margin(joint(26e3, 0.0), "separation", 20e3, factor=1.15 * 1.2).margin
    published("joint separation", "NASA-STD-5020B eq. 19", expected=-0.0580, got=got, unit="1", tolerance=2e-3)
