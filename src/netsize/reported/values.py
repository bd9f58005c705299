"""Values with their relation, and what must not stand around them."""

from __future__ import annotations

import re

from netsize.reported import patterns
from netsize.reported.faults import Fault
from netsize.reported.numbers import decimal
from netsize.reported.records import Interval, Printed, Relation

__all__ = ["bare_interval", "printed_number"]

_BROKEN = re.compile(r"[ ]?[0-9]?[.,][ \n]{1,12}[0-9]")
_P_KINDS = frozenset(("p", "padjusted"))


def printed_number(
    text: str, at: int, relation: str, kind: str, start: int
) -> tuple[Printed | None, int]:
    """The number at `at` with its relation; None where no number stands there.

    Raises Fault for a number that is part of something else (a range, a date, a quantity with its
    unit, an equation), not finite, or too large.
    """
    found = patterns.NUMBER_HERE.match(text, at)
    if found is None:
        odd = patterns.NOT_FINITE.match(text, at)
        if odd:
            raise Fault(f'"{odd[0].strip()}" is not a number that can be used', start, odd.end())
        broken = _BROKEN.match(text, at)
        if broken:
            raise Fault("the number is broken in two", start, broken.end())
        return None, at
    end = found.end()
    try:
        value, decimals = decimal(found[1], _around(text, start, end) if "," in found[1] else "")
    except Fault as fault:
        raise Fault(fault.reason, found.start(1), end) from None
    for _ in range(3 if text[end : end + 2].strip() else 0):
        mark = patterns.MARKS.match(text, end)
        if mark is None or mark.end() == end:
            break
        if "*" in mark[0] and re.match(r"[ ]?[0-9(]", text[mark.end() : mark.end() + 2]):
            break  # a product, which the check below refuses
        end = mark.end()
    _refuse_trailing(text, end, kind, start, found[1])
    return Printed(value, _relation(relation, start, end), decimals), end


def _around(text: str, start: int, end: int) -> str:
    """The line about [start, end), at most 200 characters to either side."""
    line_start = text.rfind("\n", max(start - 200, 0), start) + 1 or max(start - 200, 0)
    line_end = text.find("\n", end, end + 200)
    return text[line_start : line_end if line_end >= 0 else end + 200]


def _refuse_trailing(text: str, end: int, kind: str, start: int, token: str) -> None:
    follows = patterns.TRAILING.match(text, end)
    if follows is None:
        if kind not in _P_KINDS and patterns.CHAINED.match(text, end):
            raise Fault("this reads as an inequality or equation, not one result", start, end + 1)
        return
    what = follows.lastgroup or ""
    if what == "arithmetic" and kind in _P_KINDS:
        return
    if what in ("unit", "percent") and kind in ("mean", "sd", "se"):
        return  # "M = 24.2 years": means have units, test statistics have none
    if what == "list" and kind == "size":
        return
    if what in ("broken", "letter", "spaced") and "." in token:
        return  # a sentence ends, and the next one starts with a number
    reason = {
        "digits": "the number has too many digits",
        "broken": "the number is broken in two",
        "letter": "letters are stuck to the number",
        "spaced": "another number follows; a decimal point may be lost",
        "stuck": "letters or signs are stuck to the number",
        "more": "the number goes on as a date, version, ratio or list",
        "percent": "a percentage stands where the statistic should be",
        "range": "this is a range or carries ±; give one value",
        "list": "several numbers stand after one symbol; give each its own",
        "unit": "the number has a unit, so it is a quantity and not a statistic",
        "arithmetic": "this reads as an equation, not as a result",
    }[what]
    quantity = what == "unit" and kind != "p" and "(" not in text[start:end]
    raise Fault(reason, start, follows.end(), harmless=quantity)


def _relation(signs: str, start: int, end: int) -> Relation:
    less, more = "<" in signs, ">" in signs
    if less and more:
        raise Fault(f'"{signs}" is not one relation; write =, < or >', start, end)
    return "<" if less else ">" if more else "="


def bare_interval(kind: str, text: str, end: int) -> tuple[Interval | None, int]:
    if kind not in ("odds", "ratio", "smd", "r"):
        return None, end
    found = patterns.BARE_INTERVAL.match(text, end)
    if found is None or (found[3] and kind in ("smd", "r")):
        return None, end
    low, high = (decimal(g)[0] for g in found.groups() if g)
    return (Interval(low, high), found.end()) if low < high else (None, end)
