"""One spelling for each symbol printed beside a test, and the list of them that a result keeps."""

from __future__ import annotations

from netsize.reported.family_parts import Fields
from netsize.reported.grouping import Group
from netsize.reported.items import Item
from netsize.reported.records import Printed

__all__ = ["also", "effect_name"]

_RECORDED_AS = {"chi": "chi2", "bayes": "BF", "se": "SE", "padjusted": "adjusted-p"}


def effect_name(item: Item) -> str:
    """One spelling for the symbol of an effect size or further statistic."""
    symbol = item.name.lower().replace(" ", "").replace("_", "")
    if item.kind == "smd":
        return _mean_difference_name(symbol)
    if item.kind == "eta":
        return _variance_share_name(item.name)
    if item.kind == "r2":
        if symbol[0] == "a":
            return "adjusted-R2"
        return "R2-change" if symbol[0] in "δd" or "change" in symbol else "R2"
    if item.kind == "phi":
        return "V" if "v" in symbol else "w" if symbol == "w" else "phi"
    if item.kind == "f2":
        return "f2" if "2" in symbol else "f"
    if item.kind == "slope":
        return "beta" if symbol.startswith(("β", "beta")) else "b"
    if item.kind in ("odds", "ratio"):
        return _ratio_name(symbol)
    return _RECORDED_AS.get(item.kind, item.name)


def _ratio_name(symbol: str) -> str:
    """OR, RR, HR or IRR, with "a" before it where it is adjusted."""
    bare = symbol.removeprefix("adjusted").removeprefix("adj.").removeprefix("a")
    kinds = {"o": "OR", "i": "IRR", "h": "HR", "r": "RR"}
    return f"{'a' if symbol[0] == 'a' else ''}{kinds[bare[0]]}"


def _mean_difference_name(symbol: str) -> str:
    bare = symbol.removeprefix("cohen").removeprefix("hedges").removeprefix("glass")
    bare = bare.removeprefix("'").removeprefix("s").partition("(")[0].partition("[")[0]
    return {
        "md": "d",
        "tandardizedmeandifference": "d",
        "tandardisedmeandifference": "d",
        "dz": "dz",
        "dav": "dav",
        "drm": "drm",
        "δ": "Δ",
    }.get(bare, bare[:1])


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
