"""Third stage: which items belong to one test.

"t(38) = 2.31, p = .026, d = 0.73" is one result, not three. A test symbol opens a group; what
stands beside it in the same sentence (p, effect size, group sizes, interval, means) joins it,
before or after, unless the group already holds one of its kind. A settings bracket belongs to the
statistic before it, or to the whole line where it stands before the first.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field
from typing import Any

from netsize.reported import patterns
from netsize.reported.items import NOT_SIGNIFICANT, PRIMARY, Item
from netsize.reported.tags import merged

__all__ = ["Group", "Line", "group_items"]

_LONGEST_GAP = 100
_PLAIN_GAPS = frozenset((", ", "; ", " ", ",", " ("))
_STOP_BEFORE = re.compile(r"(?<!vs)[.!?][)\]\"']?[ \t]{1,12}\Z")
# "t(38) = 2.31; [paired] t(19) = 2.1"
_PARTED = re.compile(r";|[.][ ]")
_OPENS_NEXT = re.compile(r"[ ]?(?:[a-z]{1,12}[ ]){0,2}(?:[tFrz]|χ)[ ]?[(0-9=]")
_MOST_ITEMS = 40  # no test comes with more numbers; keeps the time linear
# kinds of which a group may hold several
_MANY = frozenset(("size", "mean", "sd", "se", "ci", "df"))
_VALUED = frozenset(
    ("t", "F", "r", "z", "chi", "odds", "ratio", "slope", "smd", "eta", "r2", "phi", "f2", "mean")
)


@dataclass(slots=True)
class Group:
    """The items of one test, its primary item (None where only effect sizes or p stand there)."""

    start: int
    end: int
    primary: Item | None = None
    items: list[Item] = field(default_factory=list)
    settings: dict[str, Any] = field(default_factory=dict)
    faults: list[Item] = field(default_factory=list)

    def first(self, *kinds: str) -> Item | None:
        """The first item of one of these kinds."""
        return next((i for i in self.items if i.kind in kinds), None)

    def p(self) -> Item | None:
        """The p printed for the test: a number where one stands beside "n.s."."""
        found = self.first("p")
        if found is None or found.name != NOT_SIGNIFICANT:
            return found
        return next((i for i in self.every("p") if i.name != NOT_SIGNIFICANT), found)

    def every(self, kind: str) -> list[Item]:
        """All items of this kind, in order."""
        return [i for i in self.items if i.kind == kind]

    def add(self, item: Item) -> None:
        """Take an item in; an interval goes to the number before it."""
        if item.interval is not None:
            owner = next((i for i in reversed(self.items) if i.kind in _VALUED), None)
            if owner is not None and owner.interval is None:
                owner.interval = item.interval
        self.items.append(item)
        self.start = min(self.start, item.start)
        self.end = max(self.end, item.end)
        if item.fault:
            self.faults.append(item)


@dataclass(slots=True)
class Line:
    """One logical line: its groups, and the settings that stand before them all."""

    start: int
    end: int
    groups: list[Group] = field(default_factory=list)
    settings: dict[str, Any] = field(default_factory=dict)
    faults: list[Item] = field(default_factory=list)
    tags: list[Item] = field(default_factory=list)


def group_items(items: Iterable[Item], text: str) -> Iterator[Line]:
    """Logical lines (hard line breaks part them) that hold at least one item."""
    line: Line | None = None
    for item in items:
        if line is None or item.start >= line.end:
            if line is not None:
                yield line
            start = text.rfind("\n", 0, item.start) + 1
            end = text.find("\n", item.start)
            line = Line(start, len(text) if end < 0 else end)
        _place(item, line, text)
    if line is not None:
        yield line


def _place(item: Item, line: Line, text: str) -> None:
    group = line.groups[-1] if line.groups else None
    if item.kind == "tag":
        _place_tag(item, line, group, text)
        return
    beside = group is not None and (group.primary or group.first("plural"))
    if item.kind == "plural" and item.name[0] == "p" and beside:
        return  # "ps < .05" beside the tests that it sums up; "Fs < 1" are tests of their own
    if group is None or not _joins(group, item, text):
        if "words" in item.flags:
            return  # "was not significant" away from a statistic says nothing that can be used
        group = Group(item.start, item.end)
        line.groups.append(group)
    group.add(item)
    if item.kind in PRIMARY or item.kind == "other":
        group.primary = _leading(group.primary, item)


def _place_tag(item: Item, line: Line, group: Group | None, text: str) -> None:
    line.tags.append(item)
    if group is not None and item.fault is None:
        parted = _PARTED.search(text, group.end, min(item.start, group.end + _LONGEST_GAP))
        if parted and _OPENS_NEXT.match(text, item.end):
            item.fault = "this setting stands between two statistics; put it right after its own"
            item.marked = (item.start, item.end)
    if group is not None and any(i.kind != "size" for i in group.items):
        group.settings = merged(group.settings, item.settings or {})
        if item.fault:
            group.faults.append(item)
    else:
        line.settings = merged(line.settings, item.settings or {})
        if item.fault:
            line.faults.append(item)


def _joins(group: Group, item: Item, text: str) -> bool:
    if item.start - group.end > _LONGEST_GAP:
        return False
    gap = text[group.end : item.start]
    if item.kind in ("other", "plural") or len(group.items) >= _MOST_ITEMS:
        return False
    if gap not in _PLAIN_GAPS and _ends_sentence(gap):
        return False
    if item.kind in PRIMARY:
        if ":" in gap and patterns.LABEL_WITHIN_LINE.search(gap):
            return False
        if group.primary is None:
            return not _STOP_BEFORE.search(gap) or all(i.kind == "size" for i in group.items)
        return _same_test(group.primary, item, gap)
    if item.kind == "mean":
        return sum(i.kind == "mean" for i in group.items) < 2 or group.primary is None
    if item.kind == "size" and not _describes(group, gap):
        return False
    if item.kind in _MANY:
        return True
    if item.name == NOT_SIGNIFICANT and not _only_connectors(gap):
        return False
    if group.primary is None and all(i.kind == "size" for i in group.items):
        return _only_connectors(gap, patterns.SAMPLE_WORDS)  # "n = 40, p = .03", not "N = 80 ..."
    same = [i for i in group.items if i.kind == item.kind and i.name != NOT_SIGNIFICANT]
    several = item.kind in ("smd", "eta", "r2")
    return not same or (several and all(i.name != item.name for i in same))


def _describes(group: Group, gap: str) -> bool:
    """Whether a number of participants speaks of this group's test, not of the next one's."""
    if group.primary is None and any(i.kind in ("mean", "size") for i in group.items):
        return True
    return _only_connectors(gap, patterns.SAMPLE_WORDS)


def _ends_sentence(gap: str) -> bool:
    return any(
        patterns.ABBREVIATION.search(gap, 0, found.start()) is None
        for found in patterns.SENTENCE_END.finditer(gap)
    )


def _same_test(before: Item, item: Item, gap: str) -> bool:
    """Whether a second test symbol describes the test that the first one opened."""
    if before.kind == "rank" or _rank_sum(before):
        return item.kind == "z" and _only_connectors(gap, patterns.SAMPLE_WORDS)
    if before.kind == "slope":
        beta = item.kind == "slope" and item.name[0] == "β" != before.name[0]
        return beta or item.kind in ("t", "z", "wald", "odds")
    if before.kind == "odds":
        return item.kind in ("z", "wald", "chi") and not item.arguments[1:]
    if not _only_connectors(gap):
        return False
    if before.kind == "pair":
        return item.kind in ("chi", "odds", "ratio", "z")
    if before.kind == "chi" and before.arguments == (1.0,):
        return item.kind in ("odds", "ratio")
    if "and" in gap:
        return False
    if before.kind == "r" and not before.arguments:
        return item.kind == "t" and _same_size(item, before)
    if item.kind == "r":
        return not item.arguments and not item.sizes and _same_size(before, item)
    return False


def _same_size(test: Item, correlation: Item) -> bool:
    """Whether r is the one that t or F implies, r² = t²/(t² + df), as far as can be told."""
    if test.number is None or correlation.number is None or not test.arguments:
        return True
    square = abs(test.number.value)
    if test.kind == "t":
        square *= square
    elif test.kind != "F" or test.arguments[0] != 1:
        return test.kind != "F"
    implied = (square / (square + test.arguments[-1])) ** 0.5
    return bool(abs(implied - abs(correlation.number.value)) < 0.02)


def _leading(before: Item | None, item: Item) -> Item:
    """The item that says which family a group of two test symbols is."""
    if before is None or before.kind == "rank" or _rank_sum(before):
        return item
    return before


def _rank_sum(item: Item) -> bool:
    """T without df, the signed-rank statistic; t = 2.31, df = 38 has a small letter."""
    return item.kind == "t" and item.name == "T" and not item.arguments


def _only_connectors(gap: str, more: frozenset[str] = frozenset()) -> bool:
    words = (w.lower() for w in patterns.WORD.findall(gap))
    return all(w in patterns.CONNECTORS or w in more for w in words)
