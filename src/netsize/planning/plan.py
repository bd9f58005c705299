"""The whole chain: reported results → effects → fits → planning value → n, as one record."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

import netsize
from netsize.effect_sizes.metrics import Metric
from netsize.numerics.grid import GridDistribution
from netsize.planning.answer import Answer, answer
from netsize.planning.consequences import Consequence, Habit, consequences, habits
from netsize.planning.evidence import Literature, fit_evidence, gather, table_of
from netsize.planning.remarks import assumptions, warnings
from netsize.planning.rows import Row, plan_rows
from netsize.planning.rules import of_reading, planning_distribution
from netsize.planning.settings import PlanSettings
from netsize.planning.study import METRIC_OF, metric_for, study_for
from netsize.reported.records import Reading, ReportedResult
from netsize.sizing.study import Study
from netsize.synthesis.corrections import correct
from netsize.synthesis.records import Estimate, plain

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["Plan", "answer_again", "plan"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Plan:
    """A study sized from its literature, with everything that the size rests on.

    Attributes
    ----------
    literature : the results used, what was left out, and the three readings of them.
    corrections : published corrections asked for. study : design and modifiers sized.
    rows : the central table. answer : planning value, size, chances.
    consequences : what goes wrong when the as-printed n is used. habits : common rules of thumb.
    assumptions, warnings : in words. settings : every choice.
    """

    literature: Literature
    corrections: tuple[Estimate, ...]
    study: Study
    rows: tuple[Row, ...]
    answer: Answer
    consequences: tuple[Consequence, ...]
    habits: tuple[Habit, ...]
    assumptions: tuple[str, ...]
    warnings: tuple[str, ...]
    settings: PlanSettings

    @property
    def metric(self) -> Metric:
        """The pooling metric."""
        return self.literature.table.metric

    def row(self, key: str) -> Row:
        """The row called `key`; KeyError where there is none."""
        for row in self.rows:
            if row.key == key:
                return row
        raise KeyError(key)

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types: what `netsize plan --json` prints."""
        fit, profile = self.literature.averaged, self.literature.profile
        shown = self.metric.shown
        return {
            "evidence": self._evidence(),
            "rows": [row.to_dict() for row in self.rows],
            "planning": self.answer.to_dict(),
            "selection": {
                "mean": _summary(fit.mean.mapped(shown)),
                "new_study": _summary(fit.new_study.mapped(shown)),
                "heterogeneity": _summary(fit.heterogeneity),
                "printing": [_summary(d) for d in fit.printing],
                "unprinted_share": _summary(fit.unprinted),
                "log_bayes_factor_effect": fit.log_bayes_factor,
                "log_bayes_factor_selection": self.literature.log_bayes_factor_selection,
                "profile": {
                    "mean": _summary(profile.mean.mapped(shown)),
                    "heterogeneity": profile.heterogeneity,
                    "printing": list(profile.printing),
                },
                "grid_error": fit.error,
                "grid_rested": fit.rested,
                "shrunken": [
                    {"label": row.label, **(_summary(d.mapped(shown)) if d else {})}
                    for row, d in zip(self.literature.rows, fit.shrunken, strict=True)
                ],
            },
            "consequences": [c.to_dict() for c in self.consequences],
            "habits": [h.to_dict() for h in self.habits],
            "assumptions": list(self.assumptions),
            "warnings": list(self.warnings),
            "settings": self.settings.to_dict() | {"design": self.study.design.name},
            "version": netsize.__version__,
        }

    def table(self) -> pd.DataFrame:
        """The central table, a row each, sizes as whole numbers or missing."""
        import pandas as pd

        frame = pd.DataFrame([row.to_dict() for row in self.rows]).set_index("key")
        return frame.astype({"n_total": "Int64", "n_recruited": "Int64"})

    def _evidence(self) -> dict[str, Any]:
        literature = self.literature
        return {
            "results": len(literature.rows),
            "samples": len(literature.samples),
            "participants": sum(literature.samples.values()),
            "significant": literature.significant,
            "metric": self.metric.name,
            "shown_as": self.metric.symbol,
            "used": [
                {
                    "label": row.label,
                    "sample": row.sample,
                    "printed": row.printed,
                    "estimate": row.estimate,
                    "variance": row.variance,
                    "low": plain(row.low),
                    "high": plain(row.high),
                    "p": row.p,
                    "n": row.n,
                    "assumptions": list(row.assumptions),
                }
                for row in literature.rows
            ],
            "left_out": [{"label": x.label, "reason": x.reason} for x in literature.left_out],
        }


