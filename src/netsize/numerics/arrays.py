"""The array type of the numerics and the one way they broadcast their arguments."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["Array", "BoolArray", "IntArray", "broadcast"]

Array: TypeAlias = NDArray[np.float64]
IntArray: TypeAlias = NDArray[np.int64]
BoolArray: TypeAlias = NDArray[np.bool_]


def broadcast(*arguments: ArrayLike) -> tuple[Array, ...]:
    """Every argument as float64, broadcast against the others (read-only views)."""
    return tuple(np.broadcast_arrays(*(np.asarray(a, dtype=np.float64) for a in arguments)))
