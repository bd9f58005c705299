"""How test statistics are distributed under the alternative, and when they are significant.

A law gives the probability that a test of its kind rejects in the predicted direction, as an array
function of

    tail        level of one tail, in (0, 1),
    ncp         root noncentrality: δ of a t or z statistic, √λ of an F or chi-square,
    parameters  whatever else shapes the statistic (degrees of freedom first), a tuple of arrays.

Everything broadcasts. `needed` is the root noncentrality that gives about the power asked for; it
only starts searches.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.polynomial.legendre import leggauss
from scipy.special import (
    betainccinv,
    betaincinv,
    chdtri,
    gammainccinv,
    gammaincinv,
    gammaln,
    ndtr,
    ndtri,
    stdtrit,
    xlogy,
)

from netsize.numerics import correlation, noncentral_chi2, noncentral_f, noncentral_t
from netsize.numerics.arrays import Array, broadcast
from netsize.numerics.roots import increasing_root

__all__ = ["CHI_SQUARE", "CORRELATION", "EQUIVALENCE", "NORMAL", "ONE_SIDED_T", "WELCH", "F", "T"]
__all__ += ["Law", "Parameters", "t_critical"]

Parameters: TypeAlias = tuple[Array, ...]
Chance: TypeAlias = Callable[[float, Array, Parameters], Array]


@dataclass(frozen=True, slots=True)
class Law:
    """One kind of test.

    Attributes
    ----------
    name : of the statistic, in words.
    chance : P(significant in the predicted direction).
    directional : whether there is an opposite direction, whose chance is that of -ncp; F,
        chi-square and equivalence tests have none and take the whole level in one tail.
    needed : see the module.
    error_df : whether the parameters hold error degrees of freedom; clusters, not participants,
        supply them.
    covariable : whether covariates can lower the error variance, each for one error degree of
        freedom, the last parameter.
    """

    name: str
    chance: Chance
    needed: Chance
    directional: bool
    error_df: bool
    covariable: bool


def t_critical(tail: float, df: Array) -> Array:
    """t with P(T > t) = tail for central t, from the tail itself: small levels keep digits."""
    return -np.asarray(stdtrit(df, tail))


def _t_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    (df,) = parameters
    return noncentral_t.upper_tail(t_critical(tail, df), df, ncp)


def _t_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    """From the normal approximation to noncentral t (Abramowitz & Stegun 1964, 26.7.10)."""
    df = parameters[-1]
    c = t_critical(tail, df)
    return np.asarray(c * (1 - 1 / (4 * df)) + ndtri(power) * np.sqrt(1 + c * c / (2 * df)))


def _normal_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    null_spread, shift = parameters
    return np.asarray(ndtr(ncp - shift + ndtri(tail) * null_spread))


def _normal_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    null_spread, shift = parameters
    return np.asarray(shift - ndtri(tail) * null_spread + ndtri(power))


def f_critical(tail: float, df1: Array, df2: Array) -> Array:
    """F with P(F > f) = tail; from the beta quantile of the tail, which keeps small levels."""
    share = betainccinv(df1 / 2, df2 / 2, tail)
    return np.asarray(df2 * share / (df1 * (1 - share)))


def _f_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    df1, df2 = parameters
    return noncentral_f.upper_tail(f_critical(tail, df1, df2), df1, df2, ncp * ncp)


def _chi_square_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    (df,) = parameters
    return noncentral_chi2.upper_tail(chdtri(df, tail), df, ncp * ncp)


def _chi_square_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    df = parameters[0]

    def excess(ncp: Array, df: Array, power: Array) -> Array:
        return _chi_square_chance(tail, ncp, (df,)) - power

    levels, inverse = np.unique(np.stack(broadcast(df, power)), axis=1, return_inverse=True)
    roots = increasing_root(excess, 0.0, 60.0 + np.sqrt(levels[0]), levels[0], levels[1])
    return np.asarray(np.maximum(roots, 0.0)[inverse]).reshape(np.broadcast(df, power).shape)


def _correlation_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """Exact (Hotelling 1953); the parameters hold |ρ|, the noncentrality its sign."""
    rho, n = parameters
    c = t_critical(tail, n - 2)
    return correlation.upper_tail(c / np.sqrt(n - 2 + c * c), np.copysign(rho, ncp), n)


def _correlation_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    n = parameters[1]
    c = t_critical(tail, n - 2)
    return np.asarray(np.arcsinh(c / np.sqrt(n - 2)) * np.sqrt(n - 3) + ndtri(power))


_NODES, _WEIGHTS = leggauss(48)
_RARE = 1e-17  # probability cut off at each end of an integral


def _equivalence_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """Both one-sided t tests significant, δ = ±ncp at the margins (Schuirmann 1987).

    With S = √(χ²/ν) the estimate must fall within (c S - (1+ρ)δ, (1-ρ)δ - c S), ρ the true effect
    over the margin, so the power is one integral over S up to δ/c, which is the difference of two
    of Owen's (1965) Q functions; taking the difference under the integral keeps its digits.
    """
    relative, df, ncp = broadcast(parameters[0], parameters[1], ncp)
    c = t_critical(tail, df)
    with np.errstate(all="ignore"):
        top = np.minimum(np.sqrt(2 * gammainccinv(df / 2, _RARE) / df), ncp / c)
        bottom = np.minimum(np.sqrt(2 * gammaincinv(df / 2, _RARE) / df), top)
        half = (top - bottom) / 2
        s = (bottom + half)[..., None] + half[..., None] * _NODES
        nu, c, ncp, relative = (a[..., None] for a in (df, c, ncp, relative))
        log_density = (
            np.log(2)
            + nu / 2 * np.log(nu / 2)
            - gammaln(nu / 2)
            + xlogy(nu - 1, s)
            - nu * s * s / 2
        )
        inside = ndtr((1 - relative) * ncp - c * s) - ndtr(c * s - (1 + relative) * ncp)
        total = half * ((np.exp(log_density) * inside) @ _WEIGHTS)
    return np.asarray(np.clip(total, 0.0, 1.0))


def _equivalence_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    """Either test near its margin decides; without a true difference both do."""
    relative, df = parameters
    both = ndtri((1 + power) / 2)
    z = np.where(np.abs(relative) < 0.1, both, ndtri(power))
    return np.asarray((t_critical(tail, df) + z) / np.maximum(1 - np.abs(relative), 1e-12))


def _welch_chance(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """Welch's (1938) test, exact for normal data.

    Given u = V₁/(V₁+V₂), Beta(ν₁/2, ν₂/2), the test's own degrees of freedom are fixed and its
    statistic is a multiple of noncentral t on ν₁+ν₂; integrated over u = sin² x.
    """
    nu1, nu2, share, ncp = (a[..., None] for a in broadcast(*parameters, ncp))
    low = np.arcsin(np.sqrt(betaincinv(nu1 / 2, nu2 / 2, _RARE)))
    high = np.pi / 2 - np.arcsin(np.sqrt(betaincinv(nu2 / 2, nu1 / 2, _RARE)))
    x = (low + high) / 2 + (high - low) / 2 * _NODES
    log_weight = xlogy(nu1 - 1, np.sin(x)) + xlogy(nu2 - 1, np.cos(x))
    weight = np.exp(log_weight - log_weight.max(axis=-1, keepdims=True)) * _WEIGHTS
    first = share * np.sin(x) ** 2 / nu1
    second = (1 - share) * np.cos(x) ** 2 / nu2
    df = (first + second) ** 2 / (first**2 / nu1 + second**2 / nu2)
    nu = nu1 + nu2
    critical = t_critical(tail, df) * np.sqrt(nu * (first + second))
    chance = noncentral_t.upper_tail(critical, nu, ncp)
    return np.asarray((chance * weight).sum(axis=-1) / weight.sum(axis=-1))


def _welch_needed(tail: float, power: Array, parameters: Parameters) -> Array:
    nu1, nu2, share = parameters
    df = 1 / (share**2 / nu1 + (1 - share) ** 2 / nu2)
    return _t_needed(tail, power, (df,))


T = Law("t", _t_chance, _t_needed, directional=True, error_df=True, covariable=True)
ONE_SIDED_T = Law("t", _t_chance, _t_needed, directional=False, error_df=True, covariable=True)
WELCH = Law(
    "Welch's t", _welch_chance, _welch_needed, directional=True, error_df=True, covariable=False
)
EQUIVALENCE = Law(
    "two t",
    _equivalence_chance,
    _equivalence_needed,
    directional=False,
    error_df=True,
    covariable=True,
)
F = Law("F", _f_chance, _chi_square_needed, directional=False, error_df=True, covariable=True)
CHI_SQUARE = Law(
    "chi-square",
    _chi_square_chance,
    _chi_square_needed,
    directional=False,
    error_df=False,
    covariable=False,
)
NORMAL = Law(
    "z", _normal_chance, _normal_needed, directional=True, error_df=False, covariable=False
)
CORRELATION = Law(
    "r",
    _correlation_chance,
    _correlation_needed,
    directional=True,
    error_df=False,
    covariable=False,
)
