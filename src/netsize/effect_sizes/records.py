"""What one reported result says about the effect: an estimate, and evidence for any true effect."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

from netsize.effect_sizes.metrics import Metric
from netsize.reported.records import LeftOut, ReportedResult

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
    n : participants. groups : group sizes behind it, (n,) for one group.
    evidence : the same result for the exact selection model; None for nothing but an estimate.
    others : further estimates of the same effect, as (name, value): η², ω², ε², unbiased r, ...
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
    others: tuple[tuple[str, float], ...] = ()
    assumptions: tuple[str, ...] = ()

    @property
    def label(self) -> str:
        """Study label."""
        return self.result.label

    @property
    def sample(self) -> str:
        """Name of the set of participants; results that share it are dependent."""
        return self.result.sample


@dataclass(frozen=True, slots=True)
class EffectTable:
    """All usable results on one metric, and what was left out and why."""

    metric: Metric
    rows: tuple[EffectSize, ...]
    left_out: tuple[LeftOut, ...] = ()
    notes: tuple[str, ...] = ()
