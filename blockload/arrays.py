"""Read-only arrays: what a frozen value holds cannot be changed through a side door."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


def frozen(values: ArrayLike, dtype: Any = np.float64) -> NDArray[Any]:
    """Return a read-only array with these values (a copy only where the given one is writable)."""
    array = np.asarray(values, dtype=dtype)
    if array.flags.writeable:
        array = array.copy()
        array.flags.writeable = False
    return array
