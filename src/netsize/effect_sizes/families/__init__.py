"""From each family of reported results to a standard form, a short module a family.

A family is a function (result, settings) → Form that raises EvidenceError with the reason where
the result cannot be used; `FAMILIES` holds them under the names of `reported.records.Family`.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeAlias

from netsize.effect_sizes.families.chi_square import from_chi_square
from netsize.effect_sizes.families.coefficient import from_coefficient
from netsize.effect_sizes.families.correlation import from_correlation
from netsize.effect_sizes.families.estimate import from_estimate
from netsize.effect_sizes.families.f_test import from_f
from netsize.effect_sizes.families.means import from_means
from netsize.effect_sizes.families.normal_test import from_p, from_z
from netsize.effect_sizes.families.odds import from_counts, from_odds_ratio
from netsize.effect_sizes.families.printed_effect import from_share, from_standardized
from netsize.effect_sizes.families.t_test import from_t
from netsize.effect_sizes.forms.base import Form
from netsize.effect_sizes.settings import Settings
from netsize.reported.records import Family, ReportedResult

__all__ = ["FAMILIES"]

Reduction: TypeAlias = Callable[[ReportedResult, Settings], Form]

FAMILIES: dict[Family, Reduction] = {
    "t": from_t,
    "f": from_f,
    "r": from_correlation,
    "z": from_z,
    "chi2": from_chi_square,
    "p": from_p,
    "smd": from_standardized,
    "eta2": from_share,
    "means": from_means,
    "counts": from_counts,
    "odds-ratio": from_odds_ratio,
    "coefficient": from_coefficient,
    "estimate": from_estimate,
}
