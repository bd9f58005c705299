"""The smallest integer at which a monotone condition holds, for many elements at once."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import BoolArray, IntArray

__all__ = ["smallest_integer"]


def smallest_integer(
    holds: Callable[..., BoolArray],
    *arguments: ArrayLike,
    first: int,
    last: int,
    guess: ArrayLike | None = None,
) -> tuple[IntArray, BoolArray]:
    """The smallest n in [first, last] with holds(n, *arguments), elementwise.

    Parameters
    ----------
    holds : called as holds(n, *arguments) with 1-d arrays of one length; once true for some n it
        stays true for larger n.
    arguments : parameters of each element, broadcast; finished elements are dropped from the call.
    first, last : the range searched, inclusive.
    guess : where to start, broadcast with the arguments; only the time depends on it.

    Returns
    -------
    n : int64, broadcast shape; 0 where no n in the range serves.
    found : whether one does.

    Notes
    -----
    A bracket is doubled outward from the guess, then halved; about 2 log₂ of the distance between
    guess and answer evaluations. Every returned n was checked true, and n-1 false where it is in
    the range.
    """
    rest = [np.asarray(a) for a in np.broadcast_arrays(*arguments)]
    shape = rest[0].shape
    rest = [a.ravel() for a in rest]
    size = rest[0].size
    start = np.full(size, first, dtype=np.int64)
    if guess is not None:
        raw = np.broadcast_to(np.asarray(guess, dtype=float), shape).ravel()
        start = np.clip(np.nan_to_num(raw, nan=first), first, last).astype(np.int64)
    # invariant once closed: holds(high) and not holds(low); low = first - 1 counts as not holding
    low = np.full(size, first - 1, dtype=np.int64)
    high = start.copy()
    reached = np.zeros(size, dtype=bool)
    active = np.arange(size)
    stride = np.ones(size, dtype=np.int64)
    while active.size:  # outward to the right until it holds
        true = holds(high[active], *(a[active] for a in rest))
        reached[active[true]] = True
        failed = active[~true]
        low[failed] = high[failed]
        active = failed[high[failed] < last]
        high[active] = np.minimum(high[active] + stride[active], last)
        stride[active] *= 2
    stride = np.ones(size, dtype=np.int64)
    active = np.flatnonzero(reached & (low == first - 1))
    while active.size:  # outward to the left where the guess already held
        trial = np.maximum(high[active] - stride[active], first)
        active, trial = active[trial < high[active]], trial[trial < high[active]]
        true = holds(trial, *(a[active] for a in rest))
        high[active[true]] = trial[true]
        low[active[~true]] = trial[~true]
        stride[active] *= 2
        active = active[true]
    active = np.flatnonzero(reached & (high - low > 1))
    while active.size:
        middle = (low[active] + high[active]) // 2
        true = holds(middle, *(a[active] for a in rest))
        high[active[true]] = middle[true]
        low[active[~true]] = middle[~true]
        active = active[high[active] - low[active] > 1]
    return np.where(reached, high, 0).reshape(shape), reached.reshape(shape)
