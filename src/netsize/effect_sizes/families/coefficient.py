"""Regression coefficients with their standard error."""

from __future__ import annotations

from netsize.effect_sizes.families.sizes import degrees, total
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_coefficient"]


def from_coefficient(result: ReportedResult, settings: Settings) -> StudentForm:
    """b/SE is t on the residual df; t/√(t²+df) the partial correlation behind it."""
    error = result.standard_error
    notes: tuple[str, ...] = ("partial correlation from the t of a regression coefficient",)
    if result.df:
        df = degrees(result)
    else:
        df = float(total(result) - 2)
        notes = (*notes, "residual df n - 2 assumed, as with one predictor; give df if not")
    if df < 1:
        raise EvidenceError("a regression coefficient needs at least 1 residual df")
    if result.value is not None and error is None and result.p is None:
        raise EvidenceError("the standard error of the coefficient is missing")
    if error is not None and not error > 0:
        raise EvidenceError(f"a standard error of {error:g} is not above 0")
    t = None if result.value is None or error is None else result.value / error
    n = total(result) if result.n else round(df) + 2
    return StudentForm(
        result=result,
        observed=observe(result, t_law(df), settings, t),
        df=df,
        design="correlation",
        n=n,
        groups=(n,),
        assumptions=notes,
    )
