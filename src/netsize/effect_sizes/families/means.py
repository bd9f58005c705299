"""Means and standard deviations of each group."""

from __future__ import annotations

import math

from netsize.effect_sizes.families.f_test import fisher_form
from netsize.effect_sizes.forms.base import GIVE_CORRELATION, Form
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import Observed, f_law, observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import Group, ReportedResult

__all__ = ["from_means"]


def from_means(result: ReportedResult, settings: Settings) -> Form:
    """Two groups, the same people twice, one group against 0, or several groups."""
    groups = result.groups
    if not groups:
        raise EvidenceError("no means are given")
    for g in groups:
        if g.n < 2 or not (g.sd > 0 and math.isfinite(g.sd) and math.isfinite(g.mean)):
            raise EvidenceError(
                f"M = {g.mean:g}, SD = {g.sd:g}, n = {g.n}: a mean needs a positive standard "
                "deviation and at least 2 participants"
            )
    if len(groups) == 1:
        return _one_sample(result, settings)
    if len(groups) == 2:
        return _paired(result, settings) if result.design == "paired" else _two(result, settings)
    return _several(result, settings)


def _two(result: ReportedResult, settings: Settings) -> StudentForm:
    first, second = result.groups
    df = first.n + second.n - 2
    error = _pooled_sd(result.groups) * math.sqrt(1 / first.n + 1 / second.n)
    return StudentForm(
        result=result,
        observed=_difference(result, settings, first.mean - second.mean, error, df),
        df=float(df),
        design="two-groups",
        n=first.n + second.n,
        groups=(first.n, second.n),
    )


def _paired(result: ReportedResult, settings: Settings) -> StudentForm:
    first, second = result.groups
    rho = result.correlation if result.correlation is not None else settings.correlation
    if rho is None:
        raise EvidenceError(
            f"the SD of the differences needs the within-pair correlation; {GIVE_CORRELATION}"
        )
    n = min(first.n, second.n)
    sd = math.sqrt(first.sd**2 + second.sd**2 - 2 * rho * first.sd * second.sd)
    observed = _difference(result, settings, first.mean - second.mean, sd / math.sqrt(n), n - 1)
    return StudentForm(
        result=result,
        observed=observed,
        df=float(n - 1),
        design="paired",
        n=n,
        groups=(n,),
        assumptions=(f"SD of the differences from the within-pair correlation {rho:g}",),
    )


def _one_sample(result: ReportedResult, settings: Settings) -> StudentForm:
    (group,) = result.groups
    error = group.sd / math.sqrt(group.n)
    return StudentForm(
        result=result,
        observed=_difference(result, settings, group.mean, error, group.n - 1),
        df=float(group.n - 1),
        design="paired" if result.design == "paired" else "one-sample",
        n=group.n,
        groups=(group.n,),
        assumptions=("mean compared with 0",),
    )


def _several(result: ReportedResult, settings: Settings) -> Form:
    groups = result.groups
    n, df1 = sum(g.n for g in groups), len(groups) - 1
    grand = sum(g.n * g.mean for g in groups) / n
    between = sum(g.n * (g.mean - grand) ** 2 for g in groups) / df1
    f = between / _pooled_sd(groups) ** 2
    df2 = n - len(groups)
    observed = observe(result, f_law(df1, df2), settings, f)
    return fisher_form(result, observed, float(df1), float(df2))


def _difference(
    result: ReportedResult, settings: Settings, difference: float, error: float, df: int
) -> Observed:
    return observe(result, t_law(df), settings, difference / error)


def _pooled_sd(groups: tuple[Group, ...]) -> float:
    squares = sum((g.n - 1) * g.sd**2 for g in groups)
    return math.sqrt(squares / sum(g.n - 1 for g in groups))
