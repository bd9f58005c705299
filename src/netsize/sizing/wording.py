"""What a sizing takes for granted, in words: test, level, and how each modifier changed n."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from netsize.sizing.records import Sizing

__all__ = ["assumptions"]


def assumptions(sizing: Sizing) -> tuple[str, ...]:
    """One sentence for every assumption and modifier in force."""
    return (
        *sizing.study.design.assumptions(),
        *_exact(sizing),
        _level(sizing),
        *_conversion(sizing),
        *_allocation(sizing),
        *_covariates(sizing),
        *_clusters(sizing),
        *_loss(sizing),
    )


def _exact(sizing: Sizing) -> tuple[str, ...]:
    exact = sizing.exact_power()
    if exact is None:
        return ()
    return (f"exact power of the test at this size, from the binomial distribution: {exact:.3f}",)


def _level(sizing: Sizing) -> str:
    m, law = sizing.study.modifiers, sizing.study.design.law
    sides = ""
    if law.directional:
        sides = ", two-sided" if m.sides == 2 else ", one-sided in the predicted direction"
    if m.tests == 1:
        return f"α = {m.alpha:g}{sides}"
    return (
        f"α = {m.alpha:g} shared by {m.tests} tests (Bonferroni), so {m.alpha / m.tests:.4g} "
        f"each{sides}"
    )


def _conversion(sizing: Sizing) -> tuple[str, ...]:
    own = sizing.study.design.metrics[0]
    if sizing.metric is own or sizing.metric.name == own.name:
        return ()
    note = f" ({sizing.metric.note})" if sizing.metric.note else ""
    if sizing.effect.size == 1:
        value, converted = float(sizing.effect.flat[0]), float(sizing.own_effect.flat[0])
        return (f"{sizing.metric.title} {value:.4g} is {own.title} {converted:.4g}{note}",)
    return (f"effects converted from {sizing.metric.title} to {own.title}{note}",)


def _allocation(sizing: Sizing) -> tuple[str, ...]:
    ratio = getattr(sizing.study.design, "ratio", 1.0)
    if ratio == 1:
        return ()
    return (
        f"group 2 is {ratio:g} times group 1; the smaller group is the whole number searched, the "
        "larger is rounded up",
    )


def _covariates(sizing: Sizing) -> tuple[str, ...]:
    m = sizing.study.modifiers
    if m.covariate_r2 == 0:
        return ()
    some = "a covariate explains" if m.covariates == 1 else f"{m.covariates} covariates explain"
    return (
        f"{some} {m.covariate_r2:g} of the error variance: about {1 - m.covariate_r2:.3g} times "
        f"the participants, at the cost of {m.covariates} error df; the effect stays in units of "
        "the unadjusted SD",
    )


def _clusters(sizing: Sizing) -> tuple[str, ...]:
    m, law = sizing.study.modifiers, sizing.study.design.law
    if m.cluster_size == 1:
        return ()
    counted = (
        "; error df count clusters, so small trials need more than n times the design effect"
        if law.error_df
        else ""
    )
    said = (
        f"whole clusters of {m.cluster_size} analysed, intraclass correlation "
        f"{m.cluster_correlation:g}: design effect {m.design_effect:.4g}{counted}"
    )
    finite = sizing.finite
    if sizing.effect.size == 1 and finite.all():
        clusters = np.rint(sizing.n_per_group.ravel() / m.cluster_size).astype(int)
        said += f"; {' + '.join(str(c) for c in clusters)} clusters"
    return (said,)


def _loss(sizing: Sizing) -> tuple[str, ...]:
    m = sizing.study.modifiers
    if m.loss == 0:
        return ()
    said = f"{m.loss:.3g} of those recruited are lost before the analysis: n/(1-loss), rounded up"
    if sizing.effect.size == 1 and sizing.finite.all():
        said += (
            f"; {int(sizing.recruited_total.flat[0])} recruited, "
            f"{int(sizing.n_total.flat[0])} analysed"
        )
    return (said,)
