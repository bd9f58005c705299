"""`netsize.weigh`: one literature pooled, corrected and examined, side by side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectTable
from netsize.reported.records import LeftOut, Reading, ReportedResult
from netsize.synthesis.asymmetry import rank_test, regression_test
from netsize.synthesis.clustered import clustered_pool
from netsize.synthesis.confidence import confidence_distribution
from netsize.synthesis.corrections import CORRECTIONS, Settings, correct_results, domain_of
from netsize.synthesis.dependence import Dependence
from netsize.synthesis.heterogeneity import Heterogeneity
from netsize.synthesis.influence import Without, leave_one_out
from netsize.synthesis.random_effects import IntervalRule, Pooled, pool
from netsize.synthesis.records import Diagnostic, Estimate, plain
from netsize.synthesis.results import Results, from_table
from netsize.synthesis.significance import excess_significance, significant_shape
from netsize.synthesis.step_function import selection_test

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["Weighing", "weigh"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Weighing:
    """What the classical methods make of one literature.

    Attributes
    ----------
    metric : the pooling metric; every number below is on it, unless it says "shown".
    settings : the choices behind the rows.
    results, samples, significant, exact : how many results carry an estimate, from how many
        samples, how many are significant as predicted, and how many have an exact statistic.
    as_printed : mean of the printed effects on the shown scale; None where none is printed.
    pooled : the random-effects mean. estimators : as printed, pooled, then every correction.
    diagnostics, leave_one_out : see `Diagnostic` and `Without`.
    left_out, notes : what is not in the numbers and why, and what was assumed, in words.
    """

    metric: Metric
    settings: Settings
    results: int
    samples: int
    significant: int
    exact: int
    as_printed: float | None
    pooled: Pooled
    estimators: tuple[Estimate, ...]
    diagnostics: tuple[Diagnostic, ...]
    leave_one_out: tuple[Without, ...]
    left_out: tuple[LeftOut, ...]
    notes: tuple[str, ...]

    @property
    def corrections(self) -> tuple[Estimate, ...]:
        """The rows that correct: all but as printed and pooled."""
        return tuple(e for e in self.estimators if e.key in CORRECTIONS)

    def shown(self, value: float | None) -> float | None:
        """A value on the scale that people read (r for Fisher z)."""
        return None if value is None else float(self.metric.shown(np.asarray(value, dtype=float)))

    def deflation(self, estimate: Estimate) -> float | None:
        """How far the estimate lies below the printed effects, as a share of them, shown scale.

        1 means nothing is left, above 1 a changed sign; None where the printed mean is not
        positive or there is no estimate.
        """
        value = self.shown(estimate.estimate)
        if value is None or self.as_printed is None or self.as_printed <= 0:
            return None
        return 1 - value / self.as_printed

    @property
    def running(self) -> tuple[Estimate, ...]:
        """Corrections with a value that a reader may use: fine or at a boundary."""
        usable = ("fine", "at a boundary")
        return tuple(e for e in self.corrections if e.estimate is not None and e.status in usable)

    @property
    def middle_deflation(self) -> float | None:
        """Median deflation of the running corrections; None where none is defined."""
        values = [d for d in map(self.deflation, self.running) if d is not None]
        return float(np.median(values)) if values else None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types. Numbers are on the pooling metric, those under "shown" as people read.

        `estimators` and "shown" have the same order.
        """
        return {
            "metric": self.metric.name,
            "shown_as": self.metric.symbol,
            "as_printed": plain(self.as_printed),
            "results": self.results,
            "samples": self.samples,
            "significant": self.significant,
            "pooled": self.pooled.to_dict(),
            "heterogeneity": {
                "tau2_low": self.pooled.tau2_low,
                "tau2_high": self.pooled.tau2_high,
                "h2": self.pooled.h2,
            },
            "estimators": [e.to_dict() for e in self.estimators],
            "shown": [
                {
                    "key": e.key,
                    "estimate": plain(self.shown(e.estimate)),
                    "low": plain(self.shown(e.low)),
                    "high": plain(self.shown(e.high)),
                    "deflation": plain(self.deflation(e)),
                }
                for e in self.estimators
            ],
            "diagnostics": [d.to_dict() for d in self.diagnostics],
            "leave_one_out": [w.to_dict() for w in self.leave_one_out],
            "left_out": [{"label": x.label, "reason": x.reason} for x in self.left_out],
            "notes": list(self.notes),
            "settings": {
                "heterogeneity": self.settings.heterogeneity,
                "interval": self.settings.interval,
                "level": self.settings.level,
                "within_sample_correlation": self.settings.within_sample_correlation,
                "dependence": self.settings.dependence,
                "steps": list(self.settings.steps),
            },
        }

    def table(self) -> pd.DataFrame:
        """The estimators as a data frame, a row each, on the metric and as shown."""
        import pandas as pd

        rows = []
        for e in self.estimators:
            row = e.to_dict()
            row["shown"] = plain(self.shown(e.estimate))
            row["shown_low"] = plain(self.shown(e.low))
            row["shown_high"] = plain(self.shown(e.high))
            row["deflation"] = plain(self.deflation(e))
            rows.append(row)
        return pd.DataFrame(rows)


