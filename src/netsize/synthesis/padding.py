"""Many literatures of different lengths as one rectangular array with a mask."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, BoolArray

__all__ = ["Padded", "guarded", "pad"]


class Padded(NamedTuple):
    """Estimates and variances, shape (..., k), safe to compute with where masked.

    estimates : 0 where masked. variances : 1 where masked. present : 1.0 for a result, 0.0 for
    padding. number : how many results, shape (...).
    """

    estimates: Array
    variances: Array
    present: Array
    number: Array


def pad(literatures: Sequence[ArrayLike]) -> tuple[Array, BoolArray]:
    """Stack one-dimensional arrays into (B, longest) with a mask that is True for real entries."""
    rows = [np.asarray(row, dtype=float) for row in literatures]
    width = max((row.size for row in rows), default=0)
    values = np.zeros((len(rows), width))
    mask = np.zeros((len(rows), width), dtype=bool)
    for i, row in enumerate(rows):
        values[i, : row.size] = row
        mask[i, : row.size] = True
    return values, mask


def guarded(estimates: ArrayLike, variances: ArrayLike, mask: ArrayLike | None = None) -> Padded:
    """Broadcast to one shape (..., k) and put harmless numbers where `mask` is False.

    Raises ValueError where an unmasked estimate is not finite or a variance is not finite and
    positive.
    """
    y, v = np.broadcast_arrays(
        np.asarray(estimates, dtype=float), np.asarray(variances, dtype=float)
    )
    there = np.broadcast_to(True if mask is None else np.asarray(mask, dtype=bool), y.shape)
    if not np.all(np.isfinite(y) & np.isfinite(v) & (v > 0) | ~there):
        raise ValueError("estimates must be finite and variances finite and positive")
    present = there.astype(float)
    return Padded(np.where(there, y, 0.0), np.where(there, v, 1.0), present, present.sum(axis=-1))
