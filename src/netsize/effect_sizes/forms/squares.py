"""Results without a direction: F with several numerator df, chi-square with several df."""

from __future__ import annotations

import math
from dataclasses import dataclass

from netsize.effect_sizes.forms.base import refuse
from netsize.effect_sizes.observed import Observed
from netsize.effect_sizes.records import EffectSize, Evidence
from netsize.effect_sizes.settings import Settings
from netsize.effect_sizes.signed_roots import signed_root, variance_from_chi2
from netsize.effect_sizes.variance_explained import f_effect
from netsize.reported.records import ReportedResult

__all__ = ["ChiSquareForm", "FisherForm"]


@dataclass(frozen=True, slots=True, kw_only=True)
class FisherForm:
    """F on several numerator degrees of freedom.

    `size` is the N that ties λ = f²·size to Cohen's f; `n` the participants, fewer than `size`
    where each gave several measurements (`within`).
    """

    result: ReportedResult
    observed: Observed
    df1: float
    df2: float
    size: float
    n: int
    groups: tuple[int, ...]
    within: bool
    adaptable: bool = False
    assumptions: tuple[str, ...] = ()
    home: str = "cohen-f"

    @property
    def kind(self) -> str:
        """What it is, in the plural."""
        if self.within:
            return "repeated-measures F tests"
        return "F tests with several numerator degrees of freedom"

    def on(self, settings: Settings) -> EffectSize:
        """The effect on Cohen's f; no other metric can hold it."""
        if settings.target.name != "cohen-f":
            raise refuse(self.kind, settings.target, "the test compares more than two means")
        return f_effect(
            result=self.result,
            settings=settings,
            observed=self.observed,
            df1=self.df1,
            df2=self.df2,
            scale=math.sqrt(self.size),
            n=self.n,
            groups=self.groups,
            design="paired" if self.within else self.result.design,
            assumptions=(*self.assumptions, *self.observed.assumptions),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class ChiSquareForm:
    """Chi-square of a contingency table on several degrees of freedom, n participants."""

    result: ReportedResult
    observed: Observed
    df: float
    n: int
    adaptable: bool = False
    assumptions: tuple[str, ...] = ()
    kind: str = "contingency tables larger than 2×2"
    home: str = "cohen-f"

    def on(self, settings: Settings) -> EffectSize:
        """Cohen's w, in the place of f: both are the root of λ per participant."""
        if settings.target.name != "cohen-f":
            raise refuse(self.kind, settings.target, "a table larger than 2×2 has no direction")
        notes = [*self.assumptions, *self.observed.assumptions]
        printed = estimate = variance = None
        others: list[tuple[str, float]] = []
        if self.observed.exact:
            x = self.observed.low
            printed = math.sqrt(x / self.n)
            square = (x - self.df) / self.n
            estimate, variance = signed_root(square), self._variance(square)
            others = [("w", printed), ("w2", square)]
            if square < 0:
                notes.append("chi-square below its mean under no effect: w² negative, kept")
        return EffectSize(
            result=self.result,
            metric=settings.target,
            printed=printed,
            estimate=estimate,
            variance=variance,
            null_variance=self._variance(0.0),
            low=math.nan,
            high=math.nan,
            level=settings.level,
            p=self.observed.p,
            n=self.n,
            groups=(self.n,),
            evidence=Evidence(
                kernel="chi2",
                df=(self.df,),
                scale=math.sqrt(self.n),
                low=self.observed.low,
                high=self.observed.high,
                cuts=self.observed.cuts,
                band=self.observed.band,
            ),
            others=tuple(others),
            assumptions=tuple(notes),
        )

    def _variance(self, square: float) -> float:
        ncp = max(square, 0.0) * self.n
        return variance_from_chi2(ncp, df=self.df, scale=math.sqrt(self.n))
