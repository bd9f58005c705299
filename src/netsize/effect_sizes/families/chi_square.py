"""Chi-square tests of contingency tables."""

from __future__ import annotations

import math

from netsize.effect_sizes.families.sizes import degrees, total
from netsize.effect_sizes.forms.base import Form
from netsize.effect_sizes.forms.normal import NormalForm
from netsize.effect_sizes.forms.squares import ChiSquareForm
from netsize.effect_sizes.observed import chi2_law, observe, z_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_chi_square"]


def from_chi_square(result: ReportedResult, settings: Settings) -> Form:
    """χ²(df, N): φ with a direction on one degree of freedom, Cohen's w on several."""
    if not result.df:
        raise EvidenceError("a chi-square needs its degrees of freedom, as in χ²(1, N = 80) = 6.2")
    df, n = degrees(result), total(result)
    if result.value is not None and result.value < 0:
        raise EvidenceError(f"χ² = {result.value:g} cannot be negative")
    if df > 1:
        observed = observe(result, chi2_law(df), settings, result.value)
        return ChiSquareForm(result=result, observed=observed, df=df, n=n)
    root = None if result.value is None else math.sqrt(result.value)
    return NormalForm(
        result=result,
        observed=observe(result, z_law(), settings, root),
        design="correlation",
        n=n,
        groups=result.n if len(result.n) == 2 else (n,),
        table=True,
    )
