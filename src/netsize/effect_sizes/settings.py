"""The choices that turn a reported result into an effect size, checked once."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from netsize.effect_sizes.metrics import METRICS, Metric
from netsize.errors import EvidenceError, SettingError
from netsize.reported.records import ReportedResult

__all__ = ["Settings", "VarianceKind", "checked"]

VarianceKind: TypeAlias = Literal["unbiased", "large-sample"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Settings:
    """How to convert.

    Attributes
    ----------
    metric : the scale wanted, None while it is still to be chosen.
    level : confidence level of the exact intervals. variance : "unbiased" or "large-sample".
    correlation : within-pair correlation for paired results that carry none.
    cut_points : two-sided significance levels in the predicted direction, increasing.
    """

    metric: Metric | None
    level: float
    variance: VarianceKind
    correlation: float | None
    cut_points: tuple[float, ...]

    @property
    def target(self) -> Metric:
        """The metric, once settled."""
        if self.metric is None:
            raise ValueError("the metric must be settled before results are expressed on it")
        return self.metric

    def on(self, metric: Metric) -> Settings:
        """The same choices with the metric settled."""
        return replace(self, metric=metric)

    def cuts_of(self, result: ReportedResult) -> tuple[float, ...]:
        """The levels of one paper: its own first cut, where it has one, before the others."""
        if result.cut is None:
            return self.cut_points
        levels = (result.cut, *self.cut_points[1:])
        if any(a >= b for a, b in itertools.pairwise(levels)):
            raise EvidenceError(
                f"its own cut point {result.cut:g} is not below the next general one, "
                f"{levels[1]:g}; drop one of them"
            )
        return levels


def checked(
    *,
    metric: str | None,
    level: float,
    variance: str,
    correlation: float | None,
    alpha: float,
    cut_points: Sequence[float] | None,
) -> Settings:
    """`Settings` from an argument list, or SettingError naming the argument at fault."""
    if metric is not None and metric not in METRICS:
        raise SettingError("--metric", f"{metric!r} is not one of {', '.join(METRICS)}")
    if not 0 < level < 1:
        raise SettingError("--level", f"{level:g} is not between 0 and 1, as 0.95 is")
    if variance not in ("unbiased", "large-sample"):
        raise SettingError("--variance", f"{variance!r} is neither 'unbiased' nor 'large-sample'")
    if correlation is not None and not -1 < correlation < 1:
        raise SettingError("--within-pair", f"{correlation:g} is not between -1 and 1")
    levels = (alpha,) if cut_points is None else tuple(float(c) for c in cut_points)
    name = "--alpha" if cut_points is None else "--cut-points"
    if not levels or any(not (math.isfinite(c) and 0 < c < 1) for c in levels):
        raise SettingError(name, "significance levels must lie between 0 and 1, as 0.05 does")
    if any(a >= b for a, b in itertools.pairwise(levels)):
        raise SettingError(name, "significance levels must increase, as 0.05, 0.10 do")
    return Settings(
        metric=METRICS[metric] if metric else None,
        level=level,
        variance="unbiased" if variance == "unbiased" else "large-sample",
        correlation=correlation,
        cut_points=levels,
    )
