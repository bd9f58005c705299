"""z tests with n, and p-values with n and nothing else."""

from __future__ import annotations

from dataclasses import replace

from netsize.effect_sizes.families.sizes import Comparison, comparison, total
from netsize.effect_sizes.families.t_test import from_t
from netsize.effect_sizes.forms.base import Form, equal_groups
from netsize.effect_sizes.forms.normal import NormalForm
from netsize.effect_sizes.observed import observe, z_law
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_p", "from_z"]


def from_z(result: ReportedResult, settings: Settings) -> NormalForm:
    """z with n, also the z of a rank test or a Wald test."""
    n = total(result)
    design: Comparison | None = None
    if result.design is not None or len(result.n) == 2:
        design, _ = comparison(result, None)
    groups: tuple[int, ...] = (n,)
    notes: tuple[str, ...] = ()
    if design == "two-groups":
        groups = result.n if len(result.n) == 2 else equal_groups(n)
        if len(result.n) != 2:
            notes = (f"equal groups assumed from n {n}; give [n 18, 22] if they differ",)
    return NormalForm(
        result=result,
        observed=observe(result, z_law(), settings, result.value),
        design=design,
        n=n,
        groups=groups,
        assumptions=notes,
    )


def from_p(result: ReportedResult, settings: Settings) -> Form:
    """p with n: turned back into the t that has it, or left as the interval that p < .05 means.

    The t of n participants is also that of a correlation with this p (Rosenthal & Rubin 2003).
    """
    if result.p is None:
        raise EvidenceError("no p-value is given")
    # a p-value printed alone may stand as the value itself
    form = from_t(replace(result, value=None, relation="="), settings)
    form = replace(form, result=result)
    if result.design is None and len(result.n) == 1:
        return replace(form, adaptable=True)
    return form
