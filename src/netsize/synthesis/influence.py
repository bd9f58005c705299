"""Leave-one-out and influence: how far the pooled mean hangs on each sample."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from netsize.numerics.arrays import Array
from netsize.synthesis.heterogeneity import Heterogeneity
from netsize.synthesis.random_effects import IntervalRule, pool_many
from netsize.synthesis.records import plain

__all__ = ["Without", "leave_one_out"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Without:
    """The pooled mean without one sample, on the pooling metric.

    Attributes
    ----------
    label : the sample left out. mean, low, high, tau2 : pooled from the others.
    share : its part of the total weight when it is in.
    shift : (mean with - mean without) in standard errors of the latter (the DFFITS of Belsley, Kuh
        & Welsch 1980, for a mean).
    influential : |shift| above 1: it moves the mean by more than its standard error.
    """

    label: str
    mean: float
    low: float
    high: float
    tau2: float | None
    share: float
    shift: float
    influential: bool

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {
            "label": self.label,
            "mean": self.mean,
            "low": self.low,
            "high": self.high,
            "tau2": self.tau2,
            "share": self.share,
            "shift": plain(self.shift),
            "influential": self.influential,
        }


def leave_one_out(
    labels: Sequence[str],
    estimates: Array,
    variances: Array,
    *,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
) -> tuple[Without, ...]:
    """Pool k literatures, each without one of the k ≥ 2 samples; () for fewer."""
    k = estimates.size
    if k < 2:
        return ()
    whole = pool_many(
        estimates, variances, heterogeneity=heterogeneity, interval=interval, level=level
    )
    rest = pool_many(
        np.broadcast_to(estimates, (k, k)),
        np.broadcast_to(variances, (k, k)),
        ~np.eye(k, dtype=bool),
        heterogeneity=heterogeneity,
        interval=interval,
        level=level,
    )
    w = 1 / (variances + float(whole.tau2))
    shift = (float(whole.mean) - rest.mean) / rest.se
    return tuple(
        Without(
            label=label,
            mean=float(rest.mean[i]),
            low=float(rest.low[i]),
            high=float(rest.high[i]),
            tau2=plain(float(rest.tau2[i])),
            share=float(w[i] / w.sum()),
            shift=float(shift[i]),
            influential=bool(abs(shift[i]) > 1),
        )
        for i, label in enumerate(labels)
    )
