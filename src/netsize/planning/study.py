"""From the metric of the evidence to the design of the new study."""

from __future__ import annotations

from collections import Counter
from typing import Any

import numpy as np

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectTable
from netsize.errors import EvidenceError, SettingError
from netsize.numerics.arrays import Array
from netsize.planning.settings import PlanSettings
from netsize.sizing.study import Study, make_study

__all__ = ["METRIC_OF", "effect_on", "metric_for", "study_for"]

# The pooling metric whose shown scale each design takes, and what that scale is called there.
METRIC_OF = {
    "two-groups": ("mean-difference", "d"),
    "paired": ("difference-score", "dz"),
    "one-sample": ("difference-score", "d"),
    "correlation": ("fisher-z", "r"),
    "anova": ("cohen-f", "f"),
    "factorial": ("cohen-f", "f"),
    "repeated": ("cohen-f", "f"),
    "regression": ("cohen-f", "f"),
    "contingency": ("cohen-f", "w"),
}


def study_for(table: EffectTable, settings: PlanSettings) -> tuple[Study, tuple[str, ...]]:
    """The study to size and the assumptions made in choosing it.

    Without a design asked for it is the one that the evidence came from; several kinds of F need
    an answer from the user.
    """
    name = settings.design
    notes: tuple[str, ...] = ()
    options = dict(settings.design_options)
    if name is None:
        name, notes, found = _matching(table)
        options = found | options
    else:
        options = _shape_of(name, table, options)
    study = make_study(name, alpha=settings.alpha, sides=settings.sides, **options)
    return study, notes


def _shape_of(name: str, table: EffectTable, options: dict[str, Any]) -> dict[str, Any]:
    """The options that give an F or chi-square test its degrees of freedom, never by default.

    Taken from the evidence where that all has one shape; otherwise the user is asked.
    """
    needed = {"anova": ("groups",), "factorial": ("df1", "cells"), "contingency": ("df1", "rows")}
    wanted = needed.get(name, ())
    if not wanted or any(option in options for option in wanted):
        return options
    kernel = "chi2" if name == "contingency" else "f"
    first = {row.evidence.df[0] for row in table.rows if row.evidence.kernel == kernel}
    if name == "factorial" or len(first) != 1 or not next(iter(first)).is_integer():
        named = " and ".join(f"--{option}" for option in wanted[: 2 if name == "factorial" else 1])
        raise SettingError("--design", f"{name} needs {named}: the evidence does not settle it")
    df1 = int(first.pop())
    return options | ({"df1": df1} if name == "contingency" else {"groups": df1 + 1})


def effect_on(study: Study, metric: Metric, value: Array) -> Array:
    """Effects on the metric's shown scale, expressed on the design's own scale."""
    scale = METRIC_OF[study.design.name][1]
    return np.asarray(study.metric(scale).inward(np.asarray(value, dtype=float)))


def metric_for(settings: PlanSettings) -> str | None:
    """The metric to convert the evidence to: the user's, else the design's, else open."""
    if settings.design is None:
        return settings.metric
    if settings.design not in METRIC_OF:
        raise SettingError(
            "--design",
            f"{settings.design!r} cannot be planned from pooled evidence; a plan takes "
            f"{', '.join(METRIC_OF)} (size other designs with `netsize solve`)",
        )
    needed = METRIC_OF[settings.design][0]
    if settings.metric not in (None, needed):
        raise SettingError(
            "--metric", f"the design {settings.design} is planned on {needed}, leave it out"
        )
    return needed


def _matching(table: EffectTable) -> tuple[str, tuple[str, ...], dict[str, int]]:
    metric = table.metric.name
    if metric == "mean-difference":
        return "two-groups", ("design taken from the evidence: two equal groups; set --design",), {}
    if metric == "fisher-z":
        return "correlation", ("design taken from the evidence: one correlation; set --design",), {}
    if metric == "difference-score":
        kinds = Counter(row.result.design for row in table.rows)
        name = "one-sample" if kinds["one-sample"] > kinds["paired"] else "paired"
        return name, (f"design taken from most of the evidence: {name}; set --design",), {}
    if metric == "cohen-f":
        return _matching_f(table)
    raise EvidenceError(
        "effects on a log-ratio scale do not fix the size of a new study by themselves; weigh them "
        "with `netsize weigh` and size two proportions with `netsize solve`"
    )


def _matching_f(table: EffectTable) -> tuple[str, tuple[str, ...], dict[str, int]]:
    kinds = {(row.evidence.kernel, row.evidence.df[0]) for row in table.rows}
    if len(kinds) != 1 or not next(iter(kinds))[1].is_integer():
        raise EvidenceError(
            "the tests differ in kind or in numerator degrees of freedom; say which design the new "
            "study has, e.g. --design anova --groups 3, --design factorial --df1 2 --cells 6 or "
            "--design contingency --df1 2"
        )
    kernel, df1 = kinds.pop()
    if kernel == "chi2":
        note = (
            f"design taken from the evidence: a contingency table with {df1:g} degrees of freedom, "
            "its Cohen's w shown as f (both have noncentrality f² times participants); set --design"
        )
        return "contingency", (note,), {"df1": int(df1)}
    groups = int(df1) + 1
    note = f"design taken from the evidence: {groups} equal groups; set --design and --groups"
    return "anova", (note,), {"groups": groups}
