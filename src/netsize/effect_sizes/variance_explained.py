"""Effects on Cohen's f from F and chi-square statistics."""

from __future__ import annotations

import math

from netsize.effect_sizes import estimators
from netsize.effect_sizes.observed import Observed
from netsize.effect_sizes.records import EffectSize, Evidence
from netsize.effect_sizes.settings import Settings
from netsize.effect_sizes.signed_roots import signed_root, variance_from_f
from netsize.reported.records import ReportedResult, StudyDesign

__all__ = ["f_effect"]


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
        null_variance = variance_from_f(0.0, df1=df1, df2=df2, scale=scale)
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
            estimate = signed_root(square)
            ncp = max(square, 0.0) * scale**2
            variance = variance_from_f(ncp, df1=df1, df2=df2, scale=scale)
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
