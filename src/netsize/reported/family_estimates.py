"""Printed estimates: ratios, regression coefficients, counts, means, d, shares of variance."""

from __future__ import annotations

import math
import re
from collections.abc import Callable

from netsize.reported.effect_names import effect_name
from netsize.reported.family_parts import (
    Context,
    Fields,
    design_or,
    df_beside,
    number_fields,
    two_if_two,
)
from netsize.reported.faults import Fault
from netsize.reported.items import Item
from netsize.reported.records import Interval
from netsize.reported.summaries import complete_means

__all__ = [
    "from_counts",
    "from_estimate",
    "from_means",
    "from_odds",
    "from_plus_minus",
    "from_ratio",
    "from_several",
    "from_share",
    "from_slope",
    "from_smd",
    "ready_made",
]


_LARGEST_RATIO = 20.0


def from_odds(context: Context) -> Fields:
    item = context.primary
    if item.number is None or item.number.value <= 0:
        raise Fault("an odds ratio is above 0")
    if item.interval is None:
        raise Fault(
            "an odds ratio needs its interval: OR = 1.85, 95% CI [1.10, 3.10]",
            harmless=item.number.value == 1,  # the category of reference
        )
    if item.interval.low <= 0:
        raise Fault("the interval of an odds ratio is above 0")
    if not item.interval.low <= item.number.value <= item.interval.high:
        raise Fault("the odds ratio lies outside its interval")
    return {
        "family": "odds-ratio",
        **number_fields(item),
        "n": context.sizes.n,
        "n_origin": context.sizes.origin,
        "interval": item.interval,
        "design": "two-groups",
        "design_origin": "assumed",
        "notes": item.notes,
    }


def from_ratio(context: Context) -> Fields:
    item = context.primary
    if item.number is None or item.number.value <= 0:
        raise Fault("a ratio is above 0")
    rate = not item.number.decimals and item.number.value > 1  # hardly a rounded ratio
    if item.name in ("HR", "RR") and (rate or item.number.value >= _LARGEST_RATIO):
        raise Fault(f"{item.name} may be a rate, such as a heart rate; write hazard or risk ratio")
    if item.interval is None:
        raise Fault(f"{item.name} needs its interval: {item.name} = 1.85, 95% CI [1.10, 3.10]")
    if item.interval.low <= 0:
        raise Fault("the interval of a ratio is above 0")
    return ready_made(item, "log-ratio", math.log)


def ready_made(item: Item, metric: str, transform: Callable[[float], float]) -> Fields:
    """An effect whose interval says how precise it is, taken to the scale on which it is normal."""
    assert item.number is not None
    assert item.interval is not None
    low, high = item.interval.low, item.interval.high
    value = item.number.value
    if item.number.relation != "=" or not low <= value <= high:
        raise Fault("the value lies outside its interval")
    shown = f"{item.name} with its interval"
    return {
        "family": "estimate",
        "value": transform(value),
        "relation": "=",
        "interval": Interval(transform(low), transform(high), item.interval.level),
        "metric": metric,
        "notes": (*item.notes, f"{shown}, read as a ready-made effect on {metric}"),
    }


def from_slope(context: Context) -> Fields:
    item, group = context.primary, context.group
    test = group.first("t")
    error = group.first("se")
    df = item.arguments or (test.arguments if test else ()) or df_beside(group)
    common: Fields = {
        "n": context.sizes.total(),
        "n_origin": context.sizes.origin,
        "design": "correlation",
        "design_origin": "printed",
    }
    if len(df) != 1:
        raise Fault("a regression coefficient needs the df of its t: b = 0.42, SE = 0.15, df = 96")
    if error is not None and error.number is not None:
        if error.number.value <= 0:
            raise Fault("a standard error is above 0", error.start, error.end)
        return {
            "family": "coefficient",
            **number_fields(item),
            "df": df,
            "standard_error": error.number.value,
            **common,
        }
    if test is None:
        raise Fault(
            "a regression coefficient needs its standard error: b = 0.42, SE = 0.15, df = 96"
        )
    return {
        "family": "t",
        **number_fields(test),
        "df": df,
        **common,
        "notes": (f"t of the regression coefficient {item.name}, read as a partial correlation",),
    }


