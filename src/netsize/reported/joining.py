"""Third stage, second part: neighbouring groups of a line that report one test become one.

"Treated scored higher (M = 5.2, SD = 1.1, n = 20 vs M = 4.3, SD = 1.3, n = 20). The difference was
significant, t(38) = 2.36" is one test; two results would count its evidence twice. What is the same
test is told by arithmetic: degrees of freedom that the group sizes give, a ratio or chi-square that
the counts give, F = t² at the same df.
"""

from __future__ import annotations

import math
import re
from itertools import zip_longest

from netsize.reported import patterns
from netsize.reported.effect_names import effect_name
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.items import Item
from netsize.reported.records import Printed
from netsize.reported.summaries import complete_means, counts_chi_squares, counts_ratio, means_t
from netsize.reported.tags import merged

__all__ = ["joined"]

_PARTS = re.compile(r"[.;:]|\band\b")
_COMPARED = frozenset(("pair", "odds", "ratio", "chi", "wald", "slope"))
NOTE = "means, counts or a second statistic beside it describe the same test: read as one result"


def joined(groups: list[Group], text: str) -> list[Group]:
    """`groups` of one line with those of one test put together, in order of place."""
    found: list[Group] = []
    for group, after in zip_longest(groups, groups[1:]):
        last = found[-1] if found else None
        if last and _one_test(last, group, text) and not _belongs_to_next(last, group, after):
            _take_in(last, group)
        else:
            found.append(group)
    for group in found:
        group.primary = _leading(group)
    return found


def _leading(group: Group) -> Item | None:
    """Which statistic of one comparison says most: adjusted ratio, counts, ratio, chi-square."""
    if group.primary is None or group.primary.kind not in _COMPARED:
        return group.primary
    ratios = [i for i in group.items if i.kind in ("odds", "ratio") and i.interval]
    adjusted = [i for i in ratios if effect_name(i) not in ("OR", "RR")]
    return next(iter((*adjusted, *group.every("pair"), *ratios)), group.primary)


def _one_test(a: Group, b: Group, text: str) -> bool:
    if a.faults or b.faults or (a.settings.keys() | b.settings.keys()) & {"sample", "left_out"}:
        return False
    if patterns.LABEL_WITHIN_LINE.search(text, a.end, b.start):
        return _means_and_test(a, b, agreeing=True)
    if _counts_with_ratio(a, b) and not _PARTS.search(text, a.end, min(b.start, a.end + 60)):
        return b.start - a.end < 60
    return (
        _equal_tests(a, b)
        or _means_and_test(a, b)
        or _means_and_test(b, a)
        or _counts_and_summary(a, b)
        or _counts_and_summary(b, a)
    )


def _belongs_to_next(a: Group, b: Group, after: Group | None) -> bool:
    """Means between two tests describe the later one, unless only the earlier fits."""
    if b.primary is not None or a.primary is None:
        return False
    return after is not None and _means_and_test(b, after)


def _take_in(group: Group, other: Group) -> None:
    if group.primary is None or (other.primary is not None and other.primary.kind == "slope"):
        group.primary = other.primary  # t and F of a coefficient are its own
    group.items += other.items
    group.start, group.end = min(group.start, other.start), max(group.end, other.end)
    group.settings = merged(group.settings, other.settings)
    if group.primary is not None:
        group.primary.notes = (*group.primary.notes, NOTE)


def _means_and_test(a: Group, b: Group, *, agreeing: bool = False) -> bool:
    """Means of two groups without a test, and a t or F(1, ·) with the df that their sizes give;
    with `agreeing` or a fractional df, also with the value that they give.
    """
    test = b.primary
    if a.primary is not None or test is None or test.kind not in ("t", "F") or test.number is None:
        return False
    if b.first("mean") or not test.arguments or (test.kind == "F" and test.arguments[0] != 1):
        return False
    try:
        means = complete_means(a)
    except Fault:
        return False
    if not means:
        return False
    df = test.arguments[-1]
    first, second = means
    if df == int(df) and not agreeing:
        return df == first.n + second.n - 2 or (first.n == second.n and df == first.n - 1)
    value = abs(test.number.value) if test.kind == "t" else math.sqrt(max(test.number.value, 0.0))
    return min(abs(value - t) for t in means_t(first, second)) < 0.1 + 0.1 * value


def _counts_with_ratio(a: Group, b: Group) -> bool:
    """Counts and then a ratio: in one breath they are of one comparison, adjusted or not."""
    if a.primary is None or b.primary is None:
        return False
    return a.primary.kind == "pair" and b.primary.kind in ("odds", "ratio")


def _counts_and_summary(a: Group, b: Group) -> bool:
    """Counts of two groups, and the ratio or chi-square that they give."""
    pair, summary = a.primary, b.primary
    if pair is None or summary is None or pair.kind != "pair" or summary.number is None:
        return False
    first, second = pair.counts
    value = summary.number.value
    if summary.kind == "chi":
        total = first.n + second.n
        if summary.arguments != (1.0,):
            return False
        sizes = (*summary.sizes, *(n for i in b.every("size") for n in i.sizes))
        near = any(abs(value - x) < 0.06 + 0.03 * x for x in counts_chi_squares(first, second))
        return near or total in sizes
    if summary.kind not in ("odds", "ratio"):
        return False
    expected = counts_ratio(effect_name(summary), first, second)
    if expected is None or value <= 0:
        return False
    return abs(abs(math.log(value)) - abs(math.log(expected))) < 0.06


def _equal_tests(a: Group, b: Group) -> bool:
    """Two statements of one test: the same df, and t² = F = r² df / (1 - r²) within rounding."""
    if a.primary is None or b.primary is None or a.primary.kind == b.primary.kind:
        return False
    one, two = _squared_t(a), _squared_t(b)
    if one is None or two is None or one[0] != two[0]:
        return False
    return one[1] <= two[2] and two[1] <= one[2]


def _squared_t(group: Group) -> tuple[float, float, float] | None:
    """(df, low, high) of the squared t that the printed value allows."""
    item = group.first("t") if group.primary and group.primary.kind == "slope" else group.primary
    number = item.number if item else None
    if item is None or number is None or number.relation != "=" or not number.decimals:
        return None
    if not item.arguments:
        return None
    low, high = _ends(number)
    df = item.arguments[-1]
    if item.kind == "t":
        return df, low * low, high * high
    if item.kind == "F" and item.arguments[0] == 1:
        return df, low, high
    if item.kind == "r" and high < 1:
        return df, low * low * df / (1 - low * low), high * high * df / (1 - high * high)
    return None


def _ends(number: Printed) -> tuple[float, float]:
    half = 0.5 * 10.0 ** -(number.decimals or 0)
    return max(abs(number.value) - half, 0.0), abs(number.value) + half
