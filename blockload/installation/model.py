"""The installed block: the wrench on every attachment, for every case, source and pad stiffness."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from ..arrays import Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PadLoads:
    """Axes P (pad stiffness variants), C (load cases), S (sources), U (the library's unit loads).

    weights (P, C, S, U): wrench of every attachment on the block, about its centroid, and temperature rises;
    block_motion and gearbox_motion (P, C, S, 6): rigid motion about the car's origin (tub fixed);
    path_force (P, C, S, n_paths): tension in each second load path;
    relief (C, S, 6): rigid acceleration (about the block's cg) that the attachment wrenches alone imply;
    sum_gap: largest difference of pad sums and the car's face wrench, as a share; left_out (C,): size of the
    neglected ω×(ω×r) inside the block [m/s²].
    sources: names along S, those of the load cases and "heat" after them where temperatures were given;
    checks: what was measured while solving ("residual", "balance", "mass", "cg", "inertia"): largest values.
    """

    variants: tuple[str, ...]
    middle: int
    weights: Floats
    block_motion: Floats
    gearbox_motion: Floats
    path_force: Floats
    relief: Floats
    sum_gap: float
    relief_gap: float
    left_out: Floats
    sources: tuple[str, ...] = ()
    checks: Mapping[str, float] = field(default_factory=dict)
