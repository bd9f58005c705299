"""How wide the interval will be: half-widths of exact intervals, and the study that narrows them.

The interval is exact where the law allows: for a standardized mean difference from noncentral t
(Steiger & Fouladi 1997; Kelley & Rausch 2006), for f and f² from noncentral F (Steiger 2004), for a
correlation from its exact distribution; for designs with a normal test it is estimate ± z·SE.
Half-widths are on the design's own scale.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.polynomial.hermite_e import hermegauss
from numpy.typing import ArrayLike
from scipy.special import ndtr, ndtri

from netsize.errors import SettingError
from netsize.numerics import correlation, noncentral_f, noncentral_t
from netsize.numerics.arrays import Array, BoolArray, IntArray, broadcast
from netsize.numerics.roots import increasing_root
from netsize.numerics.search import smallest_integer
from netsize.sizing.laws import CORRELATION, NORMAL, F, T
from netsize.sizing.study import LARGEST, Study

__all__ = ["assured_half_width", "expected_half_width", "has_interval", "observed_half_width"]
__all__ += ["units_for_half_width"]

# Normal scores and weights over which half-widths are averaged. That of an F test has a kink where
# the lower limit leaves 0, which Gaussian nodes resolve badly: 1 % against 0.03 % this way.
_SMOOTH = hermegauss(9)
_KINKED = (np.linspace(-4.5, 4.5, 61), np.exp(-(np.linspace(-4.5, 4.5, 61) ** 2) / 2))
_MANY = 1e6
_HUGE = 20_000.0


def has_interval(study: Study) -> bool:
    """Whether the design's effect has an interval here."""
    return study.design.law in (T, F, CORRELATION, NORMAL)


def observed_half_width(study: Study, units: ArrayLike, estimate: ArrayLike, level: float) -> Array:
    """Half the width of the interval once `estimate` is observed; broadcast.

    `level` in (0, 1). At estimate = effect this is the planning convention of Kelley & Rausch
    (2006).
    """
    units, estimate = broadcast(units, estimate)
    upper, lower = (1 - level) / 2, (1 + level) / 2
    law = study.design.law
    if law is NORMAL:
        return np.asarray(-ndtri(upper) * study.standard_error(units, estimate))
    ncp, parameters = study.terms(units, estimate)
    if law is CORRELATION:
        n = parameters[1]
        low, high = (correlation.coefficient(estimate, n, p) for p in (lower, upper))
        return np.asarray((high - low) / 2)
    if law is T:
        low, high = (_t_limit(ncp, parameters[0], p) for p in (lower, upper))
    elif law is F:
        # the estimate as the statistic shows it: F = 1 + λ/df₁ has mean λ at its expectation
        df1, df2 = parameters
        statistic = 1 + ncp * ncp / df1
        with np.errstate(over="ignore"):  # tails of enormous λ, which are 0
            low, high = (
                np.sqrt(noncentral_f.noncentrality(statistic, df1, df2, p)) for p in (lower, upper)
            )
    else:
        raise SettingError(
            "--half-width",
            f"the design {study.design.name} has no interval for its effect; designs of means, "
            "variance, regression, correlations and proportions have",
        )
    with np.errstate(invalid="ignore"):  # an endless estimate of a tiny study: endless width
        width = (_effect(study, units, high) - _effect(study, units, low)) / 2
    return np.where(np.isnan(width), np.inf, width)


def _t_limit(t: Array, df: Array, probability: float) -> Array:
    """The δ with P(T ≤ t) = probability; for t beyond 20,000, where the exact search takes seconds,
    from the normal approximation (Abramowitz & Stegun 1964, 26.7.10), off by about 1/df there."""
    t, df = broadcast(t, df)
    limit = np.array(t * (1 - 1 / (4 * df)) - ndtri(probability) * np.sqrt(1 + t * t / (2 * df)))
    usual = (np.abs(t) < _HUGE) | (df < 100)
    limit[usual] = noncentral_t.noncentrality(t[usual], df[usual], probability)
    return limit


def _effect(study: Study, units: Array, ncp: Array) -> Array:
    """The effect on the design's own scale with a given root noncentrality."""
    return np.asarray((ncp / study.terms(units, np.ones_like(units))[0]) ** study.design.degree)


def _quantile(
    tail: Callable[..., Array], low: Array, high: Array, score: Array, *arguments: Array
) -> Array:
    """The x at which a distribution has the normal score given."""

    def excess(x: Array, probability: Array, *arguments: Array) -> Array:
        return tail(x, *arguments) - probability

    return increasing_root(excess, low, high, ndtr(score), *arguments)


