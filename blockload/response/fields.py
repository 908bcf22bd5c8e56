"""Fields of a combination of unit loads: motion everywhere, and the stress of single elements at a node."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..block.model import Block
from .elements import elements_of
from .model import Library
from .recovery import gradients, hooke


def field(library: Library, weights: Floats) -> Floats:
    """Motion (3N,) of the unit loads weighted by `weights` (U,), or (3N, k) for weights (U, k)."""
    result: Floats = library.motion @ weights
    return result


def element_stress(block: Block, library: Library, weights: Floats, node: int, volume: int) -> Floats:
    """Stress (n_elements, 6) [Pa] of every element of one volume at a mesh node, each from its own motion alone.

    The spread of the rows about their mean says how far the mesh resolves the stress there.
    """
    elements = elements_of(block)
    chosen, local = np.nonzero((elements.nodes == node) & (elements.volume_of[:, None] == volume))
    some = elements.take(chosen)
    nodal, _ = gradients(some)
    unknowns = 3 * some.nodes[:, :, None] + np.arange(3)
    motion = np.asarray(library.motion[unknowns.ravel()]) @ weights
    at_node = nodal[np.arange(len(local)), local]
    gradient = np.einsum("ead,eac->edc", at_node, motion.reshape(unknowns.shape))
    stress = hooke(gradient, some.lame, some.shear)
    heat = weights[6 * len(library.attachments) + volume]
    stress[:, :3] -= ((3 * some.lame + 2 * some.shear) * some.expansion * heat)[:, None]
    return stress
