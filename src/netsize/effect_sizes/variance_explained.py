"""Effects on Cohen's f from F and chi-square statistics."""

from __future__ import annotations

import math

from netsize.effect_sizes import estimators
from netsize.effect_sizes.observed import Observed
from netsize.effect_sizes.records import EffectSize, Evidence
from netsize.effect_sizes.settings import Settings
from netsize.reported.records import ReportedResult, StudyDesign

__all__ = ["f_effect", "signed_root", "signed_root_variance"]


def signed_root(square: float) -> float:
    """The root of an estimate of f², with the sign of the estimate.

    Unbiased estimates of f² are negative where F is small; cutting them at 0 before pooling would
    bias a mean upward (Okada 2017), so they enter f as a negative root.
    """
    return math.copysign(math.sqrt(abs(square)), square)


def signed_root_variance(square: float, variance: float) -> float:
    """Approximate variance of `signed_root` of an estimate of f² ≥ 0 with the given variance.

    v/√(16 f⁴ + πv/2). For large f² this is the delta method, v/(4f²). At f = 0, where that
    diverges, it is E|x| = √(2v/π) of a normal x with variance v, the exact variance of its signed
    root. In between it interpolates (our own formula).
    """
    return variance / math.sqrt(16 * max(square, 0.0) ** 2 + math.pi * variance / 2)


def f_effect(
    *,
    result: ReportedResult,
    settings: Settings,
    observed: Observed,
    df1: float,
    df2: float,
    scale: float,
    n: int,
    groups: tuple[int, ...],
    design: StudyDesign | None,
    others: tuple[tuple[str, float], ...] = (),
    assumptions: tuple[str, ...] = (),
) -> EffectSize:
    """The effect on Cohen's f of F(df1, df2) with λ = (scale · f)².

    `observed` is F. The estimate is the signed root of λ̂/scale², λ̂ unbiased; `printed` is
    √(η²/(1-η²)), as papers turn a partial η² into f.
    """
    notes = list(assumptions)
    printed = estimate = variance = null_variance = None
    found = list(others)
    if df2 > 4:
        null_variance = _variance(0.0, df1, df2, scale, settings)
    if observed.exact:
        f = observed.low
        printed = math.sqrt(df1 * f / df2) * math.sqrt(n) / scale
        found += [
            ("eta2", float(estimators.eta_squared(f, df1, df2))),
            ("epsilon2", float(estimators.epsilon_squared(f, df1, df2))),
            ("omega2", float(estimators.omega_squared(f, df1, df2, n=n))),
        ]
        if df2 > 2:
            square = float(estimators.unbiased_noncentrality(f, df1, df2)) / scale**2
            found.append(("f2", square))
        if df2 > 4:
            estimate, variance = signed_root(square), _variance(square, df1, df2, scale, settings)
            if square < 0:
                notes.append("F below its mean under no effect: f² negative, kept as it is")
        else:
            notes.append("no variance exists on 4 or fewer error degrees of freedom")
    return EffectSize(
        result=result,
        metric=settings.target,
        printed=printed,
        estimate=estimate,
        variance=variance,
        null_variance=null_variance,
        low=math.nan,
        high=math.nan,
        level=settings.level,
        p=observed.p,
        n=n,
        groups=groups,
        design=design,
        evidence=Evidence(
            kernel="f",
            df=(df1, df2),
            scale=scale,
            low=observed.low,
            high=observed.high,
            cuts=observed.cuts,
            band=observed.band,
        ),
        others=tuple(found),
        assumptions=tuple(notes),
    )


def _variance(square: float, df1: float, df2: float, scale: float, settings: Settings) -> float:
    ncp = max(square, 0.0) * scale**2
    if settings.variance == "large-sample":
        of_ncp = 2 * (df1 + 2 * ncp) + 2 * (df1 + ncp) ** 2 / df2
    else:
        of_ncp = float(estimators.unbiased_noncentrality_variance(ncp, df1, df2))
    return signed_root_variance(square, of_ncp / scale**4)
