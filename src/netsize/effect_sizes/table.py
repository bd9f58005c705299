"""Reported results to a table of effect sizes on one metric."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from netsize.effect_sizes.choosing import choose_metric
from netsize.effect_sizes.families import FAMILIES
from netsize.effect_sizes.forms.base import Form
from netsize.effect_sizes.intervals import exact_intervals
from netsize.effect_sizes.records import EffectSize, EffectTable
from netsize.effect_sizes.settings import checked
from netsize.errors import EvidenceError
from netsize.reported.records import LeftOut, Reading, ReportedResult

__all__ = ["effects"]


def effects(
    source: str | Reading | Sequence[ReportedResult],
    *,
    metric: str | None = None,
    level: float = 0.95,
    variance: str = "unbiased",
    correlation: float | None = None,
    alpha: float = 0.05,
    cut_points: Sequence[float] | None = None,
) -> EffectTable:
    """Unbiased effect sizes with exact intervals, and the evidence curve of each result.

    Parameters
    ----------
    source : text with statistics, a `Reading`, or reported results.
    metric : scale to pool on, a name of `METRICS`; None lets the results decide where they all
        suit the same one.
    level : confidence level of the exact intervals.
    variance : of mean differences, "unbiased" (Hedges 1983) or "large-sample"; the variances of
        the other metrics have one form each.
    correlation : within-pair correlation of paired results that carry none of their own.
    alpha : two-sided significance level that parts the p-bands.
    cut_points : several such levels, increasing, in the place of `alpha`.

    Returns
    -------
    The usable results on one metric; every other one in `left_out` with its reason.

    Raises
    ------
    EvidenceError where nothing can be used, or where results of several metrics are mixed and
    none was asked for: the message asks the question and says how to answer it.
    SettingError where an argument is outside its range.
    """
    settings = checked(
        metric=metric,
        level=level,
        variance=variance,
        correlation=correlation,
        alpha=alpha,
        cut_points=cut_points,
    )
    results, left_out = _results(source)
    forms: list[Form] = []
    for result in results:
        try:
            if result.left_out is not None:
                raise EvidenceError(result.left_out)
            forms.append(FAMILIES[result.family](result, settings))
        except EvidenceError as error:
            left_out.append(LeftOut(result.label, str(error)))
    if not forms:
        raise EvidenceError(_nothing(left_out))
    chosen, notes = choose_metric(forms, settings)
    settings = settings.on(chosen)
    rows: list[EffectSize] = []
    for form in forms:
        try:
            rows.append(form.on(settings))
        except EvidenceError as error:
            left_out.append(LeftOut(form.result.label, str(error)))
    if not rows:
        raise EvidenceError(_nothing(left_out))
    return EffectTable(
        metric=chosen,
        rows=_finished(rows, level),
        left_out=tuple(left_out),
        notes=(*notes, *_direction_note(rows)),
    )


def _results(
    source: str | Reading | Sequence[ReportedResult],
) -> tuple[tuple[ReportedResult, ...], list[LeftOut]]:
    if isinstance(source, str):
        from netsize.reported import read

        source = read(source)
    if isinstance(source, Reading):
        unread = [LeftOut(f"line {u.line}: {u.text}", u.reason) for u in source.unread]
        return source.results, unread
    return tuple(source), []


def _finished(rows: list[EffectSize], level: float) -> tuple[EffectSize, ...]:
    low, high = exact_intervals([row.evidence for row in rows], level=level)
    return tuple(
        replace(
            row,
            low=float(a),
            high=float(b),
            # what the reader took as meant comes first; nothing is said twice
            assumptions=tuple(
                dict.fromkeys((*row.result.notes, *row.assumptions, *_boundary(row, float(b))))
            ),
        )
        for row, a, b in zip(rows, low, high, strict=True)
    )


def _boundary(row: EffectSize, high: float) -> tuple[str, ...]:
    if row.metric.signed or high > 0:
        return ()
    return ("statistic too small for any effect at this level: the interval is the point 0",)


def _nothing(left_out: list[LeftOut]) -> str:
    if not left_out:
        return "there are no results; expected statistics such as t(38) = 2.31"
    reasons = "; ".join(f"{item.label}: {item.reason}" for item in left_out[:3])
    more = f"; and {len(left_out) - 3} more" if len(left_out) > 3 else ""
    return f"no result can be used ({reasons}{more})"


def _direction_note(rows: list[EffectSize]) -> tuple[str, ...]:
    negative = sum(1 for row in rows if row.estimate is not None and row.estimate < 0)
    if not rows[0].metric.signed or negative <= len(rows) / 2:
        return ()
    return (
        f"{negative} of {len(rows)} effects are negative, and positive counts as predicted: if "
        "negative effects were predicted, mark those lines [as predicted]",
    )
