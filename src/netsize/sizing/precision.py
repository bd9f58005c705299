"""How wide the interval will be: half-widths of exact intervals, and the study that narrows them.

The interval is exact where the law allows: for a standardized mean difference from noncentral t
(Steiger & Fouladi 1997; Kelley & Rausch 2006), for a correlation from its exact distribution; for
designs with a normal test it is estimate ± z·SE. Half-widths are on the design's own scale.
"""

from __future__ import annotations

import numpy as np
from numpy.polynomial.hermite_e import hermegauss
from numpy.typing import ArrayLike
from scipy.special import ndtr, ndtri

from netsize.errors import SettingError
from netsize.numerics import correlation, noncentral_t
from netsize.numerics.arrays import Array, BoolArray, IntArray, broadcast
from netsize.numerics.roots import increasing_root
from netsize.numerics.search import smallest_integer
from netsize.sizing.laws import CORRELATION, NORMAL, T
from netsize.sizing.study import LARGEST, Study

__all__ = ["assured_half_width", "expected_half_width", "has_interval", "observed_half_width"]
__all__ += ["units_for_half_width"]

_NODES, _WEIGHTS = hermegauss(9)
_WEIGHTS = _WEIGHTS / _WEIGHTS.sum()
_MANY = 1e6


def has_interval(study: Study) -> bool:
    """Whether the design's effect has an interval here."""
    return study.design.law in (T, CORRELATION, NORMAL)


def observed_half_width(study: Study, units: ArrayLike, estimate: ArrayLike, level: float) -> Array:
    """Half the width of the interval once `estimate` is observed; broadcast.

    `level` in (0, 1). At estimate = effect this is the planning convention of Kelley & Rausch
    (2006, eq. 14 onward).
    """
    units, estimate = broadcast(units, estimate)
    upper, lower = (1 - level) / 2, (1 + level) / 2
    ncp, parameters = study.terms(units, estimate)
    if study.design.law is T:
        (df,) = parameters
        scale = study.terms(units, np.ones_like(estimate))[0]
        width = noncentral_t.noncentrality(ncp, df, upper) - noncentral_t.noncentrality(
            ncp, df, lower
        )
        return np.asarray(width / scale / 2)
    if study.design.law is CORRELATION:
        n = np.broadcast_to(parameters[1], units.shape)
        width = correlation.coefficient(estimate, n, upper) - correlation.coefficient(
            estimate, n, lower
        )
        return np.asarray(width / 2)
    if study.design.law is NORMAL:
        return np.asarray(-ndtri(upper) * study.standard_error(units, estimate))
    raise SettingError(
        "--half-width",
        f"the design {study.design.name} has no interval for its effect; designs of means, "
        "correlations and proportions have",
    )


def _estimates(study: Study, units: Array, effect: Array, score: Array) -> Array:
    """The estimates at given normal scores of their distribution."""
    probability = ndtr(score)
    ncp, parameters = study.terms(units, effect)
    if study.design.law is T:
        df = np.broadcast_to(parameters[-1], units.shape)

        def t_excess(t: Array, df: Array, ncp: Array, probability: Array) -> Array:
            return noncentral_t.lower_tail(t, df, ncp) - probability

        reach = 10 * (1 + np.abs(ncp) / np.sqrt(df)) * (1 + 20 / df)
        t = increasing_root(t_excess, ncp - reach, ncp + reach, df, ncp, probability)
        return np.asarray(t / study.terms(units, np.ones_like(units))[0])
    n = np.broadcast_to(parameters[1], units.shape)

    def z_excess(z: Array, n: Array, rho: Array, probability: Array) -> Array:
        return correlation.lower_tail(np.tanh(z), rho, n) - probability

    middle, reach = np.arctanh(effect), 10 / np.sqrt(np.maximum(n - 3, 0.2))
    z = increasing_root(z_excess, middle - reach, middle + reach, n, effect, probability)
    return np.tanh(z)


def expected_half_width(study: Study, units: ArrayLike, effect: ArrayLike, level: float) -> Array:
    """Mean half-width over the estimates that a study of this effect may give; broadcast."""
    units, effect = broadcast(units, effect)
    if study.design.law not in (T, CORRELATION):
        return observed_half_width(study, units, effect, level)
    units, effect, score = broadcast(units[..., None], effect[..., None], _NODES)
    estimates = _estimates(study, units, effect, score)
    return np.asarray(observed_half_width(study, units, estimates, level) @ _WEIGHTS)


def assured_half_width(
    study: Study, units: ArrayLike, effect: ArrayLike, level: float, assurance: float
) -> Array:
    """The half-width that the interval keeps within with probability `assurance`; broadcast.

    Wider for larger |d| and for smaller |r|, so a quantile of |estimate| decides.
    """
    units, effect = broadcast(units, effect)
    law = study.design.law
    if law not in (T, CORRELATION):
        return observed_half_width(study, units, effect, level)
    share = assurance if law is T else 1 - assurance
    ncp, parameters = study.terms(units, effect)
    rest = np.broadcast_to(parameters[-1], units.shape)

    def excess(x: Array, ncp: Array, rho: Array, rest: Array) -> Array:
        if law is T:
            inside = noncentral_t.lower_tail(x, rest, ncp) - noncentral_t.lower_tail(-x, rest, ncp)
        else:
            inside = correlation.lower_tail(x, rho, rest) - correlation.lower_tail(-x, rho, rest)
        return inside - share

    high = (
        np.abs(ncp) + 10 * (1 + np.abs(ncp) / np.sqrt(rest)) * (1 + 20 / rest)
        if law is T
        else np.ones_like(units)
    )
    size = increasing_root(excess, 0.0, high, ncp, effect, rest)
    estimate = size / study.terms(units, np.ones_like(units))[0] if law is T else size
    return observed_half_width(study, units, estimate, level)


def units_for_half_width(
    study: Study, effect: ArrayLike, target: ArrayLike, level: float, assurance: float | None
) -> tuple[IntArray, BoolArray]:
    """The fewest units whose expected half-width is at most the target, elementwise.

    With an `assurance`, those whose half-width is at most the target with that probability.
    """
    effect, target = broadcast(effect, target)

    def reaches(units: Array, effect: Array, target: Array) -> BoolArray:
        if assurance is None:
            return np.asarray(expected_half_width(study, units, effect, level) <= target)
        return np.asarray(assured_half_width(study, units, effect, level, assurance) <= target)

    many = np.full(effect.shape, _MANY)
    guess = _MANY * (observed_half_width(study, many, effect, level) / target) ** 2
    return smallest_integer(
        reaches, effect, target, first=study.first, last=LARGEST, guess=np.ceil(guess)
    )
