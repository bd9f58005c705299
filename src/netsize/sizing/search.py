"""Power, and the smallest study that reaches it, for arrays of effects together."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, BoolArray, IntArray, broadcast
from netsize.numerics.roots import increasing_root
from netsize.numerics.search import smallest_integer
from netsize.sizing.study import LARGEST, Study

__all__ = ["detectable_effect", "smallest_units", "units_and_power"]


def smallest_units(
    study: Study, effect: ArrayLike, target: ArrayLike
) -> tuple[IntArray, BoolArray]:
    """The fewest units whose exact power reaches the target, elementwise.

    Parameters
    ----------
    effect : on the design's own scale, any shape. target : power in (0, 1), broadcast.

    Returns
    -------
    units : int64, 0 where none serves. finite : whether one does (up to 10⁸ a group).
    """
    units, finite, _ = units_and_power(study, effect, target)
    return units, finite


def units_and_power(
    study: Study, effect: ArrayLike, target: ArrayLike
) -> tuple[IntArray, BoolArray, Array]:
    """As `smallest_units`, with the power of the size found (nan where none serves)."""
    effect, target = broadcast(effect, target)
    seen = study.sees(effect)
    units = np.zeros(effect.shape, dtype=np.int64)
    finite = np.zeros(effect.shape, dtype=bool)
    power = np.full(effect.shape, np.nan)
    effect, target = effect[seen], target[seen]
    if not effect.size:
        return units, finite, power
    near = np.full(effect.size, np.nan)

    def reaches(n: IntArray, effect: Array, target: Array, place: IntArray) -> BoolArray:
        """Whether the power is enough; the far tail is computed only where it can decide."""
        tail = study.near_tail(n, effect)
        holds = tail >= target
        open_ = ~holds & (tail + study.tail >= target)
        if open_.any():
            far = study.far_tail(n[open_], effect[open_])
            holds[open_] = tail[open_] + far >= target[open_]
        near[place[holds]] = tail[holds]  # the last to hold is the answer
        return np.asarray(holds)

    units[seen], finite[seen] = smallest_integer(
        reaches,
        effect,
        target,
        np.arange(effect.size),
        first=study.first,
        last=LARGEST,
        guess=study.guess(effect, target),
    )
    far = study.far_tail(np.maximum(units[seen], study.first), effect)
    power[seen] = np.minimum(near + far, 1.0)
    return units, finite, power


def detectable_effect(study: Study, units: ArrayLike, target: ArrayLike) -> Array:
    """The smallest effect in the predicted direction that a study of `units` detects with power
    `target`, on the design's own scale; broadcast.

    0 where the level alone reaches the target, nan where no effect does and for equivalence, whose
    power falls with the effect.
    """
    units, target = broadcast(units, target)
    own = study.design.metrics[0]
    low, high = study.design.null, own.high * (1 - 1e-12)
    if not np.isfinite(low):
        return np.full(units.shape, np.nan)

    def excess(effect: Array, units: Array, target: Array) -> Array:
        return study.power(units, effect) - target

    root = increasing_root(excess, low, high, units, target)
    return np.where(np.isneginf(root), low, np.where(np.isposinf(root), np.nan, root))
