"""Test statistics with their degrees of freedom: t, F, r, z, chi-square, Wald, ranks, p alone."""

from __future__ import annotations

import math

from netsize.reported.family_estimates import ready_made
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
from netsize.reported.sizes import fit_to_df
from netsize.reported.summaries import complete_means

__all__ = ["from_chi", "from_f", "from_p", "from_r", "from_rank", "from_t", "from_wald", "from_z"]


def from_t(context: Context) -> Fields:
    item = context.primary
    bare = not item.arguments and not context.group.first("df")
    year = item.arguments and 1800 <= item.arguments[0] < 2100
    if year and item.number and not item.number.decimals and context.group.p() is None:
        raise Fault("a year may stand in these brackets; print the value with its decimals")
    if item.name == "T" and bare:
        raise Fault("the rank statistic T is converted through its z; print z with n")
    decimals = item.number.decimals if item.number else None
    if item.name == "T" and not decimals and context.group.first("p") is None:
        raise Fault("a capital T may be a function or a variable; write t for the test statistic")
    return _with_df("t", context, item)


def _with_df(family: str, context: Context, item: Item) -> Fields:
    df = item.arguments or df_beside(context.group)
    notes = list(item.notes)
    design, origin = context.design, context.design_origin
    if context.preceding and origin != "tag":
        design, origin = context.preceding, "printed"
    if "bare" in item.flags and context.group.first("p") is None and df[-1] < 5:
        raise Fault(
            f"{item.name} with a bare number may be a variable; write {item.name}(df) = value"
        )
    if not df:
        df, note = _df_from_sizes(family, context, design)
        notes.append(note)
    if family == "t" and df[0] != int(df[0]) and design is None:
        design, origin = "two-groups", "printed"
        notes.append("fractional df: read as Welch's test of two groups")
    fit = fit_to_df(context.sizes, df, design)
    notes += fit.notes
    if fit.design and design is None:
        design, origin = fit.design, fit.design_origin
    return {
        "family": family,
        **number_fields(item),
        "df": df,
        "n": fit.n,
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "groups": complete_means(context.group),
        "notes": tuple(notes),
    }


def _df_from_sizes(
    family: str, context: Context, design: str | None
) -> tuple[tuple[float, ...], str]:
    sizes = context.sizes
    groups = sizes.groups(2)
    if len(groups) == 2 and design in (None, "two-groups"):
        df = float(sum(groups) - 2)
        note = f"df not printed: {df:g} from the group sizes"
    elif len(sizes.n) == 1 and design in ("paired", "one-sample"):
        df = float(sizes.n[0] - 1)
        note = f"df not printed: {df:g} from n - 1"
    elif len(sizes.n) == 1 and design in ("two-groups", "correlation"):
        df = float(sizes.n[0] - 2)
        note = f"df not printed: {df:g} from n - 2"
    else:
        example = "t(38)" if family == "t" else "F(1, 56)"
        raise Fault(
            f"no degrees of freedom; write {example}, or add the group sizes, as in [n 20, 22], "
            "or a design and n, as in [paired; n 20]"
        )
    if df <= 0:
        raise Fault("these group sizes leave no degrees of freedom")
    return ((df,) if family == "t" else (1.0, df)), note


def from_f(context: Context) -> Fields:
    item = context.primary
    if item.number is not None and item.number.value < 0:
        raise Fault("F cannot be negative")
    if item.name == "f" and context.group.first("p") is None:
        raise Fault("a small f may be a function or Cohen's f; write F for the test statistic")
    df = item.arguments or df_beside(context.group)
    if len(df) == 1:
        raise Fault("F takes two numbers of degrees of freedom, as in F(1, 56)")
    return _with_df("f", context, item)


