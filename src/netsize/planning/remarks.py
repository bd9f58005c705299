"""What a plan rests on and what should give pause, in words."""

from __future__ import annotations

import re

import numpy as np

from netsize.planning.answer import Answer
from netsize.planning.evidence import Literature
from netsize.planning.rows import Row
from netsize.planning.settings import PlanSettings
from netsize.reported.check import check
from netsize.sizing.study import Study

__all__ = ["assumptions", "warnings"]

_NUMBER = re.compile(r"\d+(?:\.\d+)?")
_FEW = 5  # results below which one more could change much
_OUTLANDISH = 2.5  # prior standard deviations beyond which effects are doubted


def assumptions(
    literature: Literature,
    study: Study,
    settings: PlanSettings,
    study_notes: tuple[str, ...],
) -> tuple[str, ...]:
    """Every assumption: about single results (grouped where the words agree), then of the plan."""
    everyone = len(literature.rows)
    shared = len(literature.samples) < everyone
    p = literature.averaged.priors
    cuts = ", ".join(f"{c:g}" for c in settings.cut_points)
    general = [
        _new_study(study, settings),
        *_single(literature),
        *literature.table.notes,
        *study_notes,
        *study.design.assumptions(),
        f"results were selected for printing by p at two-sided {cuts} in the predicted direction, "
        "which is what counts as significant here; set with --cut-points",
        f"priors: mean effect normal with SD {p.effect_scale:g} (--effect-scale), between-study SD "
        f"half-normal with scale {p.heterogeneity_scale:g} (--heterogeneity-scale) on the pooling "
        "metric, chance of printing a result below the first band log-uniform from "
        f"{p.printing_floor:g} to 1 (--printing-floor), negligible effect with probability "
        f"{p.negligible:g} (--negligible)",
    ]
    if shared:
        general.append(
            f"results of one sample correlate {settings.within_sample_correlation:g}; set with "
            "--within-sample-correlation"
        )
    return tuple(general)


def _new_study(study: Study, settings: PlanSettings) -> str:
    """Everything about the new study that n depends on, in a line."""
    m = study.modifiers
    sides = (
        "" if not study.design.law.directional else f", {'two' if m.sides == 2 else 'one'}-sided"
    )
    parts = [f"{study.design.title}, α = {m.alpha:g}{sides}"]
    if m.tests > 1:
        parts.append(f"{m.tests} tests sharing α")
    if settings.goal == "precision":
        parts.append(f"half-width {settings.half_width:g}")
    else:
        parts.append(f"power {settings.power:g}")
    parts.append(f"assurance {settings.assurance:g}")
    if m.cluster_size > 1:
        parts.append(f"clusters of {m.cluster_size} correlated {m.cluster_correlation:g}")
    if m.covariate_r2:
        parts.append(f"covariates explaining {m.covariate_r2:g}")
    if m.loss:
        parts.append(f"{m.loss:.0%} lost after recruitment")
    given = [
        f"{name} {value:g}"
        for name, value in settings.design_options.items()
        if name in ("ratio", "spread_ratio", "groups", "cells", "df1")
    ]
    return "new study: " + ", ".join(parts + given)


def _single(literature: Literature) -> list[str]:
    """Assumptions about single results; those alike but for their numbers are told once."""
    alike: dict[str, dict[str, list[str]]] = {}
    for row in literature.rows:
        for text in row.assumptions:
            texts = alike.setdefault(_NUMBER.sub("#", text), {})
            texts.setdefault(text, []).append(row.label)
    everyone = [row.label for row in literature.rows]
    out = []
    for texts in alike.values():
        (text, labels), *others = texts.items()
        rest = [label for _, more in others for label in more]
        told = f"{_names(labels, everyone)}: {text}"
        if rest:
            known = {*labels, *rest}
            told += f"; likewise, with its own numbers, each of {_names(rest, everyone, known)}"
        out.append(told)
    return out


def _names(labels: list[str], everyone: list[str], known: set[str] | None = None) -> str:
    """The labels, or who is missing from them where that is shorter.

    `known` also counts as named; labels may hold commas, so semicolons part them.
    """
    missing = [x for x in everyone if x not in (known or set(labels))]
    if len(everyone) == 1 or len(labels) <= 2 + len(missing):
        return "; ".join(labels)
    whom = "the others" if known else "all results"
    return f"{whom} but {'; '.join(missing)}" if missing else whom


def warnings(
    literature: Literature,
    answer: Answer,
    rows: tuple[Row, ...],
    settings: PlanSettings,
) -> tuple[str, ...]:
    """What a careful adviser would say unasked."""
    out: list[str] = []
    for row in literature.rows:
        out.extend(
            f"{row.label}: {finding.message}"
            + ("; this changes its significance" if finding.changes_significance else "")
            for finding in check(row.result)
        )
    k, samples = len(literature.rows), len(literature.samples)
    if samples == 1 and k > 1:
        out.append(
            "all results come from one sample: heterogeneity between studies cannot be seen, and "
            "the answer rests on the prior for it; see how it moves with --sensitivity"
        )
    elif samples < _FEW:
        out.append(
            f"only {samples} independent sample{'s' if samples > 1 else ''}: the priors weigh "
            "heavily; see how the answer moves with --sensitivity"
        )
    if literature.significant == k:
        out.append(
            "every result is significant: how strongly printing depended on significance can "
            "hardly be told from the evidence"
        )
    if literature.significant == 0:
        out.append("no result is significant in the predicted direction")
    if answer.probability_negligible > 0.5:
        out.append(
            "the evidence is better explained by no effect than by one: a small first study or a "
            "replication may be wiser than the full study"
        )
    scale = literature.averaged.priors.effect_scale
    if literature.pooled is not None and abs(literature.pooled.mean) > _OUTLANDISH * scale:
        out.append(
            f"the printed effects lie more than {_OUTLANDISH:g} prior standard deviations from 0: "
            "check the entries, or widen --effect-scale if effects of this size are real"
        )
    if not literature.averaged.rested:
        out.append(
            f"the numerical grids did not settle: quantiles still moved by "
            f"{literature.averaged.error:.3f}; treat the planning value as that uncertain"
        )
    profile = literature.profile.mean.quantile(1 - settings.assurance)
    averaged = literature.averaged.mean.quantile(1 - settings.assurance)
    if np.isfinite(profile) and abs(profile - averaged) > 0.25 * scale:
        out.append(
            "the two readings of the selection model differ clearly: the answer leans on the "
            "priors more than on the evidence"
        )
    return tuple(out)