def from_estimate(context: Context) -> Fields:
    item, group = context.primary, context.group
    error, variance = group.first("se"), group.first("variance")
    notes: tuple[str, ...] = ()
    standard_error = None
    if error is not None and error.number is not None:
        standard_error = error.number.value
    elif variance is not None and variance.number is not None:
        if variance.number.value <= 0:
            raise Fault("a variance is above 0", variance.start, variance.end)
        standard_error = variance.number.value**0.5
        notes = ("standard error from the variance",)
    if standard_error is None and item.interval is None:
        raise Fault("a ready-made effect needs its variance, its se, or low and high")
    if standard_error is not None and standard_error <= 0:
        raise Fault("a standard error is above 0", *((error.start, error.end) if error else ()))
    number = item.number
    inside = item.interval
    if number is not None and inside and not inside.low <= number.value <= inside.high:
        raise Fault("the effect lies outside its interval")
    return {
        "family": "estimate",
        **number_fields(item),
        "n": context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "standard_error": standard_error,
        "interval": item.interval,
        "metric": item.name,
        "design": context.design,
        "design_origin": context.design_origin,
        "notes": notes,
    }


def from_counts(context: Context) -> Fields:
    counts = context.primary.counts
    return {
        "family": "counts",
        "counts": counts,
        "n": tuple(c.n for c in counts),
        "n_origin": "printed",
        "design": "two-groups",
        "design_origin": "printed",
    }


def from_means(context: Context) -> Fields:
    groups = complete_means(context.group)
    if not groups:
        raise Fault(
            "means need an SD and n for each of two groups: "
            "M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20",
            harmless=len(context.group.every("mean")) == 1,
        )
    return {
        "family": "means",
        "groups": groups,
        "n": tuple(g.n for g in groups),
        "n_origin": "printed",
        "design": context.design or "two-groups",
        "design_origin": context.design_origin if context.design else "printed",
    }


def from_smd(context: Context) -> Fields:
    item = context.group.first("smd")
    assert item is not None
    name = effect_name(item)
    error = context.group.first("se")
    if not context.sizes.n and name in ("d", "g"):
        if item.interval is not None:
            return ready_made(item, "mean-difference", float)
        if error is not None and error.number is not None and error.number.value > 0:
            return {
                "family": "estimate",
                **number_fields(item),
                "standard_error": error.number.value,
                "metric": "mean-difference",
                "notes": (f"{item.name} with its SE, read as a ready-made effect",),
            }
    if not context.sizes.n:
        raise Fault(
            f"{item.name} alone needs the number of participants: {item.name} = 0.5, n = 20, 22"
        )
    within = name == "dz"
    implied = "paired" if within else two_if_two(context.sizes)
    design, origin = design_or(context, implied)
    return {
        "family": "smd",
        **number_fields(item),
        "n": context.sizes.n if design in ("paired", "one-sample") else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "metric": name,
        "interval": item.interval,
        "notes": _total_note(context),
    }


def _total_note(context: Context) -> tuple[str, ...]:
    """A small n is often one group's size; beside a d there is no df to tell."""
    sizes = context.sizes
    if len(sizes.n) != 1 or sizes.each or sizes.origin != "printed" or context.design:
        return ()
    return (f"n = {sizes.n[0]} read as all participants; [n 20, 20] gives group sizes",)


def from_share(context: Context) -> Fields:
    item = context.group.first("eta", "r2")
    assert item is not None
    assert item.number is not None
    if effect_name(item) == "adjusted-R2":
        raise Fault("an adjusted R² says too little; print R² with n, or its F")
    if not item.number.value < 1:
        raise Fault("a share of variance is below 1")
    if not context.sizes.n:
        raise Fault(
            f"{item.name} alone needs n or its F: F(1, 56) = 5.12, or {item.name} = .08, n = 58"
        )
    return {
        "family": "eta2",
        **number_fields(item),
        "df": df_beside(context.group),
        "n": context.sizes.n,
        "n_origin": context.sizes.origin,
        "design": context.design,
        "design_origin": context.design_origin,
        "metric": re.sub("^partial-(?=omega|epsilon)", "", effect_name(item)),
    }


def from_several(context: Context) -> Fields:
    raise Fault("several tests in one statement; give each its own value")


def from_plus_minus(context: Context) -> Fields | None:
    if not context.sizes.n:
        return None  # a description, such as an age
    raise Fault(
        "± may be an SD or a standard error; write M = 5.2, SD = 1.1, n = 20 for each group"
    )
