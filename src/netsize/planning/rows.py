"""The central table of a plan: a row for each reading of the evidence, with its n."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.special import stdtrit

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectSize
from netsize.numerics.arrays import Array
from netsize.planning.answer import Answer
from netsize.planning.evidence import Literature
from netsize.planning.goals import Sized, power_at, size_for
from netsize.planning.rules import exact_confidence
from netsize.planning.settings import PlanSettings
from netsize.sizing.aftermath import aftermath
from netsize.sizing.precision import expected_half_width, has_interval
from netsize.sizing.study import Study
from netsize.synthesis.records import Estimate, plain

__all__ = ["Row", "plan_rows"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One reading of the evidence.

    effect, low, high : on the shown scale; None where there is no number (not finite included).
    limit : the effect that n is solved for, which differs from `effect` for the goal "assurance".
    power, half_width, sign_error, exaggeration : of a study of this row's n, were this row's effect
    true (half-width of its interval on average; None where the design has none).
    power_of_naive_n : power that the as-printed n has at this row's effect; None where the
    as-printed reading has no finite n.
    """

    key: str
    label: str
    effect: float | None
    low: float | None
    high: float | None
    limit: float | None
    sized: Sized
    power: float | None
    half_width: float | None
    sign_error: float | None
    exaggeration: float | None
    power_of_naive_n: float | None
    note: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {
            "key": self.key,
            "label": self.label,
            "effect": self.effect,
            "low": self.low,
            "high": self.high,
            "limit": self.limit,
            **self.sized.to_dict(),
            "power": self.power,
            "half_width": self.half_width,
            "sign_error": self.sign_error,
            "exaggeration": self.exaggeration,
            "power_of_naive_n": self.power_of_naive_n,
            "note": self.note,
        }


@dataclass(frozen=True, slots=True, kw_only=True)
class _Reading:
    """A row before its n: `cautious` is the effect at the assurance asked, for that goal."""

    key: str
    label: str
    effect: float | None
    low: float | None = None
    high: float | None = None
    cautious: float | None = None
    note: str = ""


def plan_rows(
    literature: Literature,
    corrections: Sequence[Estimate],
    answer: Answer,
    study: Study,
    settings: PlanSettings,
    scale: str,
) -> tuple[Row, ...]:
    """Every row, sized; `scale` names the design's metric that the shown scale corresponds to."""
    metric = literature.table.metric
    readings = [
        *_printed(literature, settings),
        *_pooled(literature, settings),
        *(_correction(e, metric, settings) for e in corrections),
        _profile(literature, settings),
        _Reading(
            key="planning-median",
            label="median of the planning distribution",
            effect=answer.median,
            low=answer.low,
            high=answer.high,
            cautious=answer.quantile,
        ),
        _Reading(
            key="planning-value",
            label="planning value",
            effect=answer.value,
            cautious=answer.value,
            note="smallest effect of interest" if answer.from_smallest else "",
        ),
    ]
    inward = study.metric(scale).inward
    chosen = [
        r.cautious if settings.goal == "assurance" and r.cautious is not None else r.effect
        for r in readings
    ]
    limits = [c if c is not None and np.isfinite(c) else np.nan for c in chosen]
    sized = size_for(study, settings, inward(np.array(limits)))
    naive = sized[0].units
    effects = np.array([np.nan if r.effect is None else r.effect for r in readings])
    own = inward(effects)
    units = np.array([float(s.units) if s.units else np.nan for s in sized])
    with np.errstate(invalid="ignore"):
        powers = power_at(study, naive, own) if naive else np.full(effects.size, np.nan)
        reached = power_at(study, units, own)
        after = aftermath(study, units, own)
        widths = _half_widths(study, units, own, settings)
    return tuple(
        Row(
            key=r.key,
            label=r.label,
            effect=plain(r.effect),
            low=plain(r.low),
            high=plain(r.high),
            limit=plain(limit),
            sized=s,
            power=plain(float(reached[i])),
            half_width=plain(float(widths[i])),
            sign_error=plain(float(after.sign_error[i])),
            exaggeration=plain(float(after.exaggeration[i])),
            power_of_naive_n=plain(float(powers[i])),
            note=r.note,
        )
        for i, (r, limit, s) in enumerate(zip(readings, limits, sized, strict=True))
    )


def _half_widths(study: Study, units: Array, effect: Array, settings: PlanSettings) -> Array:
    out = np.full(units.shape, np.nan)
    known = np.isfinite(units) & np.isfinite(effect)
    if has_interval(study) and known.any():
        out[known] = expected_half_width(study, units[known], effect[known], settings.level)
    return out


