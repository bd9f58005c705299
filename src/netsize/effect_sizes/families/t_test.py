"""t tests, whatever they compare."""

from __future__ import annotations

from netsize.effect_sizes.families.sizes import comparison, degrees, two_groups
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import Observed, observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_t", "student_form"]


def from_t(result: ReportedResult, settings: Settings) -> StudentForm:
    """t(df); without df, from the sizes of the groups."""
    df = degrees(result) if result.df else None
    if df is None:
        df = _df_of_sizes(result)
    observed = observe(result, t_law(df), settings, result.value)
    return student_form(result, observed, df)


def student_form(
    result: ReportedResult,
    observed: Observed,
    df: float,
    assumptions: tuple[str, ...] = (),
    others: tuple[tuple[str, float], ...] = (),
) -> StudentForm:
    """A signed t statistic with the design and sizes that `result` tells or leaves to assume."""
    design, design_notes = comparison(result, df)
    notes = (*assumptions, *design_notes)
    if design == "two-groups":
        groups, size_notes = two_groups(result, df)
        notes = (*notes, *size_notes)
        if df != round(df):
            notes = (*notes, f"Welch's df {df:g}; d standardized as if variances were equal")
        n = sum(result.n) if result.n else sum(groups)
        sizes: tuple[int, ...] = groups
    else:
        n = _single_group(result, df, 1 if design != "correlation" else 2)
        sizes = (n,)
    return StudentForm(
        result=result,
        observed=observed,
        df=df,
        design=design,
        n=n,
        groups=sizes,
        others=others,
        assumptions=notes,
    )


def _single_group(result: ReportedResult, df: float, parameters: int) -> int:
    """Participants of a design with one group: df + `parameters` unless printed."""
    if not result.n:
        return round(df) + parameters
    # [n 20, 20] beside a paired test is the same twenty people twice
    n = result.n[0] if len(set(result.n)) == 1 else sum(result.n)
    if df > n - parameters + 1e-9:
        raise EvidenceError(
            f"df {df:g} needs at least {round(df) + parameters} participants, and n is {n}"
        )
    return n


def _df_of_sizes(result: ReportedResult) -> float:
    if not result.n:
        raise EvidenceError("degrees of freedom and n are both missing; give one, as [n 20, 20]")
    design, _ = comparison(result, None)
    if design == "two-groups":
        return float(sum(result.n) - 2)
    return float(_single_group(result, 0.0, 0) - (2 if design == "correlation" else 1))
