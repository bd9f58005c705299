"""Exact confidence intervals for the effect behind each piece of evidence."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from scipy.special import ndtri

from netsize.effect_sizes.records import Evidence, Kernel
from netsize.numerics import correlation, noncentral_chi2, noncentral_f, noncentral_t
from netsize.numerics.arrays import Array

__all__ = ["exact_intervals"]


def exact_intervals(evidence: Sequence[Evidence], *, level: float) -> tuple[Array, Array]:
    """Ends (k,), (k,) of the intervals for θ on the metric, by inverting the tails.

    An end is where the observed value is just the (1 ± level)/2 quantile of its law (Steiger &
    Fouladi 1997). For an inequality the interval joins those of all values it allows, so an end is
    infinite where they are unbounded. Effects without a direction have ends of at least 0; a
    statistic too small for any effect gives [0, 0].
    """
    low, high = np.empty(len(evidence)), np.empty(len(evidence))
    groups: dict[Kernel, list[int]] = {}
    for i, e in enumerate(evidence):
        groups.setdefault(e.kernel, []).append(i)
    for kernel, members in groups.items():
        some = [evidence[i] for i in members]
        first = np.array([-e.high if e.two_sided else e.low for e in some])
        last = np.array([e.high for e in some])
        low[members] = _limits(kernel, some, first, (1 + level) / 2)
        high[members] = _limits(kernel, some, last, (1 - level) / 2)
    return low, high


def _limits(kernel: Kernel, evidence: list[Evidence], x: Array, probability: float) -> Array:
    """The θ at which P(X ≤ x) is `probability`; ±inf beside an infinite x."""
    scale = np.array([e.scale for e in evidence])
    df = np.array([e.df for e in evidence]).reshape(len(evidence), -1)
    finite = np.isfinite(x)
    at = np.where(finite, x, 0.0)
    if kernel == "z":
        theta = (at - ndtri(probability)) / scale
    elif kernel == "t":
        theta = noncentral_t.noncentrality(at, df[:, 0], probability) / scale
    elif kernel == "r":
        finite &= np.abs(x) < 1
        at = np.where(finite, x, 0.0)
        theta = np.arctanh(correlation.coefficient(at, df[:, 0] + 2, probability))
    elif kernel == "f":
        ncp = noncentral_f.noncentrality(at, df[:, 0], df[:, 1], probability)
        theta = np.sqrt(ncp) / scale
    else:
        theta = np.sqrt(noncentral_chi2.noncentrality(at, df[:, 0], probability)) / scale
    return np.where(finite, theta, np.where(x > 0, np.inf, -np.inf))
