"""Between-study variance τ²: six estimators and the Q-profile interval, many literatures at once.

Throughout y_i ~ N(μ, v_i + τ²) with known v_i, w_i = 1/(v_i + τ²), W = Σw and m = Σwy/W. Arrays are
(..., k) with an optional mask that is False for padding; results have shape (...).

Every root and maximum lies in [0, R²], R the range of the estimates: |y_i - m| is at most
(1 - w_i/W)R and w_i at most 1/τ², so beyond R² the restricted score Σw²(y-m)² - Σw(1 - w/W), the
likelihood score Σw²(y-m)² - Σw and Q - (k-1) are all negative.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal, NamedTuple, TypeAlias, get_args

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import chdtri

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray
from netsize.numerics.roots import increasing_root
from netsize.synthesis.padding import Padded, guarded

__all__ = ["HETEROGENEITY", "Heterogeneity", "TauSquared", "q_profile", "tau_squared"]

Heterogeneity: TypeAlias = Literal[
    "restricted-likelihood",
    "likelihood",
    "dersimonian-laird",
    "paule-mandel",
    "sidik-jonkman",
    "hedges",
]
HETEROGENEITY: tuple[str, ...] = get_args(Heterogeneity)

# Fractions of R² at which a likelihood is scanned before its maximum is refined.
_SCAN = np.concatenate([[0.0], np.geomspace(1e-5, 1.0, 31)])


class TauSquared(NamedTuple):
    """τ² (at least 0; nan for fewer than two results) and whether the search converged."""

    value: Array
    converged: BoolArray


def tau_squared(
    estimates: ArrayLike,
    variances: ArrayLike,
    mask: ArrayLike | None = None,
    *,
    method: Heterogeneity = "restricted-likelihood",
) -> TauSquared:
    """Estimate τ² of each literature.

    Parameters
    ----------
    estimates, variances : y_i and v_i > 0, shape (..., k). mask : False for padding.
    method : "restricted-likelihood" (REML; Raudenbush 2009), "likelihood" (ML),
        "dersimonian-laird" (1986), "paule-mandel" (1982), "sidik-jonkman" (2005; starting value
        Σ(y-ȳ)²/k) or "hedges" (Hedges & Olkin 1985, unweighted moments).
    """
    if method not in _METHODS:
        raise SettingError(
            "--heterogeneity", f"{method!r} is not one of {', '.join(HETEROGENEITY)}; choose one"
        )
    data = guarded(estimates, variances, mask)
    with np.errstate(all="ignore"):
        value, converged = _METHODS[method](data)
    enough = data.number >= 2
    return TauSquared(np.where(enough, value, np.nan), converged | ~enough)


def q_profile(
    estimates: ArrayLike,
    variances: ArrayLike,
    mask: ArrayLike | None = None,
    *,
    level: float = 0.95,
) -> tuple[Array, Array]:
    """Interval for τ² from the exact chi-square law of the generalised Q (Viechtbauer 2007).

    Both ends are 0 where Q at τ² = 0 is already below the lower chi-square quantile; nan for fewer
    than two results.
    """
    data = _flat(guarded(estimates, variances, mask))
    df = np.maximum(data.number - 1, 1)
    spread = _spread(data)
    ends = []
    for tail in ((1 - level) / 2, (1 + level) / 2):  # upper quantile gives the lower end
        target = chdtri(df, tail)
        # Q(τ²) is at most Σ(y-ȳ)²/τ², which brackets the root
        root = _root(_q_deficit, data, np.zeros_like(df), 1.01 * spread / target, target)
        ends.append(np.where(data.number >= 2, np.where(root == -np.inf, 0.0, root), np.nan))
    shape = np.shape(guarded(estimates, variances, mask).number)
    return ends[0].reshape(shape), ends[1].reshape(shape)


def _dersimonian_laird(data: Padded) -> tuple[Array, BoolArray]:
    w = data.present / data.variances
    total = w.sum(axis=-1)
    q = _q(data, w)
    c = total - (w * w).sum(axis=-1) / total
    return _done((q - (data.number - 1)) / c)


def _hedges(data: Padded) -> tuple[Array, BoolArray]:
    mean_variance = (data.present * data.variances).sum(axis=-1) / data.number
    return _done(_spread(data) / (data.number - 1) - mean_variance)


def _sidik_jonkman(data: Padded) -> tuple[Array, BoolArray]:
    crude = _spread(data) / data.number
    w = data.present / (data.variances / crude[..., None] + 1)
    value = _q(data, w) / (data.number - 1)
    return _done(np.where(crude > 0, value, 0.0))


def _paule_mandel(data: Padded) -> tuple[Array, BoolArray]:
    flat = _flat(data)
    df = flat.number - 1
    root = _root(_q_deficit, flat, np.zeros_like(df), _bound(flat), df)
    value = np.where(root == -np.inf, 0.0, root).reshape(data.number.shape)
    return np.where(np.isfinite(value), value, np.nan), np.isfinite(value)


def _restricted_likelihood(data: Padded) -> tuple[Array, BoolArray]:
    return _maximum(data, restricted=1.0)


def _likelihood(data: Padded) -> tuple[Array, BoolArray]:
    return _maximum(data, restricted=0.0)


_METHODS: dict[str, Callable[[Padded], tuple[Array, BoolArray]]] = {
    "restricted-likelihood": _restricted_likelihood,
    "likelihood": _likelihood,
    "dersimonian-laird": _dersimonian_laird,
    "paule-mandel": _paule_mandel,
    "sidik-jonkman": _sidik_jonkman,
    "hedges": _hedges,
}


def _maximum(data: Padded, restricted: float) -> tuple[Array, BoolArray]:
    """The global maximum of the (restricted) profile likelihood: scan, then root of the score."""
    flat = _flat(data)
    bound = _bound(flat)
    scan = np.stack([_log_likelihood(flat, f * bound, restricted) for f in _SCAN])
    best = scan.argmax(axis=0)
    centre = _SCAN[best] * bound
    rising = _score_deficit(flat, centre, np.full_like(bound, restricted)) < 0
    low = np.where(rising, centre, _SCAN[np.maximum(best - 1, 0)] * bound)
    high = np.where(rising, _SCAN[np.minimum(best + 1, _SCAN.size - 1)] * bound, centre)
    root = _root(_score_deficit, flat, low, high, np.full_like(bound, restricted))
    at_zero = (best == 0) & ~rising
    value = np.where(at_zero, 0.0, np.where(np.isfinite(root), root, centre))
    converged = at_zero | np.isfinite(root)
    return value.reshape(data.number.shape), converged.reshape(data.number.shape)


def _log_likelihood(data: Padded, tau2: Array, restricted: float) -> Array:
    total_variance = data.variances + tau2[:, None]
    w = data.present / total_variance
    determinant = (data.present * np.log(total_variance)).sum(axis=-1)
    return np.asarray(
        -0.5 * (determinant + restricted * np.log(w.sum(axis=-1)) + _q(data, w)), dtype=float
    )


def _score_deficit(data: Padded, tau2: Array, restricted: Array) -> Array:
    """Minus twice the derivative of the log-likelihood by τ²."""
    w = data.present / (data.variances + tau2[:, None])
    total = w.sum(axis=-1, keepdims=True)
    deviation = data.estimates - (w * data.estimates).sum(axis=-1, keepdims=True) / total
    return np.asarray(
        (w * (1 - restricted[:, None] * w / total) - (w * deviation) ** 2).sum(axis=-1)
    )


def _q_deficit(data: Padded, tau2: Array, target: Array) -> Array:
    return target - _q(data, data.present / (data.variances + tau2[:, None]))


def _q(data: Padded, w: Array) -> Array:
    mean = (w * data.estimates).sum(axis=-1, keepdims=True) / w.sum(axis=-1, keepdims=True)
    return np.asarray((w * (data.estimates - mean) ** 2).sum(axis=-1))


def _spread(data: Padded) -> Array:
    """Σ(y-ȳ)² with equal weights."""
    return _q(data, data.present)


def _bound(data: Padded) -> Array:
    there = data.present > 0
    highest = np.where(there, data.estimates, -np.inf).max(axis=-1, initial=-np.inf)
    lowest = np.where(there, data.estimates, np.inf).min(axis=-1, initial=np.inf)
    return np.asarray(np.where(data.number > 0, 1.01 * (highest - lowest) ** 2, 0.0))


def _root(
    function: Callable[[Padded, Array, Array], Array],
    data: Padded,
    low: Array,
    high: Array,
    parameter: Array,
) -> Array:
    """Root in τ² for each literature; the search drops those that are finished."""

    def chosen(tau2: Array, row: Array, parameter: Array) -> Array:
        rows = row.astype(np.int64)
        return function(Padded(*(part[rows] for part in data)), tau2, parameter)

    return increasing_root(chosen, low, high, np.arange(low.size), parameter)


def _flat(data: Padded) -> Padded:
    width = data.estimates.shape[-1]
    return Padded(
        data.estimates.reshape(-1, width),
        data.variances.reshape(-1, width),
        data.present.reshape(-1, width),
        data.number.reshape(-1),
    )


def _done(value: Array) -> tuple[Array, BoolArray]:
    return np.maximum(value, 0.0), np.ones(np.shape(value), dtype=bool)