def plan(
    source: str | Reading | Sequence[ReportedResult],
    *,
    design: str | None = None,
    skip_unread: bool = False,
    **choices: Any,
) -> Plan:
    """Size a study from pasted statistics.

    Parameters
    ----------
    source : text, a `Reading`, or reported results.
    design : of the new study ("two-groups", "paired", "one-sample", "correlation", "anova", ...);
        None takes the one that the evidence came from.
    skip_unread : leave out places that look like statistics and cannot be used, and list them.
    choices : every field of `PlanSettings`, and the options of the design and its modifiers
        (ratio, groups, loss, ...).

    Raises
    ------
    ReadingError, EvidenceError, SettingError : see `netsize.errors`.
    """
    ours = set(PlanSettings.__dataclass_fields__)
    options = {k: v for k, v in choices.items() if k not in ours}
    settings = PlanSettings(
        design=design,
        design_options=options,
        **{k: v for k, v in choices.items() if k in ours},
    )
    table, left_out = table_of(
        source, settings, metric=metric_for(settings), skip_unread=skip_unread
    )
    settings.on_scale(table.metric)
    study, study_notes = study_for(table, settings)
    literature = gather(table, settings, left_out=left_out)
    scale = METRIC_OF[study.design.name][1]
    distribution, origin = planning_distribution(literature, settings)
    negligible = literature.averaged.probability_negligible
    answered = _answer(distribution, origin, negligible, table.metric, settings, study)
    corrections = (
        correct(
            table,
            settings.corrections,
            heterogeneity=settings.heterogeneity,
            interval=settings.interval,
            level=settings.level,
            within_sample_correlation=settings.within_sample_correlation,
        )
        if settings.corrections
        else ()
    )
    rows = plan_rows(literature, corrections, answered, study, settings, scale)
    return Plan(
        literature=literature,
        corrections=corrections,
        study=study,
        rows=rows,
        answer=answered,
        consequences=consequences(rows, answered, study, scale),
        habits=habits(literature, answered, study, scale),
        assumptions=assumptions(literature, study, settings, study_notes),
        warnings=warnings(literature, answered, rows, settings),
        settings=settings,
    )


def answer_again(
    results: Sequence[ReportedResult], *, settings: PlanSettings, study: Study, metric: Metric
) -> Answer:
    """The answer alone from other results or settings, for the same study and metric."""
    table, _ = table_of(results, settings, metric=metric.name, skip_unread=False)
    if settings.rule == "averaged":  # the other readings are not needed then
        fit = fit_evidence(table, settings)
        distribution, origin = of_reading(fit, settings)
        negligible = fit.probability_negligible
    else:
        literature = gather(table, settings)
        distribution, origin = planning_distribution(literature, settings)
        negligible = literature.averaged.probability_negligible
    return _answer(distribution, origin, negligible, metric, settings, study)


def _answer(
    distribution: GridDistribution,
    origin: str,
    negligible: float,
    metric: Metric,
    settings: PlanSettings,
    study: Study,
) -> Answer:
    return answer(
        distribution.mapped(metric.shown),
        origin,
        probability_negligible=negligible,
        study=study,
        settings=settings,
        scale=METRIC_OF[study.design.name][1],
    )


def _summary(distribution: GridDistribution) -> dict[str, float | None]:
    low, median, high = distribution.quantile(np.array([0.025, 0.5, 0.975]))
    return {"low": plain(low), "median": plain(median), "high": plain(high)}
