"""Pearson and partial correlations."""

from __future__ import annotations

import math

from netsize.effect_sizes.families.sizes import degrees, total
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import NullLaw, observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_correlation"]


def from_correlation(result: ReportedResult, settings: Settings) -> StudentForm:
    """r with df (n - 2; fewer for a partial correlation) or with n pairs."""
    pairs = degrees(result) + 2 if result.df else float(total(result))
    n = total(result) if result.n else round(pairs)
    if pairs < 3 or pairs > n + 1e-9:
        raise EvidenceError(
            f"a correlation needs 3 pairs or more and df of at most n - 2: n is {n}"
            + (f", df {result.df[0]:g}" if result.df else "")
        )
    if result.value is not None and not abs(result.value) < 1:
        raise EvidenceError(f"r = {result.value:g} is not between -1 and 1")
    df = pairs - 2
    observed = observe(result, _r_law(df), settings, result.value).mapped(lambda r: _t_of(r, df))
    held = round(n - pairs)
    notes = () if held == 0 else (f"partial correlation, {held} variables held constant",)
    if result.metric == "partial-r" and not result.df:
        notes = ("variables held constant not counted: give the df of the partial correlation",)
    return StudentForm(
        result=result,
        observed=observed,
        df=df,
        design="correlation",
        n=n,
        groups=(n,),
        assumptions=notes,
    )


def _r_law(df: float) -> NullLaw:
    t = t_law(df)

    def quantile(a: float) -> float:
        x = t.quantile(a)
        return x / math.hypot(x, math.sqrt(df))

    return NullLaw(True, lambda r: t.upper(_t_of(r, df)), quantile)


def _t_of(r: float, df: float) -> float:
    """t = r √(df/(1-r²)); an unbounded r stands for an unbounded t."""
    return r * math.sqrt(df / ((1 - r) * (1 + r))) if abs(r) < 1 else math.copysign(math.inf, r)
