"""Small-study corrections: the precision-effect tests and the rule that chooses between them.

PET regresses the estimates on their standard errors, PEESE on their variances, with
inverse-variance weights; the intercept is the effect expected of an infinitely precise study
(Stanley & Doucouliagos 2014). For mean differences the standard error contains the estimate itself,
which manufactures a slope; the effect-free standard error (√(1/ñ) for d) is used as predictor and
for the weights instead (Pustejovsky & Rodgers 2019).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import stdtr

from netsize.numerics.arrays import Array, BoolArray
from netsize.synthesis.confidence import AGREE_BY_LUCK, symmetric, unusable
from netsize.synthesis.lines import Line, weighted_line
from netsize.synthesis.padding import guarded
from netsize.synthesis.records import Estimate, number_of_results

__all__ = [
    "FEW",
    "RULE_LEVEL",
    "PrecisionEffect",
    "peese",
    "pet",
    "pet_peese",
    "pet_peese_many",
    "precision_line",
]

RULE_LEVEL = 0.05
# Regressions on precision are published with simulations from ten results up (Stanley 2017 warns
# of fewer); below, every row says so.
FEW = 10


class PrecisionEffect(NamedTuple):
    """PET, PEESE and the conditional rule for many literatures, every field (...).

    pet_p : one-sided p of the PET intercept against 0. uses_peese : what the rule chose.
    """

    pet: Line
    peese: Line
    pet_p: Array
    uses_peese: BoolArray
    estimate: Array
    se: Array
    df: Array


def precision_line(
    estimates: ArrayLike, null_variances: ArrayLike, mask: ArrayLike | None = None, *, power: int
) -> Line:
    """Regress estimates on their effect-free standard error (`power` 1) or variance (2)."""
    y, v, present, _ = guarded(estimates, null_variances, mask)
    return weighted_line(v ** (power / 2), y, present / v)


def pet_peese_many(
    estimates: ArrayLike, null_variances: ArrayLike, mask: ArrayLike | None = None
) -> PrecisionEffect:
    """The conditional rule: PEESE where PET's intercept is above 0 at one-sided .05, else PET."""
    first = precision_line(estimates, null_variances, mask, power=1)
    second = precision_line(estimates, null_variances, mask, power=2)
    with np.errstate(all="ignore"):
        t = first.intercept / first.intercept_se
        p = np.where(np.isnan(t), np.nan, stdtr(first.df, -t))
    uses_peese = p < RULE_LEVEL
    return PrecisionEffect(
        first,
        second,
        p,
        uses_peese,
        np.where(uses_peese, second.intercept, first.intercept),
        np.where(uses_peese, second.intercept_se, first.intercept_se),
        first.df,
    )


def pet(estimates: ArrayLike, null_variances: ArrayLike, *, level: float = 0.95) -> Estimate:
    """Precision-effect test: intercept of the line in the standard error; needs k ≥ 3."""
    line = precision_line(estimates, null_variances, power=1)
    return _row("pet", "PET", line, np.size(estimates), level, "")


def peese(estimates: ArrayLike, null_variances: ArrayLike, *, level: float = 0.95) -> Estimate:
    """Precision-effect estimate with standard error: the line in the variance; needs k ≥ 3."""
    line = precision_line(estimates, null_variances, power=2)
    return _row("peese", "PEESE", line, np.size(estimates), level, "")


def pet_peese(estimates: ArrayLike, null_variances: ArrayLike, *, level: float = 0.95) -> Estimate:
    """The conditional rule as one row."""
    fit = pet_peese_many(estimates, null_variances)
    line = fit.peese if fit.uses_peese else fit.pet
    sign = "above" if fit.uses_peese else "not above"
    chosen = "PEESE" if fit.uses_peese else "PET"
    choice = f"PET is {sign} 0 at one-sided .05, so {chosen} is taken"
    return _row("pet-peese", "PET-PEESE", line, np.size(estimates), level, choice)


def _row(key: str, label: str, line: Line, used: int, level: float, reason: str) -> Estimate:
    if used < 3:
        return unusable(
            key, label, level=level, used=used, reason="a line needs at least three results"
        )
    if not np.isfinite(line.intercept):
        return unusable(
            key,
            label,
            level=level,
            used=used,
            reason="all results are equally precise, so there is no trend to fit",
        )
    luck = AGREE_BY_LUCK if 0 < line.scale < 1 else ""
    few = f"unreliable with {number_of_results(used)}" if used < FEW else ""
    return symmetric(
        key,
        label,
        estimate=float(line.intercept),
        se=float(line.intercept_se),
        df=float(line.df),
        level=level,
        used=used,
        reason="; ".join(part for part in (reason, luck, few) if part),
    )
