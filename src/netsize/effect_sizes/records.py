"""What one reported result says about the effect: an estimate, and evidence for any true effect."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal, TypeAlias

import numpy as np

from netsize.effect_sizes.metrics import Metric
from netsize.reported.records import LeftOut, ReportedResult, StudyDesign

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["EffectSize", "EffectTable", "Evidence", "Kernel"]

Kernel: TypeAlias = Literal["t", "f", "chi2", "r", "z"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Evidence:
    """One result as evidence about the true effect θ on its metric.

    The statistic X follows, given θ,

        "t"     noncentral t(df[0]) with δ = scale · θ
        "z"     normal with mean scale · θ and variance 1
        "f"     noncentral F(df[0], df[1]) with λ = (scale · θ)²
        "chi2"  noncentral chi-square(df[0]) with λ = (scale · θ)²
        "r"     correlation of df[0] + 2 pairs from a bivariate normal with ρ = tanh θ

    Attributes
    ----------
    kernel, df, scale : as above; scale is unused for "r".
    low, high : what was observed of X, already signed so that positive is the predicted
        direction. Equal: an exact value. Otherwise X is known to lie in (low, high), and the
        likelihood is that probability; for an unsigned inequality on a signed statistic
        ("p > .05") see `two_sided`.
    two_sided : True where what is known is low < |X| < high.
    cuts : statistic values that part the p-bands, decreasing: band 0 is X > cuts[0], band j is
        cuts[j] < X ≤ cuts[j-1], the last band everything below.
    band : the band in which the observed value lies. An inequality that straddles a cut has
        the band that contains all of it or, failing that, None: it is then mixed over bands.
    """

    kernel: Kernel
    df: tuple[float, ...]
    scale: float
    low: float
    high: float
    two_sided: bool = False
    cuts: tuple[float, ...]
    band: int | None


@dataclass(frozen=True, slots=True, kw_only=True)
class EffectSize:
    """One result on the pooling metric.

    Attributes
    ----------
    result : the reported result it came from. metric : the scale of all that follows.
    printed : the effect as papers print it, uncorrected, on the metric's *shown* scale (d, d_z,
        r, f); None for interval evidence.
    estimate, variance : small-sample corrected estimate on the metric and its variance; None for
        interval evidence, which only the exact methods can use.
    null_variance : the variance at θ = 0, free of the estimate (1/ñ for mean differences), whose
        root is the effect-free standard error of small-study methods.
    low, high, level : exact interval on the metric; ±inf where a side has no finite end.
    p : two-sided p recomputed from the statistic (as printed for p-only results).
    n : participants, 0 where unknown. groups : group sizes behind it, (n,) for one group.
    design : what the result was taken to compare; None where neither paper nor statistic tells.
    evidence : the same result for the exact selection model.
    others : further estimates of the same effect, as (name, value), names fit for JSON: "d", "g",
        "r", "r_unbiased", "eta2", "epsilon2", "omega2", "f2" (unbiased), "phi", "w", ...
    assumptions : each assumption behind this row, in words.
    """

    result: ReportedResult
    metric: Metric
    printed: float | None
    estimate: float | None
    variance: float | None
    null_variance: float | None
    low: float
    high: float
    level: float
    p: float | None
    n: int
    groups: tuple[int, ...]
    evidence: Evidence
    design: StudyDesign | None = None
    others: tuple[tuple[str, float], ...] = ()
    assumptions: tuple[str, ...] = ()

    @property
    def label(self) -> str:
        """Study label."""
        return self.result.label

    @property
    def sample(self) -> str:
        """Name of the set of participants; results that share it are dependent."""
        return self.result.sample or self.result.label

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types; None for what is unknown or has no finite value."""
        shown = None if self.estimate is None else float(self.metric.shown(np.array(self.estimate)))
        return {
            "label": self.label,
            "sample": self.sample,
            "design": self.design,
            "n": self.n or None,
            "groups": list(self.groups),
            "statistic": self.result.text,
            "printed": _finite(self.printed),
            "estimate": _finite(self.estimate),
            "shown": _finite(shown),
            "variance": _finite(self.variance),
            "null_variance": _finite(self.null_variance),
            "low": _finite(self.low),
            "high": _finite(self.high),
            "level": self.level,
            "p": _finite(self.p),
            "others": {name: _finite(value) for name, value in self.others},
            "assumptions": list(self.assumptions),
        }


@dataclass(frozen=True, slots=True)
class EffectTable:
    """All usable results on one metric, and what was left out and why."""

    metric: Metric
    rows: tuple[EffectSize, ...]
    left_out: tuple[LeftOut, ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def weights(self) -> tuple[float | None, ...]:
        """Share of each row in the sum of inverse variances; None for interval evidence."""
        inverse = [None if row.variance is None else 1 / row.variance for row in self.rows]
        total = sum(x for x in inverse if x is not None)
        return tuple(None if x is None else x / total for x in inverse)

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types: `metric`, `rows` with their inverse-variance `weight`, the rest."""
        return {
            "metric": self.metric.name,
            "rows": [
                row.to_dict() | {"weight": weight}
                for row, weight in zip(self.rows, self.weights, strict=True)
            ],
            "left_out": [{"label": x.label, "reason": x.reason} for x in self.left_out],
            "notes": list(self.notes),
        }

    def table(self) -> pd.DataFrame:
        """A data frame, a row a result: the fields of `to_dict`, `others` a column each."""
        import pandas as pd

        records = []
        for row in self.to_dict()["rows"]:
            others = row.pop("others")
            row["groups"] = " ".join(str(n) for n in row["groups"])
            row["assumptions"] = "; ".join(row["assumptions"])
            records.append(row | others)
        return pd.DataFrame(records)


def _finite(value: float | None) -> float | None:
    return float(value) if value is not None and math.isfinite(value) else None