def weigh(
    source: str | Reading | EffectTable | Sequence[ReportedResult],
    *,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
    within_sample_correlation: float = 0.5,
    dependence: Dependence = "composites",
    steps: Sequence[float] = (0.025,),
    metric: str | None = None,
    correlation: float | None = None,
    alpha: float = 0.05,
) -> Weighing:
    """Pool a literature, apply the published corrections, and run the diagnostics.

    Parameters
    ----------
    source : pasted text, a reading, reported results, or effect sizes.
    heterogeneity, interval, level : see `netsize.synthesis.random_effects.pool`.
    within_sample_correlation : assumed correlation, in [0, 1], of results that share a sample.
    dependence : "composites" averages the results of a sample first; "clustered" keeps them apart
        in the mean and in PET and PEESE and clusters the errors by sample.
    steps : one-sided p-values in (0, 1) at which the step-function model lets printing change.
    metric, correlation, alpha : see `netsize.effects`; unused where `source` is an effect table.

    Raises
    ------
    InputError : unreadable source, settings outside their range, or no point estimate at all.
    """
    settings = Settings(
        heterogeneity=heterogeneity,
        interval=interval,
        level=level,
        within_sample_correlation=within_sample_correlation,
        dependence=dependence,
        steps=tuple(steps),
    )
    if isinstance(source, EffectTable):
        table = source
    else:
        from netsize.effect_sizes import effects

        table = effects(source, metric=metric, correlation=correlation, alpha=alpha)
    results = from_table(table, within_sample_correlation=within_sample_correlation)
    clustered = dependence == "clustered" and results.means.size < results.estimates.size
    pooled = (
        clustered_pool(results, heterogeneity=heterogeneity, level=level)
        if clustered
        else pool(
            results.means,
            results.mean_variances,
            heterogeneity=heterogeneity,
            interval=interval,
            level=level,
        )
    )
    printed = [r.printed for r in table.rows if r.printed is not None]
    as_printed = float(np.mean(printed)) if printed else None
    return Weighing(
        metric=table.metric,
        settings=settings,
        results=results.estimates.size,
        samples=results.means.size,
        significant=len(results.significant),
        exact=sum(e.low == e.high for e in results.evidence),
        as_printed=as_printed,
        pooled=pooled,
        estimators=(
            *_as_printed_row(table.metric, as_printed, len(printed), level),
            _pooled_row(pooled),
            *correct_results(results, tuple(CORRECTIONS), settings),
        ),
        diagnostics=_diagnostics(results, settings),
        leave_one_out=leave_one_out(
            results.sample_labels,
            results.means,
            results.mean_variances,
            heterogeneity=heterogeneity,
            interval=interval,
            level=level,
        ),
        left_out=(*table.left_out, *_without_estimate(table)),
        notes=(*table.notes, *_notes(results, settings)),
    )


def _as_printed_row(
    metric: Metric, as_printed: float | None, used: int, level: float
) -> tuple[Estimate, ...]:
    if as_printed is None:
        return ()
    return (
        Estimate(
            key="as-printed",
            label="As printed",
            estimate=float(metric.pooled(np.asarray(as_printed))),
            level=level,
            used=used,
            reason="plain mean of the printed effects",
        ),
    )


def _pooled_row(pooled: Pooled) -> Estimate:
    few = pooled.used < 3
    return Estimate(
        key="random-effects",
        label="Random effects",
        estimate=pooled.mean,
        se=pooled.se,
        low=pooled.low,
        high=pooled.high,
        level=pooled.level,
        tau2=pooled.tau2,
        used=pooled.used,
        status="did not converge"
        if not pooled.converged
        else ("too few results" if few else "fine"),
        reason=pooled.reason,
        distribution=confidence_distribution(pooled.mean, pooled.se, pooled.df),
    )


def _diagnostics(results: Results, settings: Settings) -> tuple[Diagnostic, ...]:
    w = 1 / results.variances
    common = float((w * results.estimates).sum() / w.sum())
    significant = [results.evidence[i] for i in results.significant]
    rows = [
        regression_test(results.means, results.mean_null_variances),
        rank_test(results.means, results.mean_null_variances),
        excess_significance(results.evidence, common),
        *significant_shape(significant, domain_of(results)),
    ]
    if results.metric.signed:
        rows.append(
            selection_test(
                results.estimates,
                results.variances,
                null_variances=results.null_variances,
                cuts=settings.steps,
                shares=results.shares,
            )
        )
    return tuple(rows)


def _without_estimate(table: EffectTable) -> tuple[LeftOut, ...]:
    return tuple(
        LeftOut(r.label, "an inequality gives no point estimate; only `plan` uses it")
        for r in table.rows
        if r.estimate is None
    )


def _notes(results: Results, settings: Settings) -> tuple[str, ...]:
    notes = []
    shared = results.estimates.size - results.means.size
    if shared:
        rho = settings.within_sample_correlation
        how = (
            "the mean, PET and PEESE cluster their errors by sample; the others average the "
            "results of a sample first"
            if settings.dependence == "clustered"
            else "the results of a sample are averaged first"
        )
        notes.append(
            f"{results.estimates.size} results come from {results.means.size} samples: {how}, "
            f"with an assumed correlation of {rho:g} within a sample; the selection likelihoods "
            "give each such result a smaller weight, the tests of significant p-values count it in "
            "full."
        )
    return tuple(notes)
