"""What the literature amounts to for a plan: usable effects, pooled and fitted."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from netsize.effect_sizes import effects
from netsize.effect_sizes.records import EffectSize, EffectTable
from netsize.errors import EvidenceError
from netsize.numerics.arrays import Array
from netsize.planning.settings import PlanSettings
from netsize.reported import read
from netsize.reported.records import LeftOut, Reading, ReportedResult
from netsize.reported.unread import refuse_unread
from netsize.synthesis.random_effects import Pooled, pool
from netsize.synthesis.results import from_table
from netsize.synthesis.selection import dependence_weights
from netsize.synthesis.selection_averaged import AveragedFit, fit_averaged, log_evidence
from netsize.synthesis.selection_profile import ProfileFit, fit_profile

_ABSURD = 20.0  # effects beyond this are slips of the pen

__all__ = ["Literature", "gather", "table_of"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Literature:
    """The evidence of a plan and the three readings of it, on the pooling metric.

    pooled : None where no result carries a point estimate.
    log_bayes_factor_selection : natural logarithm of the evidence for printing that depends on p,
        over that for printing whatever comes.
    """

    table: EffectTable
    left_out: tuple[LeftOut, ...]
    pooled: Pooled | None
    averaged: AveragedFit
    profile: ProfileFit
    log_bayes_factor_selection: float

    @property
    def rows(self) -> tuple[EffectSize, ...]:
        """The results used."""
        return self.table.rows

    @property
    def samples(self) -> dict[str, int]:
        """Participants of each sample, the largest count where its results differ."""
        sizes: dict[str, int] = {}
        for row in self.rows:
            sizes[row.sample] = max(sizes.get(row.sample, 0), row.n)
        return sizes

    @property
    def significant(self) -> int:
        """Results in the first p-band: significant in the predicted direction."""
        return sum(row.evidence.band == 0 for row in self.rows)

    @property
    def printed(self) -> Array:
        """Effects as printed, on the shown scale, of the results that have one."""
        return np.array([row.printed for row in self.rows if row.printed is not None])


def table_of(
    source: str | Reading | Sequence[ReportedResult],
    settings: PlanSettings,
    *,
    metric: str | None,
    skip_unread: bool,
) -> tuple[EffectTable, tuple[LeftOut, ...]]:
    """Effect sizes on one metric, and everything that stays out with its reason."""
    reading = _reading(source)
    if not skip_unread:
        refuse_unread(reading)
    left_out = tuple(
        LeftOut(label=f"line {u.line}", reason=f"{u.reason} ({u.text!r})") for u in reading.unread
    )
    table = effects(
        reading.results,
        metric=metric,
        level=settings.level,
        correlation=settings.correlation,
        cut_points=settings.cut_points,
    )
    for row in table.rows:
        if row.printed is not None and abs(row.printed) > _ABSURD:
            raise EvidenceError(
                f"{row.label}: {row.result.text or 'the result'} means an effect of "
                f"{row.metric.symbol} = {row.printed:,.1f}, which no study finds; check the entry, "
                "or mark the line [leave out: REASON]"
            )
    if not table.rows:
        raise EvidenceError("no usable result is left; nothing can be planned from that")
    return table, (*table.left_out, *left_out)


def gather(
    table: EffectTable, settings: PlanSettings, *, left_out: tuple[LeftOut, ...] = ()
) -> Literature:
    """Pool and fit the results of one effect table."""
    rows, metric = table.rows, table.metric
    weights, priors = _weights(table, settings), settings.priors(metric)
    evidence = [row.evidence for row in rows]
    pooled = None
    if any(row.estimate is not None for row in rows):
        arrays = from_table(table, within_sample_correlation=settings.within_sample_correlation)
        pooled = pool(
            arrays.means,
            arrays.mean_variances,
            heterogeneity=settings.heterogeneity,
            interval=settings.interval,
            level=settings.level,
        )
    averaged = fit_evidence(table, settings)
    without_selection = log_evidence(
        evidence, weights=weights, metric=metric, priors=priors, selection=False
    )
    return Literature(
        table=table,
        left_out=left_out,
        pooled=pooled,
        averaged=averaged,
        profile=fit_profile(evidence, weights=weights, metric=metric, priors=priors),
        log_bayes_factor_selection=averaged.log_evidence - without_selection,
    )


def fit_evidence(table: EffectTable, settings: PlanSettings) -> AveragedFit:
    """The averaged reading alone."""
    return fit_averaged(
        [row.evidence for row in table.rows],
        weights=_weights(table, settings),
        metric=table.metric,
        priors=settings.priors(table.metric),
    )


def _weights(table: EffectTable, settings: PlanSettings) -> Array:
    return dependence_weights(
        [row.sample for row in table.rows], correlation=settings.within_sample_correlation
    )


def _reading(source: str | Reading | Sequence[ReportedResult]) -> Reading:
    if isinstance(source, str):
        return read(source)
    if isinstance(source, Reading):
        return source
    return Reading(results=tuple(source))