def from_r(context: Context) -> Fields:
    item = context.primary
    group = context.group
    symbol = item.name
    if symbol.startswith("R"):
        raise Fault("capital R is the multiple correlation; write r for that of two variables")
    number = item.number
    if number is not None and (abs(number.value) > 1 or (abs(number.value) == 1)):
        raise Fault("a correlation lies strictly between -1 and 1")
    notes = list(item.notes)
    rank = symbol in ("ρ", "rho", "rs", "r_s")
    if rank:
        notes.append("rank correlation, read as a correlation of the same size")
    metric = "partial-r" if "partial" in symbol.lower() or symbol in ("pr", "r_p") else None
    metric = "rank-r" if rank else metric
    df = item.arguments or df_beside(group)
    beside = group.first("t")
    if not df and beside is not None:
        df = beside.arguments
    if item.interval and not -1 < item.interval.low < item.interval.high < 1:
        raise Fault("the interval of a correlation lies between -1 and 1")
    if not df and not context.sizes.n:
        if item.interval is None:
            raise Fault("a correlation needs its df or n: r(48) = .31, or r = .31, n = 50")
        return ready_made(item, "fisher-z", math.atanh)
    return {
        "family": "r",
        **number_fields(item),
        "df": df,
        "n": context.sizes.total(),
        "n_origin": context.sizes.origin,
        "design": "correlation",
        "design_origin": "printed",
        "interval": item.interval,
        "metric": metric,
        "notes": tuple(notes),
    }


def from_z(context: Context) -> Fields:
    item = context.primary
    if not context.sizes.n:
        raise Fault("z needs the number of participants: z = 2.31, n = 80")
    notes = list(item.notes)
    rank = context.group.first("rank") or context.group.first("t")
    if rank is not None:
        notes.append(f"rank test {rank.name}, read through its z")
    design, origin = design_or(context, two_if_two(context.sizes))
    return {
        "family": "z",
        **number_fields(item),
        "n": context.sizes.n if not context.sizes.each else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "notes": tuple(notes),
    }


def from_chi(context: Context) -> Fields:
    item = context.primary
    group = context.group
    df = item.arguments or df_beside(group)
    symbol = item.name
    if symbol[0] == "x" and group.first("p") is None and not (item.sizes or group.first("size")):
        raise Fault("x² may be a square; write χ2(1, N = 80) for a chi-square")
    if len(df) != 1:
        raise Fault("chi-square needs its df, as in χ²(1, N = 80)")
    if df[0] != int(df[0]):
        raise Fault("the df of a chi-square is a whole number")
    if item.number is not None and item.number.value < 0:
        raise Fault("chi-square cannot be negative")
    notes = list(item.notes)
    if "second is N" in item.flags:
        notes.append("second number in the brackets read as N")
    return {
        "family": "chi2",
        **number_fields(item),
        "df": df,
        "n": context.sizes.total(),
        "n_origin": context.sizes.origin,
        "design": context.design,
        "design_origin": context.design_origin,
        "notes": tuple(notes),
    }


def from_wald(context: Context) -> Fields:
    if not (context.primary.arguments or df_beside(context.group)):
        raise Fault("Wald may be z or χ²; write Wald z = 2.31 or Wald χ2(1) = 5.3, with n")
    fields = from_chi(context)
    fields["notes"] = (*fields["notes"], "Wald statistic with df, read as chi-square")
    return fields


def from_rank(context: Context) -> Fields:
    item = context.primary
    if context.group.first("p") is not None and context.sizes.n:
        fields = from_p(context)
        fields["notes"] = (*fields["notes"], f"rank test {item.name} without z: read through its p")
        return fields
    raise Fault(f"{item.name} of a rank test is converted through its z; print z and n, or p and n")


def from_p(context: Context) -> Fields:
    item = context.group.p()
    assert item is not None
    if not context.sizes.n:
        raise Fault("p alone needs its test or the number of participants: p = .03, n = 40")
    design, origin = design_or(context, two_if_two(context.sizes))
    fields: Fields = {
        "family": "p",
        **number_fields(item),
        "n": context.sizes.n if not context.sizes.each else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "notes": (),
    }
    number = item.number
    if number is not None and number.value == 0 and number.relation == "=":
        half = 0.5 * 10.0 ** -(number.decimals or 3)
        fields |= {"value": half, "relation": "<", "notes": (f"p printed as 0: below {half:g}",)}
    return fields
