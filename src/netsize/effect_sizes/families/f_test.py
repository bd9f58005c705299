"""F tests: one numerator degree of freedom is t², several go on Cohen's f."""

from __future__ import annotations

import math

from netsize.effect_sizes import estimators
from netsize.effect_sizes.families.sizes import degrees, total
from netsize.effect_sizes.families.t_test import student_form
from netsize.effect_sizes.forms.base import Form
from netsize.effect_sizes.forms.squares import FisherForm
from netsize.effect_sizes.observed import Observed, f_law, observe, t_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["fisher_form", "from_f"]


def from_f(result: ReportedResult, settings: Settings) -> Form:
    """F(df1, df2)."""
    if len(result.df) != 2:
        raise EvidenceError("an F needs two degrees of freedom, as in F(1, 56) = 5.12")
    df1, df2 = degrees(result, 0), degrees(result, 1)
    if df1 == 1:
        if result.value is not None and result.value < 0:
            raise EvidenceError(f"F = {result.value:g} cannot be negative")
        root = None if result.value is None else math.sqrt(result.value)
        observed = observe(result, t_law(df2), settings, root)
        return student_form(result, observed, df2, others=_shares(observed, df2, result))
    observed = observe(result, f_law(df1, df2), settings, result.value)
    return fisher_form(result, observed, df1, df2)


def fisher_form(result: ReportedResult, observed: Observed, df1: float, df2: float) -> FisherForm:
    """F on several numerator df with the number of participants told or assumed."""
    within = result.design == "paired"
    size = df1 + df2 + 1
    notes: tuple[str, ...] = ()
    if within:
        # df₂/df₁ = n - 1 for one factor within participants, whatever the sphericity correction
        n = total(result) if result.n else round(df2 / df1) + 1
        notes = ("f relative to the error within participants",)
    elif result.n:
        n = total(result)
        if n < df1 + df2 + 1 - 1e-9:
            raise EvidenceError(
                f"F({df1:g}, {df2:g}) needs at least {math.ceil(df1 + df2) + 1} participants, "
                f"and n is {n}"
            )
        size = float(n)
    else:
        n = round(size)
        notes = (f"one-way design of {n} assumed from the degrees of freedom; [n 96] if larger",)
    cells = round(df1) + 1
    groups = result.n if len(result.n) > 1 else _even(n, cells) if not within else (n,)
    return FisherForm(
        result=result,
        observed=observed,
        df1=df1,
        df2=df2,
        size=size,
        n=n,
        groups=groups,
        within=within,
        assumptions=notes,
    )


def _even(n: int, cells: int) -> tuple[int, ...]:
    return tuple(n // cells + (i < n % cells) for i in range(cells))


def _shares(
    observed: Observed, df2: float, result: ReportedResult
) -> tuple[tuple[str, float], ...]:
    """η², ε², ω² of F(1, df2), which readers of an F expect beside d."""
    if not observed.exact:
        return ()
    f = observed.low**2
    n = sum(result.n) if result.n else None
    return (
        ("eta2", float(estimators.eta_squared(f, 1, df2))),
        ("epsilon2", float(estimators.epsilon_squared(f, 1, df2))),
        ("omega2", float(estimators.omega_squared(f, 1, df2, n=n))),
    )