def _printed(literature: Literature, settings: PlanSettings) -> list[_Reading]:
    """As the papers print it: the plain mean, and the largest."""
    printed = literature.printed
    if not printed.size:
        nothing = "no result was printed with a value"
        return [
            _Reading(key="as-printed", label="as printed (mean)", effect=None, note=nothing),
            _Reading(key="largest-printed", label="largest printed", effect=None, note=nothing),
        ]
    rows = [row for row in literature.rows if row.printed is not None]
    largest = rows[int(printed.argmax())]
    shown = literature.table.metric.shown
    own = [float(x) for x in shown(np.array([largest.low, largest.high]))]
    mean = float(printed.mean())
    of_largest = _own_limit(rows[int(printed.argmax())], settings)
    low: float | None = own[0]
    high: float | None = own[1]
    cautious: float | None = of_largest
    if printed.size > 1:
        low, high, cautious = _of_mean(printed, literature.table.metric, settings)
    return [
        _Reading(
            key="as-printed",
            label="as printed (mean)",
            effect=mean,
            low=low,
            high=high,
            cautious=cautious,
        ),
        _Reading(
            key="largest-printed",
            label="largest printed",
            effect=float(printed.max()),
            low=own[0],
            high=own[1],
            cautious=of_largest,
            note=largest.label,
        ),
    ]


def _of_mean(
    printed: Array, metric: Metric, settings: PlanSettings
) -> tuple[float | None, float | None, float | None]:
    """The t interval of the mean of printed effects and its cautious limit, on the shown scale.

    Taken on the metric around the mean that is shown, so that it cannot leave the scale; nothing
    where the effects are all the same.
    """
    on_metric = metric.pooled(printed)
    se = float(on_metric.std(ddof=1)) / np.sqrt(printed.size)
    if not se > 0:
        return None, None, None
    tails = [(1 - settings.level) / 2, (1 + settings.level) / 2, 1 - settings.assurance]
    middle = metric.pooled(np.array([printed.mean()]))[0]
    limits = middle + se * np.array([float(stdtrit(printed.size - 1, p)) for p in tails])
    low, high, cautious = _on_scale(limits, metric)
    return low, high, cautious


def _own_limit(row: EffectSize, settings: PlanSettings) -> float:
    """The exact lower limit of one result, uncorrected, at the assurance asked."""
    limit = exact_confidence(row).quantile(1 - settings.assurance)
    return float(row.metric.shown(np.array([limit]))[0])


def _on_scale(values: Array, metric: Metric) -> list[float]:
    """Values of the metric on the shown scale; an unsigned effect has none below 0."""
    return [float(v) for v in metric.shown(values if metric.signed else np.maximum(values, 0.0))]


def _pooled(literature: Literature, settings: PlanSettings) -> list[_Reading]:
    pooled = literature.pooled
    if pooled is None:
        return [
            _Reading(
                key="pooled",
                label="pooled, random effects",
                effect=None,
                note="no result has a point estimate",
            )
        ]
    df = pooled.df if np.isfinite(pooled.df) else 1e9
    cautious = pooled.mean + pooled.se * float(stdtrit(df, 1 - settings.assurance))
    values = np.array([pooled.mean, pooled.low, pooled.high, cautious])
    effect, low, high, cautious = _on_scale(values, literature.table.metric)
    return [
        _Reading(
            key="pooled",
            label="pooled, random effects",
            effect=effect,
            low=low,
            high=high,
            cautious=cautious,
        )
    ]


def _correction(estimate: Estimate, metric: Metric, settings: PlanSettings) -> _Reading:
    def shown(value: float | None) -> float | None:
        return None if value is None else float(metric.shown(np.array([value]))[0])

    distribution = estimate.distribution
    cautious = (
        None if distribution is None else float(distribution.quantile(1 - settings.assurance))
    )
    return _Reading(
        key=estimate.key,
        label=estimate.label,
        effect=shown(estimate.estimate),
        low=shown(estimate.low),
        high=shown(estimate.high),
        cautious=shown(cautious),
        note=estimate.reason if estimate.status != "fine" else "",
    )


def _profile(literature: Literature, settings: PlanSettings) -> _Reading:
    profile, shown = literature.profile, literature.table.metric.shown
    tails = [(1 - settings.level) / 2, (1 + settings.level) / 2, 1 - settings.assurance]
    low, high, cautious = (float(x) for x in shown(profile.mean.quantile(tails)))
    effect = float(shown(np.array([profile.estimate]))[0])
    return _Reading(
        key="exact-profile",
        label="selection model, profile",
        effect=effect,
        low=low,
        high=high,
        cautious=cautious,
        note="" if np.isfinite(profile.estimate) else "no finite maximum",
    )
