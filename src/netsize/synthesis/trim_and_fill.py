"""Trim and fill (Duval & Tweedie 2000a, b), estimators L₀ and R₀, many literatures at once.

Results on the side that selection spares, the right, are trimmed until the rest is symmetric around
its own centre; mirror images of the trimmed ones are then filled in on the left.
"""

from __future__ import annotations

from typing import Literal, NamedTuple, TypeAlias

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, BoolArray
from netsize.synthesis.confidence import symmetric, unusable
from netsize.synthesis.heterogeneity import Heterogeneity
from netsize.synthesis.padding import guarded
from netsize.synthesis.random_effects import IntervalRule, PooledMany, pool_many
from netsize.synthesis.records import Estimate

__all__ = ["Asymmetry", "Filled", "trim_and_fill", "trim_and_fill_many"]

Asymmetry: TypeAlias = Literal["L0", "R0"]
_ROUNDS = 100


class Filled(NamedTuple):
    """Pooled after filling; number filled, centre of the trimmed set and convergence, (...)."""

    pooled: PooledMany
    number: Array
    centre: Array
    converged: BoolArray


def trim_and_fill_many(
    estimates: ArrayLike,
    variances: ArrayLike,
    mask: ArrayLike | None = None,
    *,
    asymmetry: Asymmetry = "L0",
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
) -> Filled:
    """Trim and fill each literature of an array (..., k).

    Notes
    -----
    With ranks of |y - centre| (average ranks for ties; deviations within 1e-9 of each other tie),
    S the rank sum right of the centre and γ the number of results right of the centre and further
    from it than any on the left: L₀ = (4S - k(k+1))/(2k-1), R₀ = γ - 1, each rounded to the nearest
    integer, at least 0. A search that circles between two numbers has not converged.
    """
    y, v, present, k = guarded(estimates, variances, mask)
    # largest first, padding last; ties by variance so that the order of results cannot matter
    order = np.lexsort((v, np.where(present > 0, -y, np.inf)), axis=-1)
    y, v, present = (np.take_along_axis(a, order, axis=-1) for a in (y, v, present))
    position = np.broadcast_to(np.arange(y.shape[-1]), y.shape)
    there = present > 0
    missing = np.zeros(k.shape, dtype=int)
    converged = np.zeros(k.shape, dtype=bool)
    centre = np.full(k.shape, np.nan)
    estimator = _l0 if asymmetry == "L0" else _r0
    most = np.maximum(k - 1, 0)
    for _ in range(_ROUNDS):
        kept = there & (position >= missing[..., None])
        centre = pool_many(y, v, kept, heterogeneity=heterogeneity).mean
        raw = estimator(*_deviations(y, present, centre), k)
        renewed = np.floor(np.clip(np.nan_to_num(raw), 0, most) + 0.5)
        renewed = np.minimum(renewed, most).astype(int)
        converged = renewed == missing
        if converged.all():
            break
        missing = np.where(converged, missing, renewed)
    mirrored = position < missing[..., None]
    pooled = pool_many(
        np.concatenate([y, 2 * centre[..., None] - y], axis=-1),
        np.concatenate([v, v], axis=-1),
        np.concatenate([there, there & mirrored], axis=-1),
        heterogeneity=heterogeneity,
        interval=interval,
        level=level,
    )
    return Filled(pooled, missing, centre, converged)


def trim_and_fill(
    estimates: ArrayLike,
    variances: ArrayLike,
    *,
    asymmetry: Asymmetry = "L0",
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
) -> Estimate:
    """Trim and fill as one row; needs k ≥ 3."""
    key = "trim-and-fill" if asymmetry == "L0" else "trim-and-fill-run"
    label = f"Trim and fill {'L₀' if asymmetry == 'L0' else 'R₀'}"
    used = int(np.size(estimates))
    if used < 3:
        return unusable(
            key, label, level=level, used=used, reason="symmetry cannot be judged below three"
        )
    fit = trim_and_fill_many(
        estimates,
        variances,
        asymmetry=asymmetry,
        heterogeneity=heterogeneity,
        interval=interval,
        level=level,
    )
    filled = int(fit.number)
    done = bool(fit.converged) and bool(fit.pooled.converged)
    reason = "no result filled in" if filled == 0 else f"{filled} filled in on the left"
    if not done:
        reason = f"trimming went round in circles; shown with {filled} filled in"
    return symmetric(
        key,
        label,
        estimate=float(fit.pooled.mean),
        se=float(fit.pooled.se),
        df=float(fit.pooled.df),
        level=level,
        used=used,
        tau2=float(fit.pooled.tau2),
        status="fine" if done else "did not converge",
        reason=reason,
    )


def _deviations(y: Array, present: Array, centre: Array) -> tuple[Array, Array]:
    """Deviations from the centre, tied ones made equal, and the average ranks of their size."""
    deviation = present * (y - centre[..., None])
    scale = np.abs(deviation).max(axis=-1, keepdims=True)
    with np.errstate(all="ignore"):
        deviation = np.nan_to_num(np.round(deviation / scale, 9))
    size = np.where(present > 0, np.abs(deviation), np.inf)
    return deviation, np.where(present > 0, _average_ranks(size), 0.0)


def _average_ranks(values: Array) -> Array:
    """Ranks along the last axis, from 1; ties share the mean of theirs."""
    order = np.argsort(values, axis=-1, kind="stable")
    ordered = np.take_along_axis(values, order, axis=-1)
    place = np.broadcast_to(np.arange(values.shape[-1]), values.shape)
    new = np.ones(values.shape, dtype=bool)
    new[..., 1:] = ordered[..., 1:] != ordered[..., :-1]
    last = np.ones(values.shape, dtype=bool)
    last[..., :-1] = new[..., 1:]
    first = np.maximum.accumulate(np.where(new, place, 0), axis=-1)
    final = np.where(last, place, values.shape[-1])
    final = np.minimum.accumulate(final[..., ::-1], axis=-1)[..., ::-1]
    ranks = np.empty(values.shape)
    np.put_along_axis(ranks, order, (first + final) / 2 + 1.0, axis=-1)
    return ranks


def _l0(deviation: Array, ranks: Array, k: Array) -> Array:
    rank_sum = np.where(deviation > 0, ranks, 0.0).sum(axis=-1)
    return np.asarray((4 * rank_sum - k * (k + 1)) / (2 * k - 1))


def _r0(deviation: Array, ranks: Array, k: Array) -> Array:
    furthest_left = np.where(deviation < 0, ranks, 0.0).max(axis=-1, keepdims=True)
    run = ((deviation > 0) & (ranks > furthest_left)).sum(axis=-1)
    return np.asarray(run - 1.0)
