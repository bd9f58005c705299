"""Effects printed without their statistic: d or g, and shares of explained variance."""

from __future__ import annotations

import math
from dataclasses import replace

from netsize.effect_sizes import estimators
from netsize.effect_sizes.families.f_test import fisher_form
from netsize.effect_sizes.families.sizes import comparison, degrees, total, two_groups
from netsize.effect_sizes.families.t_test import student_form
from netsize.effect_sizes.forms.base import GIVE_CORRELATION, Form
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import f_law, observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_share", "from_standardized"]


def from_standardized(result: ReportedResult, settings: Settings) -> StudentForm:
    """d, g, d_z, d_av, d_rm or Glass's Δ with n: multiplied back into the t it came from."""
    if result.value is None:
        raise EvidenceError("no value is given")
    name, n = result.metric or "d", total(result)
    design, _ = comparison(result, None)
    notes = [f"{name} turned back into its t"]
    if design == "correlation":
        raise EvidenceError("a standardized mean difference does not belong to a correlation")
    if design == "two-groups":
        groups, _ = two_groups(result, None)
        df, scale = float(n - 2), math.sqrt(groups[0] * groups[1] / n)
        if name == "Δ":
            notes.append("standardized as if both groups had the control group's SD")
    else:
        n = result.n[0] if len(set(result.n)) == 1 else n
        df, scale = float(n - 1), math.sqrt(n)
        if name in ("dav", "drm"):  # standardized by the SD of the scores, not of the differences
            scale /= math.sqrt(2 * (1 - _within_pair(result, settings)))
        elif name != "dz" and design == "paired":
            notes.append("taken as standardized by the SD of the differences")
    if result.df:
        df = degrees(result)
    if df < 1:
        raise EvidenceError(f"n = {n} is too small for a standardized mean difference")
    d = result.value
    if name == "g":
        if df < 2:
            raise EvidenceError("g needs at least 2 error degrees of freedom")
        d = d / float(estimators.small_sample_factor(df))
    observed = observe(result, t_law(df), settings, d * scale)
    return student_form(result, observed, df, tuple(notes))


def _within_pair(result: ReportedResult, settings: Settings) -> float:
    rho = result.correlation if result.correlation is not None else settings.correlation
    if rho is None:
        raise EvidenceError(
            f"{result.metric} needs the within-pair correlation; {GIVE_CORRELATION}"
        )
    return rho


def from_share(result: ReportedResult, settings: Settings) -> Form:
    """η², ω², ε² or R² with n: turned back into the F of a between-participants test."""
    share, n = result.value, total(result)
    kind = (result.metric or "eta2").removeprefix("partial-")
    if kind.startswith("generalized"):
        raise EvidenceError("a generalized η² does not tell its F; give F with its df")
    df1, notes = 1.0, [f"{kind} turned back into its F"]
    if result.df:
        df1 = degrees(result, 0)
    else:
        notes.append("one numerator degree of freedom assumed; give df if there are more")
    df2 = degrees(result, 1) if len(result.df) == 2 else n - df1 - 1
    if df2 < 1:
        raise EvidenceError(f"n = {n} leaves no error degrees of freedom")
    if share is not None and not -1 < share < 1:
        raise EvidenceError(f"{kind} = {share:g} is not a share of variance")
    f = None if share is None else _f_of(kind, share, df1, df2, n)
    if df1 == 1:
        root = None if f is None else math.sqrt(f)
        observed = observe(result, t_law(df2), settings, root)
        return student_form(result, observed, df2, tuple(notes))
    form = fisher_form(result, observe(result, f_law(df1, df2), settings, f), df1, df2)
    return replace(form, assumptions=(*notes, *form.assumptions))


def _f_of(kind: str, share: float, df1: float, df2: float, n: int) -> float:
    """The F behind a share of variance; at least 0."""
    odds = share / (1 - share)
    f = {
        "omega2": 1 + odds * n / df1,
        "epsilon2": (share * df2 + df1) / (df1 * (1 - share)),
    }.get(kind, odds * df2 / df1)
    if f < 0:
        raise EvidenceError(f"{kind} = {share:g} is below any value an F can give")
    return f
