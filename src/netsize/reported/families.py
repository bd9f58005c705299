"""Fourth stage: one group of items becomes the fields of one reported result.

A function a family. Each takes the group with its settings and returns the fields of
`ReportedResult`, or raises `Fault` with what is missing and how to write it.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.items import Item
from netsize.reported.records import Group as GroupSummary
from netsize.reported.records import Interval, Origin, Printed
from netsize.reported.sizes import Sizes, fit_to_df

__all__ = ["Context", "also", "effect_name", "family_fields"]

Fields = dict[str, Any]


@dataclass(frozen=True, slots=True)
class Context:
    """A group with its settings: which design, sizes and words apply to it."""

    group: Group
    sizes: Sizes
    design: str | None
    design_origin: Origin
    preceding: str | None  # the design in the words before the symbol

    @property
    def primary(self) -> Item:
        """The item that names the family."""
        assert self.group.primary is not None
        return self.group.primary


def family_fields(context: Context) -> Fields | None:
    """Fields of the result, or None where the group holds no statistic at all."""
    group = context.group
    if group.primary is not None:
        return _BY_PRIMARY[group.primary.kind](context)
    for kind, build in _BY_FOLLOWER:
        if group.first(kind):
            return build(context)
    return None


# --- tests ---------------------------------------------------------------------------------------


def _t(context: Context) -> Fields:
    item = context.primary
    if item.name == "T" and not item.arguments and not context.group.first("df"):
        raise Fault("the rank statistic T is converted through its z; print z with n")
    return _with_df("t", context, item)


def _with_df(family: str, context: Context, item: Item) -> Fields:
    df = item.arguments or _df_beside(context.group)
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
        **_number(item),
        "df": df,
        "n": fit.n,
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "groups": _complete_means(context.group),
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


def _f(context: Context) -> Fields:
    item = context.primary
    if item.number is not None and item.number.value < 0:
        raise Fault("F cannot be negative")
    if item.name == "f" and context.group.first("p") is None:
        raise Fault("a small f may be a function or Cohen's f; write F for the test statistic")
    df = item.arguments or _df_beside(context.group)
    if len(df) == 1:
        raise Fault("F takes two numbers of degrees of freedom, as in F(1, 56)")
    return _with_df("f", context, item)


def _r(context: Context) -> Fields:
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
    df = item.arguments or _df_beside(group)
    beside = group.first("t")
    if not df and beside is not None:
        df = beside.arguments
    if item.interval and not -1 < item.interval.low < item.interval.high < 1:
        raise Fault("the interval of a correlation lies between -1 and 1")
    if not df and not context.sizes.n:
        if item.interval is None:
            raise Fault("a correlation needs its df or n: r(48) = .31, or r = .31, n = 50")
        return _ready_made(item, "fisher-z", math.atanh)
    return {
        "family": "r",
        **_number(item),
        "df": df,
        "n": context.sizes.total(),
        "n_origin": context.sizes.origin,
        "design": "correlation",
        "design_origin": "printed",
        "interval": item.interval,
        "metric": metric,
        "notes": tuple(notes),
    }


def _z(context: Context) -> Fields:
    item = context.primary
    if not context.sizes.n:
        raise Fault("z needs the number of participants: z = 2.31, n = 80")
    notes = list(item.notes)
    rank = context.group.first("rank") or context.group.first("t")
    if rank is not None:
        notes.append(f"rank test {rank.name}, read through its z")
    design, origin = _design_or(context, None)
    return {
        "family": "z",
        **_number(item),
        "n": context.sizes.n if not context.sizes.each else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "notes": tuple(notes),
    }


def _chi(context: Context) -> Fields:
    item = context.primary
    group = context.group
    df = item.arguments or _df_beside(group)
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
        **_number(item),
        "df": df,
        "n": context.sizes.total(),
        "n_origin": context.sizes.origin,
        "design": context.design,
        "design_origin": context.design_origin,
        "notes": tuple(notes),
    }


def _wald(context: Context) -> Fields:
    if not (context.primary.arguments or _df_beside(context.group)):
        raise Fault("Wald may be z or χ²; write Wald z = 2.31 or Wald χ2(1) = 5.3, with n")
    fields = _chi(context)
    fields["notes"] = (*fields["notes"], "Wald statistic with df, read as chi-square")
    return fields


def _rank(context: Context) -> Fields:
    item = context.primary
    if context.group.first("p") is not None and context.sizes.n:
        fields = _p(context)
        fields["notes"] = (*fields["notes"], f"rank test {item.name} without z: read through its p")
        return fields
    raise Fault(f"{item.name} of a rank test is converted through its z; print z and n, or p and n")


# --- estimates -----------------------------------------------------------------------------------


def _odds(context: Context) -> Fields:
    item = context.primary
    if item.number is None or item.number.value <= 0:
        raise Fault("an odds ratio is above 0")
    if item.interval is None:
        raise Fault("an odds ratio needs its interval: OR = 1.85, 95% CI [1.10, 3.10]")
    if item.interval.low <= 0:
        raise Fault("the interval of an odds ratio is above 0")
    if not item.interval.low <= item.number.value <= item.interval.high:
        raise Fault("the odds ratio lies outside its interval")
    return {
        "family": "odds-ratio",
        **_number(item),
        "n": context.sizes.n,
        "n_origin": context.sizes.origin,
        "interval": item.interval,
        "design": "two-groups",
        "design_origin": "assumed",
    }


def _slope(context: Context) -> Fields:
    item, group = context.primary, context.group
    test = group.first("t")
    error = group.first("se")
    df = item.arguments or (test.arguments if test else ()) or _df_beside(group)
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
            **_number(item),
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
        **_number(test),
        "df": df,
        **common,
        "notes": (f"t of the regression coefficient {item.name}, read as a partial correlation",),
    }


def _estimate(context: Context) -> Fields:
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
        **_number(item),
        "n": context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "standard_error": standard_error,
        "interval": item.interval,
        "metric": item.name,
        "design": context.design,
        "design_origin": context.design_origin,
        "notes": notes,
    }


def _ratio(context: Context) -> Fields:
    item = context.primary
    if item.number is None or item.number.value <= 0:
        raise Fault("a ratio is above 0")
    if item.interval is None:
        raise Fault(f"{item.name} needs its interval: {item.name} = 1.85, 95% CI [1.10, 3.10]")
    if item.interval.low <= 0:
        raise Fault("the interval of a ratio is above 0")
    return _ready_made(item, "log-ratio", math.log)


def _ready_made(item: Item, metric: str, transform: Callable[[float], float]) -> Fields:
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
        "notes": (f"{shown}, read as a ready-made effect on {metric}",),
    }


def _counts(context: Context) -> Fields:
    counts = context.primary.counts
    return {
        "family": "counts",
        "counts": counts,
        "n": tuple(c.n for c in counts),
        "n_origin": "printed",
        "design": "two-groups",
        "design_origin": "printed",
    }


def _means(context: Context) -> Fields:
    groups = _complete_means(context.group)
    if not groups:
        raise Fault(
            "means need an SD and n for each of two groups: "
            "M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20"
        )
    return {
        "family": "means",
        "groups": groups,
        "n": tuple(g.n for g in groups),
        "n_origin": "printed",
        "design": context.design or "two-groups",
        "design_origin": context.design_origin if context.design else "printed",
    }


def _smd(context: Context) -> Fields:
    item = context.group.first("smd")
    assert item is not None
    name = effect_name(item)
    if not context.sizes.n and item.interval is not None and name in ("d", "g"):
        return _ready_made(item, "mean-difference", float)
    if not context.sizes.n:
        raise Fault(
            f"{item.name} alone needs the number of participants: {item.name} = 0.5, n = 20, 22"
        )
    within = name == "dz"
    design, origin = _design_or(context, "paired" if within else None)
    return {
        "family": "smd",
        **_number(item),
        "n": context.sizes.n if design in ("paired", "one-sample") else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": design,
        "design_origin": origin,
        "metric": name,
        "interval": item.interval,
    }


def _eta(context: Context) -> Fields:
    item = context.group.first("eta", "r2")
    assert item is not None
    assert item.number is not None
    if not item.number.value < 1:
        raise Fault("a share of variance is below 1")
    if not context.sizes.n:
        raise Fault(
            f"{item.name} alone needs n or its F: F(1, 56) = 5.12, or {item.name} = .08, n = 58"
        )
    return {
        "family": "eta2",
        **_number(item),
        "df": _df_beside(context.group),
        "n": context.sizes.n,
        "n_origin": context.sizes.origin,
        "design": context.design,
        "design_origin": context.design_origin,
        "metric": re.sub("^partial-(?=omega|epsilon)", "", effect_name(item)),
    }


def _p(context: Context) -> Fields:
    item = context.group.first("p")
    assert item is not None
    if not context.sizes.n:
        raise Fault("p alone needs its test or the number of participants: p = .03, n = 40")
    fields: Fields = {
        "family": "p",
        **_number(item),
        "n": context.sizes.n if not context.sizes.each else context.sizes.groups(2),
        "n_origin": context.sizes.origin,
        "design": context.design,
        "design_origin": context.design_origin,
        "notes": (),
    }
    number = item.number
    if number is not None and number.value == 0 and number.relation == "=":
        half = 0.5 * 10.0 ** -(number.decimals or 3)
        fields |= {"value": half, "relation": "<", "notes": (f"p printed as 0: below {half:g}",)}
    return fields


_BY_PRIMARY: dict[str, Callable[[Context], Fields]] = {
    "t": _t,
    "F": _f,
    "r": _r,
    "z": _z,
    "chi": _chi,
    "wald": _wald,
    "rank": _rank,
    "odds": _odds,
    "ratio": _ratio,
    "slope": _slope,
    "pair": _counts,
    "estimate": _estimate,
}
_BY_FOLLOWER = (("mean", _means), ("smd", _smd), ("eta", _eta), ("p", _p))


# --- parts they share ----------------------------------------------------------------------------

_RECORDED_AS = {"chi": "chi2", "bayes": "BF", "se": "SE", "padjusted": "adjusted-p"}


def effect_name(item: Item) -> str:
    """One spelling for the symbol of an effect size or further statistic."""
    symbol = item.name.lower().replace(" ", "").replace("_", "")
    if item.kind == "smd":
        return _mean_difference_name(symbol)
    if item.kind == "eta":
        return _variance_share_name(item.name)
    if item.kind == "r2":
        return "R2-change" if symbol[0] in "δd" or "change" in symbol else "R2"
    if item.kind == "phi":
        return "V" if "v" in symbol else "w" if symbol == "w" else "phi"
    if item.kind == "f2":
        return "f2" if "2" in symbol else "f"
    if item.kind == "slope":
        return "beta" if symbol.startswith(("β", "beta")) else "b"
    return _RECORDED_AS.get(item.kind, item.name)


def _mean_difference_name(symbol: str) -> str:
    bare = symbol.removeprefix("cohen").removeprefix("hedges").removeprefix("glass")
    bare = bare.removeprefix("'").removeprefix("s")
    return {"dz": "dz", "dav": "dav", "drm": "drm", "δ": "Δ"}.get(bare, bare[:1])


def _variance_share_name(name: str) -> str:
    stem = next(
        (
            full
            for full, marks in (("omega2", "ωo"), ("epsilon2", "ε"))
            if name.lstrip("pPartil- ")[:1] in marks
        ),
        "eta2",
    )
    if "psilon" in name:
        stem = "epsilon2"
    if "G" in name or "eneral" in name:
        return f"generalized-{stem}"
    rest = name.replace("epsilon", "").replace("Epsilon", "")
    return f"partial-{stem}" if "p" in rest or "artial" in rest else stem


def also(group: Group, fields: Fields) -> tuple[tuple[str, Printed], ...]:
    """Numbers printed for the same test beside the one that names the family."""
    used = fields.get("value")
    found: list[tuple[str, Printed]] = []
    for item in group.items:
        if item.number is None or item.kind in ("p", "mean", "sd"):
            continue
        if item.number.value == used and item is _source(group, fields):
            continue
        if item.kind in ("se", "variance") and fields["family"] in ("coefficient", "estimate"):
            continue
        found.append((effect_name(item), item.number))
    return tuple(found)


def _source(group: Group, fields: Fields) -> Item | None:
    kinds = {
        "t": "t", "f": "F", "r": "r", "z": "z", "smd": "smd", "odds-ratio": "odds",
        "coefficient": "slope", "estimate": "estimate",
    }  # fmt: skip
    family = fields["family"]
    if family == "chi2":
        return group.first("chi", "wald")
    if family == "eta2":
        return group.first("eta", "r2")
    return group.first(kinds[family]) if family in kinds else None


def _number(item: Item) -> Fields:
    number = item.number
    assert number is not None
    return {"value": number.value, "relation": number.relation, "decimals": number.decimals}


def _df_beside(group: Group) -> tuple[float, ...]:
    found = group.every("df")
    if len(found) == 2 and all(len(i.arguments) == 1 for i in found):
        return found[0].arguments + found[1].arguments
    return found[0].arguments if found else ()


def _design_or(context: Context, implied: str | None) -> tuple[str | None, Origin]:
    if context.design is not None and (context.design_origin == "tag" or implied is None):
        return context.design, context.design_origin
    return (implied, "printed") if implied else (None, "assumed")


def _complete_means(group: Group) -> tuple[GroupSummary, ...]:
    means, sds = group.every("mean"), group.every("sd")
    sizes = describing_sizes(group)
    if len(means) != 2 or len(sds) != 2 or len(sizes) != 2:
        return ()
    summaries = []
    for mean, sd, n in zip(means, sds, sizes, strict=True):
        if mean.number is None or sd.number is None:
            return ()
        if sd.number.value <= 0:
            raise Fault("a standard deviation is above 0", sd.start, sd.end)
        summaries.append(GroupSummary(mean.number.value, sd.number.value, n))
    return tuple(summaries)


def describing_sizes(group: Group) -> tuple[int, ...]:
    """Sizes of the groups whose means are printed, one each."""
    sizes = [i for i in group.every("size") if "capital" not in i.flags]
    if len(sizes) == 1:
        only = sizes[0]
        if len(only.sizes) == 2:
            return only.sizes
        return only.sizes * 2 if "each" in only.flags else ()
    return tuple(n for i in sizes for n in i.sizes)
