"""The scales on which results are pooled."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from netsize.numerics.arrays import Array

__all__ = ["METRICS", "Metric"]


@dataclass(frozen=True, slots=True)
class Metric:
    """One pooling scale.

    Attributes
    ----------
    name : how options and JSON call it. title : how tables call it.
    symbol : of a value on the scale that people read (`shown`); estimates are pooled on the
        metric itself, which differs from it only for Fisher z (shown as r).
    signed : False where the effect has no direction (Cohen's f, w): θ ≥ 0.
    prior_scale : ratio of the default prior scales to those of the mean-difference metric.
    shown, pooled : metric → shown scale and back, increasing array functions.
    """

    name: str
    title: str
    symbol: str
    signed: bool
    prior_scale: float
    shown: Callable[[Array], Array]
    pooled: Callable[[Array], Array]


def _same(x: Array) -> Array:
    return np.asarray(x, dtype=float)


METRICS: dict[str, Metric] = {
    m.name: m
    for m in (
        Metric("mean-difference", "standardized mean difference", "d", True, 1.0, _same, _same),
        Metric(
            "difference-score", "standardized mean of differences", "dz", True, 1.0, _same, _same
        ),
        Metric("fisher-z", "correlation", "r", True, 0.5, np.tanh, np.arctanh),
        Metric("cohen-f", "Cohen's f", "f", False, 0.5, _same, _same),
        Metric("log-ratio", "log ratio", "ln ratio", True, 1.0, _same, _same),
    )
}
