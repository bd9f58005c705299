"""Results whose statistic is noncentral t: comparisons of two means, differences, correlations."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from netsize.effect_sizes import estimators
from netsize.effect_sizes.forms.base import GIVE_CORRELATION, equal_groups, refuse
from netsize.effect_sizes.observed import Observed
from netsize.effect_sizes.records import EffectSize, Evidence
from netsize.effect_sizes.settings import Settings
from netsize.effect_sizes.variance_explained import f_effect
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["StudentForm"]

_KINDS = {
    "two-groups": ("comparisons of independent groups", "mean-difference"),
    "paired": ("paired comparisons", "difference-score"),
    "one-sample": ("one-sample comparisons", "difference-score"),
    "correlation": ("correlations", "fisher-z"),
}
_NEED_RHO = f"the within-pair correlation is missing; {GIVE_CORRELATION}"


@dataclass(frozen=True, slots=True, kw_only=True)
class StudentForm:
    """A t statistic on `df` degrees of freedom, or anything that is one in disguise.

    Attributes
    ----------
    observed : t, signed. design : what t compares. n : participants.
    groups : sizes of the two groups; (n,) for one.
    others : further estimates already known, for the table. assumptions : taken for granted so far.
    """

    result: ReportedResult
    observed: Observed
    df: float
    design: Literal["two-groups", "paired", "one-sample", "correlation"]
    n: int
    groups: tuple[int, ...]
    adaptable: bool = False
    others: tuple[tuple[str, float], ...] = ()
    assumptions: tuple[str, ...] = ()

    @property
    def kind(self) -> str:
        """What it is, in the plural."""
        return _KINDS[self.design][0]

    @property
    def home(self) -> str:
        """Metric that needs no conversion."""
        return _KINDS[self.design][1]

    def on(self, settings: Settings) -> EffectSize:
        """The effect on the metric of `settings`."""
        metric = settings.target
        if metric.name == "mean-difference":
            return self._standardized(settings, *self._mean_difference_scale(settings))
        if metric.name == "difference-score":
            return self._standardized(settings, *self._difference_score_scale(settings))
        if metric.name == "fisher-z":
            return self._correlation(settings)
        if metric.name == "cohen-f":
            return self._cohen_f(settings)
        raise refuse(self.kind, metric, "only odds ratios, 2×2 tables and log ratios go there")

    def _mean_difference_scale(self, settings: Settings) -> tuple[float, str | None]:
        """δ = scale · d, and what that takes for granted."""
        if self.design == "two-groups":
            return math.sqrt(self.groups[0] * self.groups[1] / sum(self.groups)), None
        if self.design == "paired":
            rho, note = self._rho(settings)
            return math.sqrt(self.n / (2 * (1 - rho))), note
        if self.design == "correlation":
            first, second = equal_groups(self.n)
            return math.sqrt(first * second / self.n), (
                "correlation taken as a comparison of two equal groups"
            )
        raise refuse(self.kind, settings.target, "there is no second group or measurement")

    def _difference_score_scale(self, settings: Settings) -> tuple[float, str | None]:
        if self.design in ("paired", "one-sample"):
            return math.sqrt(self.n), None
        if self.design == "correlation":
            raise refuse(self.kind, settings.target, "a correlation has no difference scores")
        rho, note = self._rho(settings)
        return self._mean_difference_scale(settings)[0] * math.sqrt(2 * (1 - rho)), note

    def _rho(self, settings: Settings) -> tuple[float, str]:
        rho = self.result.correlation
        source = "as given with the line"
        if rho is None:
            rho, source = settings.correlation, "assumed for all paired results"
        if rho is None:
            raise refuse(self.kind, settings.target, _NEED_RHO)
        if not -1 < rho < 1:
            raise EvidenceError(f"a within-pair correlation of {rho:g} is not between -1 and 1")
        return rho, f"within-pair correlation {rho:g} {source}"

    def _standardized(self, settings: Settings, scale: float, note: str | None) -> EffectSize:
        x, m, notes = self.observed.low, self.df, list(self._notes(note))
        printed = g = variance = None
        others = list(self.others)
        if self.observed.exact:
            printed = x / scale
            g, variance = self._unbiased(settings, printed, scale)
            if g is None:
                notes.append("no unbiased estimate exists on 1 error degree of freedom")
            others += [("d", printed)] if g is None else [("d", printed), ("g", g)]
            if self.design == "two-groups":
                others.append(("r", x / math.sqrt(x * x + m)))
        return EffectSize(
            result=self.result,
            metric=settings.target,
            printed=printed,
            estimate=g,
            variance=variance,
            null_variance=1 / scale**2,
            low=math.nan,
            high=math.nan,
            level=settings.level,
            p=self.observed.p,
            n=self.n,
            groups=self.groups,
            design=self.design,
            evidence=self._evidence("t", (m,), scale, self.observed),
            others=tuple(others),
            assumptions=tuple(notes),
        )

    def _unbiased(
        self, settings: Settings, d: float, scale: float
    ) -> tuple[float | None, float | None]:
        if self.df <= 1:
            return None, None
        g = float(estimators.small_sample_factor(self.df)) * d
        if settings.variance == "large-sample":
            return g, float(estimators.large_sample_variance(g, self.n, 1 / scale**2))
        return g, float(estimators.unbiased_variance(g, self.df, 1 / scale**2))

    def _correlation(self, settings: Settings) -> EffectSize:
        metric = settings.target
        if self.design in ("paired", "one-sample"):
            raise refuse(self.kind, metric, "a difference within pairs is no correlation")
        pairs = self.df + 2
        notes = list(self._notes(None))
        if self.design == "two-groups":
            notes.append("point-biserial correlation of group and outcome, as if bivariate normal")
        observed = self.observed.mapped(self._t_to_r)
        printed = estimate = variance = None
        others = list(self.others)
        if observed.exact:
            printed = observed.low
            estimate = math.atanh(printed)
            variance = 1 / (pairs - 3) if pairs > 3 else None
            others += [
                ("r", printed),
                ("r_unbiased", float(estimators.unbiased_correlation(printed, pairs))),
            ]
            if variance is None:
                estimate = None
                notes.append("Fisher's z has no finite variance with 3 pairs")
        return EffectSize(
            result=self.result,
            metric=metric,
            printed=printed,
            estimate=estimate,
            variance=variance,
            null_variance=1 / (pairs - 3) if pairs > 3 else None,
            low=math.nan,
            high=math.nan,
            level=settings.level,
            p=observed.p,
            n=self.n,
            groups=self.groups,
            design=self.design,
            evidence=self._evidence("r", (self.df,), 1.0, observed),
            others=tuple(others),
            assumptions=tuple(notes),
        )

    def _t_to_r(self, t: float) -> float:
        return math.copysign(1.0, t) if math.isinf(t) else t / math.hypot(t, math.sqrt(self.df))

    def _cohen_f(self, settings: Settings) -> EffectSize:
        scale, note = math.sqrt(self.n), None
        if self.design == "one-sample":
            raise refuse(self.kind, settings.target, "there is no second group or measurement")
        if self.design == "paired":  # f = d/2 of the groups that ρ makes of the pairs
            rho, note = self._rho(settings)
            scale = math.sqrt(2 * self.n / (1 - rho))
        notes = (*self._notes(note), "direction lost: Cohen's f has no sign")
        return f_effect(
            result=self.result,
            settings=settings,
            observed=self.observed.squared(),
            df1=1.0,
            df2=self.df,
            scale=scale,
            n=self.n,
            groups=self.groups,
            design=self.design,
            others=self.others,
            assumptions=notes,
        )

    def _notes(self, note: str | None) -> tuple[str, ...]:
        extra = () if note is None else (note,)
        return (*self.assumptions, *self.observed.assumptions, *extra)

    @staticmethod
    def _evidence(
        kernel: Literal["t", "r"], df: tuple[float, ...], scale: float, observed: Observed
    ) -> Evidence:
        return Evidence(
            kernel=kernel,
            df=df,
            scale=scale,
            low=observed.low,
            high=observed.high,
            two_sided=observed.two_sided,
            cuts=observed.cuts,
            band=observed.band,
        )