def _reach(ncp: Array, df: Array) -> Array:
    """A distance from ncp beyond which noncentral t, df ≥ 2, has less than 1e-6 on either side."""
    return np.asarray(10 * (1 + np.abs(ncp) / np.sqrt(df)) * 10 ** np.minimum(6 / df, 3))


def _estimates(study: Study, units: Array, effect: Array, score: Array) -> Array:
    """The estimates at given normal scores of their distribution."""
    ncp, parameters = study.terms(units, effect)
    if study.design.law is T:
        df = np.broadcast_to(parameters[-1], units.shape)
        reach = _reach(ncp, df)
        t = np.array(ncp + score * np.sqrt(1 + ncp * ncp / (2 * df)))  # in large samples
        usual = (np.abs(ncp) < _HUGE) | (df < 100)
        low, high, df, ncp = (a[usual] for a in (ncp - reach, ncp + reach, df, ncp))
        t[usual] = _quantile(noncentral_t.lower_tail, low, high, score[usual], df, ncp)
        return _effect(study, units, t)
    if study.design.law is F:
        df1, df2 = parameters
        top = 20 * (1 + ncp * ncp / df1) * (1 + 20 / df2) ** 2 + 100
        statistic = _quantile(
            noncentral_f.lower_tail, np.zeros_like(top), top, score, df1, df2, ncp * ncp
        )
        # the inverse of `observed_half_width`; below 1 it stands for no effect
        return _effect(study, units, np.sqrt(df1 * np.maximum(statistic - 1, 0.0)))
    n = np.broadcast_to(parameters[1], units.shape)
    middle, reach = np.arctanh(effect), 10 / np.sqrt(np.maximum(n - 3, 0.2))

    def z_tail(z: Array, n: Array, rho: Array) -> Array:
        return correlation.lower_tail(np.tanh(z), rho, n)

    return np.tanh(_quantile(z_tail, middle - reach, middle + reach, score, n, effect))


def expected_half_width(study: Study, units: ArrayLike, effect: ArrayLike, level: float) -> Array:
    """Mean half-width over the estimates that a study of this effect may give; broadcast.

    Infinite with one error degree of freedom, where noncentral t has no mean.
    """
    units, effect = broadcast(units, effect)
    if study.design.law is NORMAL:
        return observed_half_width(study, units, effect, level)
    if study.design.law is T:
        mean = study.terms(units, effect)[1][-1] > 1
        widths = np.full(units.shape, np.inf)
        widths[mean] = _averaged(study, units[mean], effect[mean], level)
        return widths
    return _averaged(study, units, effect, level)


def _averaged(study: Study, units: Array, effect: Array, level: float) -> Array:
    nodes, weights = _KINKED if study.design.law is F else _SMOOTH
    units, effect, score = broadcast(units[..., None], effect[..., None], nodes)
    estimates = _estimates(study, units, effect, score)
    widths = observed_half_width(study, units, estimates, level)
    return np.asarray(widths @ weights / weights.sum())


def assured_half_width(
    study: Study, units: ArrayLike, effect: ArrayLike, level: float, assurance: float
) -> Array:
    """The half-width that the interval keeps within with probability `assurance`; broadcast.

    Wider for larger |d| and for smaller |r|, so a quantile of |estimate| decides.
    """
    units, effect = broadcast(units, effect)
    law = study.design.law
    if law is F:
        raise SettingError(
            "--assurance", "the half-width for an F test is planned on average only; leave it out"
        )
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

    high = np.abs(ncp) + _reach(ncp, rest) if law is T else np.ones_like(units)
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

    def width(units: Array, effect: Array) -> Array:
        if assurance is None:
            return expected_half_width(study, units, effect, level)
        return assured_half_width(study, units, effect, level, assurance)

    def reaches(units: Array, effect: Array, target: Array) -> BoolArray:
        return np.asarray(width(units, effect) <= target)

    # half-widths shrink as the root of the size
    units = np.full(effect.shape, _MANY)
    units = units * (observed_half_width(study, units, effect, level) / target) ** 2
    units = np.clip(units, study.first + 10.0, LARGEST)
    units = np.clip(units * (width(units, effect) / target) ** 2, study.first, LARGEST)
    return smallest_integer(reaches, effect, target, first=study.first, last=LARGEST, guess=units)
