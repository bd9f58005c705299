"""What a significant result of a study is worth: sign errors and exaggeration.

Type S and type M errors (Gelman & Carlin 2014), exact for the laws with a direction: the estimate
is the statistic over its scale, as papers print it (d = t/√ñ, r), not assumed normal.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial.legendre import leggauss
from numpy.typing import ArrayLike
from scipy.special import ndtr, ndtri

from netsize.numerics import correlation, noncentral_t
from netsize.numerics.arrays import Array, broadcast
from netsize.numerics.gamma import log_half_step
from netsize.sizing.laws import CORRELATION, NORMAL, Parameters, T, t_critical
from netsize.sizing.study import Study

__all__ = ["Aftermath", "aftermath"]


@dataclass(frozen=True, slots=True, eq=False)
class Aftermath:
    """Arrays of one shape; nan where the test has no direction or its law gives no mean.

    power : P(significant). predicted : P(significant in the predicted, positive direction).
    sign_error : P(wrong sign | significant), one half for an effect of 0.
    exaggeration : E(|estimate| | significant) / |effect|, inf for an effect of 0.
    """

    power: Array
    predicted: Array
    sign_error: Array
    exaggeration: Array


def aftermath(study: Study, units: ArrayLike, effect: ArrayLike) -> Aftermath:
    """Power, sign error and exaggeration for effects on the design's own scale, broadcast."""
    units, effect = broadcast(units, effect)
    predicted, opposite = study.predicted(units, effect), study.opposite(units, effect)
    power = predicted + opposite
    nothing = np.full(units.shape, np.nan)
    if not study.design.law.directional:
        return Aftermath(power, predicted, nothing, nothing)
    wrong = np.where(effect > 0, opposite, np.where(effect < 0, predicted, power / 2))
    size = _significant_size(study, units, effect)
    with np.errstate(all="ignore"):
        return Aftermath(power, predicted, wrong / power, size / power / np.abs(effect))


def _significant_size(study: Study, units: Array, effect: Array) -> Array:
    """E(|estimate|; significant) on the design's own scale."""
    law = study.design.law
    both = study.modifiers.sides == 2
    ncp, parameters = study.terms(units, effect)
    if law is CORRELATION:
        size = _r_beyond(study.tail, ncp, parameters)
        return size + _r_beyond(study.tail, -ncp, parameters) if both else size
    if law not in (T, NORMAL):
        return np.full(units.shape, np.nan)
    beyond = _t_beyond if law is T else _z_beyond
    size = beyond(study.tail, ncp, parameters)
    if both:
        size = size + beyond(study.tail, -ncp, parameters)
    scale = np.where(effect == 0, 1.0, ncp / np.where(effect == 0, 1.0, effect))
    return np.asarray(size / scale)


def _z_beyond(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """E(Z; Z > critical) for a normal statistic with variance 1."""
    spread, shift = parameters
    excess = ncp - shift + ndtri(tail) * spread
    return np.asarray(ncp * ndtr(excess) + np.exp(-excess * excess / 2) / np.sqrt(2 * np.pi))


def _t_beyond(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """E(T; T > c) for noncentral t.

    Weighting chi-square on ν by its -½ power makes it chi-square on ν-1, so that

        E(T; T > c) = K {δ P(T' > c') + E φ(c √(V'/ν) - δ)},  T' on ν-1, c' = c √((ν-1)/ν),
        K = √(ν/2) Γ((ν-1)/2)/Γ(ν/2),

    and the last mean is a noncentral t density on ν-2. Infinite for ν = 1.
    """
    nu, ncp = broadcast(parameters[-1], ncp)
    c = t_critical(tail, nu)
    with np.errstate(all="ignore"):
        factor = np.exp(0.5 * np.log(nu / 2) - log_half_step((nu - 1) / 2))
        chance = noncentral_t.upper_tail(c * np.sqrt((nu - 1) / nu), nu - 1, ncp)
        m = nu - 2
        density = np.exp(noncentral_t.log_density(c * np.sqrt(m / nu), m, ncp))
        kernel = density * np.exp(0.5 * np.log(m / 2) - log_half_step(m / 2))
        a = c / np.sqrt(nu)  # two degrees of freedom: V' is the square of one normal
        root = np.hypot(1.0, a)
        two = 2 * np.exp(-((ncp / root) ** 2) / 2) / np.sqrt(2 * np.pi) / root
        kernel = np.where(nu == 2, two * ndtr(a * ncp / root), kernel)
        size = factor * (ncp * chance + kernel)
    return np.where(nu <= 1, np.inf, size)


_NODES, _WEIGHTS = leggauss(32)


def _r_beyond(tail: float, ncp: Array, parameters: Parameters) -> Array:
    """E(R; R > c) = c P(R > c) + ∫ P(R > r) dr from c, on Fisher's scale."""
    rho, n, ncp = broadcast(*parameters, ncp)
    rho = np.copysign(rho, ncp)
    t = t_critical(tail, n - 2)
    c = t / np.sqrt(n - 2 + t * t)
    start = np.arctanh(c)
    end = np.maximum(start, np.arctanh(rho)) + 9 / np.sqrt(np.maximum(n - 3, 0.5))
    half = (end - start) / 2
    z = (start + half)[..., None] + half[..., None] * _NODES
    tails = correlation.upper_tail(np.tanh(z), rho[..., None], n[..., None])
    integral = half * ((tails / np.cosh(z) ** 2) @ _WEIGHTS)
    return np.asarray(c * correlation.upper_tail(c, rho, n) + integral)
