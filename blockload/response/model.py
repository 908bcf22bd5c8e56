"""The response library: what every unit load does to the block.

Axes U (unit loads: six wrench components per attachment in the block's order - Fx Fy Fz Mx My Mz about the
attachment's centroid - then one uniform temperature rise of 1 K per volume), N (mesh nodes), n (surface nodes),
m (surface entries: one per surface node and volume, so no stress is averaged across a change of volume).
Stress components: xx yy zz xy yz xz [Pa].
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints

COMPONENTS = ("Fx", "Fy", "Fz", "Mx", "My", "Mz")
STRESS = ("xx", "yy", "zz", "xy", "yz", "xz")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Library:
    """Unit responses of a free block, balanced by its own rigid-body inertia.

    attachments: ((kind, name), ...); centroids (A, 3); flexibility (6A, 6A), symmetric;
    thermal_motion (6A, V): motion of the attachments for 1 K in each volume;
    motion (3N, U): displacement of every node, component fastest (row 3*node + component), nodes as in
    `block.mesh.doflocs`, free of rigid-body content; may be a memory map;
    surface_nodes (n,) into mesh.doflocs; surface_triangles (t, 3) into surface_nodes (each 6-node facet as four);
    triangle_volume (t,); entry_node (m,) into surface_nodes; entry_volume (m,) into volumes;
    stress (m, 6, U): nodal stress per entry, may be a memory map;
    checks: what was measured while solving ("unit energy", "residual", "spread", "symmetry", ...): largest values.
    """

    key: str
    attachments: tuple[tuple[str, str], ...]
    volumes: tuple[str, ...]
    centroids: Floats
    mass: float
    cg: Floats
    inertia: Floats
    flexibility: Floats
    thermal_motion: Floats
    motion: Floats
    surface_nodes: Ints
    surface_points: Floats
    surface_triangles: Ints
    triangle_volume: Ints
    entry_node: Ints
    entry_volume: Ints
    stress: Floats
    checks: dict[str, float]
    solver: str
    from_cache: bool

    @property
    def unit_count(self) -> int:
        """Number of unit loads U."""
        return int(6 * len(self.attachments) + len(self.volumes))

    def rows(self, kind: str, name: str) -> slice:
        """Rows (or columns) of one attachment's six components."""
        index = self.attachments.index((kind, name))
        return slice(6 * index, 6 * index + 6)

    def rigid_modes(self) -> Floats:
        """Rigid motion of every attachment, (6A, 6), for translation and rotation about the car's origin."""
        modes = np.zeros((len(self.attachments), 6, 6))
        modes[:, :3, :3] = np.eye(3)
        modes[:, 3:, 3:] = np.eye(3)
        x, y, z = self.centroids.T
        modes[:, 0, 4], modes[:, 0, 5] = z, -y
        modes[:, 1, 3], modes[:, 1, 5] = -z, x
        modes[:, 2, 3], modes[:, 2, 4] = y, -x
        return modes.reshape(-1, 6)
