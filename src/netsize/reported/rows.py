"""Rows of a table become the same items that the scanner finds in running text."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import Any

from netsize.reported import patterns
from netsize.reported.arguments import argument_numbers
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.items import Item
from netsize.reported.numbers import decimal, whole
from netsize.reported.records import Counts, Interval, Printed
from netsize.reported.tables import Cell
from netsize.reported.tags import merged, parse_settings
from netsize.reported.values import printed_number

__all__ = ["Row", "row_group"]

Cells = dict[str, Cell]

_EMPTY = frozenset(("", "-", "--", ".", "na", "n/a", "nan", "none", "null", "?"))
_TESTS = {"t": "t", "F": "F", "z": "z", "chi2": "chi", "r": "r"}
_EFFECTS = {
    "d": "smd", "g": "smd", "partial eta2": "eta", "eta2": "eta", "omega2": "eta", "r": "r",
}  # fmt: skip
# how an estimate's scale may be written, and the metric it stands for
_METRICS = {
    "mean-difference": "mean-difference|smd|d|g|standardized mean difference|hedges g|cohen's d",
    "difference-score": "difference-score|dz|d z|standardized mean of differences",
    "fisher-z": "fisher-z|fisher's z|fisher z|zr|z r|z",
    "cohen-f": "cohen-f|f|cohen's f",
    "log-ratio": "log-ratio|log odds ratio|log or|ln or|log risk ratio|log rr|ln rr|"
    "log hazard ratio|log hr|ln hr|lnor|lnrr|logor|logrr|loghr|lnhr",
    "odds-ratio": "odds-ratio|odds ratio|or",
}
_METRIC_OF = {
    re.sub(r"[\s_-]+", " ", spelling): metric
    for metric, spellings in _METRICS.items()
    for spelling in spellings.split("|")
}


@dataclass(slots=True)
class Row:
    """One row: the items of its test, its settings, and the label it gives."""

    group: Group
    settings: dict[str, Any] = field(default_factory=dict)
    label: Cell | None = None


def row_group(cells: Cells) -> Row:
    """Items and settings from the filled cells of a row (by column name).

    A `result` cell is running text and is read by the scanner, not here. Raises Fault.
    """
    filled = {name: c for name, c in cells.items() if c.text.lower() not in _EMPTY}
    first = min((c.start for c in cells.values()), default=0)
    row = Row(Group(first, first), _settings(filled), filled.get("label"))
    for item in _items(filled):
        row.group.add(item)
        if item.kind in ("t", "F", "r", "z", "chi", "odds", "pair", "slope", "estimate"):
            row.group.primary = row.group.primary or item
    row.group.start = first
    row.group.end = max((c.end for c in cells.values()), default=first)
    return row


def _items(cells: Cells) -> list[Item]:
    items = [*_tests(cells), *_estimates(cells), *_descriptions(cells), *_sizes(cells)]
    if "p" in cells:
        items.append(_p(cells["p"]))
    return items


# --- statistics ----------------------------------------------------------------------------------


def _tests(cells: Cells) -> list[Item]:
    named = [name for name in _TESTS if name in cells]
    tests = [name for name in named if name != "r"] or named
    if len(tests) > 1:
        second = cells[tests[1]]
        raise Fault(f"fill {tests[0]} or {tests[1]}, a row for each test", second.start, second.end)
    items = [_value(cells[name], _TESTS[name], name) for name in tests]
    for item in items:
        item.arguments = _df(cells, item.kind)
    return items


def _df(cells: Cells, kind: str) -> tuple[float, ...]:
    if "df1" in cells or "df2" in cells:
        named = [cells[name] for name in ("df1", "df2") if name in cells]
        numbers = [_number(cell) for cell in named]
        if kind == "F" and len(numbers) == 2:
            return _above_zero(tuple(numbers), named[0])
        if kind != "F" and len(numbers) == 1:
            return _above_zero(tuple(numbers), named[0])
        raise Fault("F takes df1 and df2, every other test one df", named[0].start, named[-1].end)
    if "df" not in cells:
        return ()
    cell = cells["df"]
    try:
        numbers_found, _, _ = argument_numbers(cell.text, 0)
    except Fault:
        raise Fault("df is a number, or two for F, as in 1, 56", cell.start, cell.end) from None
    if len(numbers_found) != (2 if kind == "F" else 1):
        needed = "two numbers, as in 1, 56" if kind == "F" else "one number"
        raise Fault(f"df of this test takes {needed}", cell.start, cell.end)
    return _above_zero(numbers_found, cell)


def _above_zero(numbers: tuple[float, ...], cell: Cell) -> tuple[float, ...]:
    if any(n <= 0 for n in numbers):
        raise Fault("degrees of freedom must be above 0", cell.start, cell.end)
    return numbers


def _estimates(cells: Cells) -> list[Item]:
    items: list[Item] = []
    test = any(name in cells for name in _TESTS if name != "r")
    for name, kind in _EFFECTS.items():
        if name in cells and (name != "r" or test):
            items.append(
                _value(cells[name], kind, name.replace(" ", "-") if kind == "eta" else name)
            )
    if "odds ratio" in cells:
        items.append(_value(cells["odds ratio"], "odds", "OR"))
    if "b" in cells:
        slope = _value(cells["b"], "slope", "b")
        slope.arguments = _df(cells, "t")
        items.append(slope)
    if "effect" in cells:
        items.append(_ready_made(cells))
    if "se" in cells:
        items.append(_value(cells["se"], "se", "SE"))
    if "variance" in cells:
        items.append(_value(cells["variance"], "variance", "variance"))
    interval = _interval(cells)
    owner = next((i for i in items if i.kind in ("estimate", "odds", "smd", "r")), None)
    if interval is not None and owner is not None:
        owner.interval = interval
    return items


def _ready_made(cells: Cells) -> Item:
    cell = cells["effect"]
    named = cells.get("metric")
    if named is None:
        raise Fault(
            f'an effect needs its scale in the column "metric": {", ".join(_METRICS)}',
            cell.start,
            cell.end,
        )
    metric = _METRIC_OF.get(re.sub(r"[\s_-]+", " ", named.text.lower()))
    if metric is None:
        hint = " (a risk or hazard ratio enters as its logarithm)" if "ratio" in named.text else ""
        raise Fault(
            f'unknown metric "{named.text[:40]}"{hint}; known: {", ".join(_METRICS)}',
            named.start,
            named.end,
        )
    if metric == "odds-ratio":
        return _value(cell, "odds", "OR")
    return _value(cell, "estimate", metric)


def _interval(cells: Cells) -> Interval | None:
    if "low" not in cells and "high" not in cells:
        return None
    if "low" not in cells or "high" not in cells:
        only = cells.get("low") or cells["high"]
        raise Fault("an interval needs both low and high", only.start, only.end)
    low, high = _number(cells["low"]), _number(cells["high"])
    if low >= high:
        raise Fault("low is not below high", cells["low"].start, cells["high"].end)
    level = _number(cells["level"]) if "level" in cells else 95.0
    level = level / 100 if level > 1 else level
    if not 0.5 <= level < 1:
        cell = cells["level"]
        raise Fault("the level lies between 50 and 100", cell.start, cell.end)
    return Interval(low, high, level)


# --- groups, counts, sizes -----------------------------------------------------------------------


def _descriptions(cells: Cells) -> list[Item]:
    items: list[Item] = []
    if "events1" in cells or "events2" in cells:
        items.append(_events(cells))
    items += [
        _value(cells[kind + number], kind, kind)
        for number in "12"
        for kind in ("mean", "sd")
        if kind + number in cells
    ]
    return items


def _events(cells: Cells) -> Item:
    names = ("events1", "n1", "events2", "n2")
    missing = [name for name in names if name not in cells]
    there = [cells[name] for name in names if name in cells]
    if missing:
        raise Fault(f"counts need {', '.join(missing)} as well", there[0].start, there[0].end)
    a, n, c, m = (_count(cells[name]) for name in names)
    if a > n or c > m:
        raise Fault("more events than participants", there[0].start, there[-1].end)
    if n == 0 or m == 0:
        raise Fault("a number of participants cannot be 0", there[0].start, there[-1].end)
    counts = (Counts(a, n), Counts(c, m))
    return Item("pair", "counts", there[0].start, there[-1].end, counts=counts)


def _sizes(cells: Cells) -> list[Item]:
    items: list[Item] = []
    for name, flags in (("n1", ()), ("n2", ()), ("n per group", ("each",)), ("n", ("capital",))):
        cell = cells.get(name)
        if cell is None:
            continue
        text = cell.text.removesuffix(".0")  # what spreadsheets make of whole numbers
        try:
            size = whole(text)
        except Fault as fault:
            raise Fault(fault.reason, cell.start, cell.end) from None
        items.append(
            Item("size", name, cell.start, cell.end, sizes=(size,), flags=frozenset(flags))
        )
    return items


def _p(cell: Cell) -> Item:
    if re.match(r"n\.? ?s\.?\Z", cell.text, re.IGNORECASE):
        return Item("p", "n.s.", cell.start, cell.end, Printed(0.05, ">", 2))
    return _value(cell, "p", "p")


# --- settings ------------------------------------------------------------------------------------


def _settings(cells: Cells) -> dict[str, Any]:
    layers: list[dict[str, Any]] = []
    layers += [
        parse_settings(cells[name].text, cells[name].start)
        for name in ("design", "direction")
        if name in cells
    ]
    if "settings" in cells:
        cell = cells["settings"]
        bracketed = re.sub(r"\][ ,;]*\[", ";", cell.text).strip("[] ")
        layers.append(parse_settings(bracketed, cell.start))
    if "tails" in cells:
        cell = cells["tails"]
        number = {"1": 1, "one": 1, "2": 2, "two": 2, "1.0": 1, "2.0": 2}.get(
            re.sub(r"[ -]?(?:tailed|sided|tails?)", "", cell.text.lower())
        )
        if number is None:
            raise Fault("tails is 1 or 2", cell.start, cell.end)
        layers.append({"tails": number})
    for name, key, low in (("within-pair r", "correlation", -1), ("cut", "cut", 0)):
        if name in cells:
            value = _number(cells[name])
            if not low < value < 1:
                cell = cells[name]
                raise Fault(f"{name} lies between {low} and 1", cell.start, cell.end)
            layers.append({key: value})
    if "sample" in cells:
        layers.append({"sample": cells["sample"].text})
    if "leave out" in cells:
        layers.append(_leave_out(cells["leave out"].text))
    return merged(*layers)


def _leave_out(text: str) -> dict[str, Any]:
    word = text.lower()
    if word in ("no", "0", "false", "0.0"):
        return {}
    plain = word in ("yes", "x", "1", "true", "1.0")
    return {"left_out": "marked in the table" if plain else text}


# --- cells with a number -------------------------------------------------------------------------


def _value(cell: Cell, kind: str, name: str) -> Item:
    relation = patterns.RELATION.match(cell.text)
    signs = relation[1] if relation and relation[1] else "="
    at = relation.end() if relation else 0
    try:
        number, end = printed_number(cell.text, at, signs, kind, 0)
    except Fault as fault:
        raise Fault(fault.reason, cell.start, cell.end) from None
    if number is None or cell.text[end:].strip():
        raise Fault(f'"{cell.text[:40]}" is not a number', cell.start, cell.end)
    return Item(kind, name, cell.start, cell.end, number)


def _number(cell: Cell) -> float:
    try:
        return decimal(re.sub(r"[ %]", "", cell.text))[0]
    except (Fault, ValueError):
        raise Fault(f'"{cell.text[:40]}" is not a number', cell.start, cell.end) from None


def _count(cell: Cell) -> int:
    text = cell.text.removesuffix(".0")
    if not text.isdecimal() or len(text) > 7:
        raise Fault("a number of people is a whole number", cell.start, cell.end)
    return int(text)
