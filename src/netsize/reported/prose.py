"""Statistics in running text, or one a line: grouped, labelled, each with its settings."""

from __future__ import annotations

import re
from collections import Counter
from typing import Any

from netsize.reported import patterns
from netsize.reported.assemble import fields_of
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group, Line, group_items
from netsize.reported.items import Item
from netsize.reported.joining import joined
from netsize.reported.labels import citation_beside, label_before
from netsize.reported.records import ReportedResult, Unread
from netsize.reported.scanner import scan
from netsize.reported.source import Source
from netsize.reported.tags import merged

__all__ = ["APART", "SHARED", "marked_place", "read_prose"]

_WRAPPED = 60  # a line of this length goes on in the next one
SHARED = "shares a sample with the other results of its label; [sample NAME] parts them"
APART = "taken as a sample of its own beside others in the text; [sample NAME] joins them"


def read_prose(source: Source) -> tuple[list[ReportedResult], list[Unread]]:
    """Results and unread places of everything outside tables."""
    results: list[ReportedResult] = []
    unread: list[Unread] = []
    floor = 0
    for line in group_items(scan(source.text), source.text):
        built: list[tuple[Group, dict[str, Any]]] = []
        lost: list[Unread] = []
        against = source.against_words and patterns.AGAINST_WORDS.search(
            source.text, line.start, line.end
        )
        floor = _sentence_floor(source.text, line.start, floor)
        groups = joined(line.groups, source.text)
        for group in groups:
            group.faults[:0] = line.faults
            before, floor = floor, group.end
            try:
                fields = fields_of(
                    group,
                    tags=merged(line.settings, group.settings),
                    defaults=source.defaults,
                    text=source.text,
                    begin=before,
                    against_words=bool(against),
                )
            except Fault as fault:
                # "5.2 ± 1.1 (n = 20)" beside a test only describes
                described = group.first("plusminus") and any(g.primary for g in groups)
                harmless = fault.harmless or bool(described and group.primary is None)
                place = marked_place(group, fault)
                lost.append(source.places.unread(*place, fault.reason, harmless=harmless))
                continue
            if fields is not None:
                built.append((group, fields))
        if line.tags and not built and not lost:
            lost += _lonely(line.tags[0], source)
        results += _named(built, line, source)
        unread += lost
    return results, unread


def _sentence_floor(text: str, start: int, floor: int) -> int:
    """How far back the words before a line's first statistic reach: over the break of wrapped text,
    never over the statistic before it.
    """
    before = text.rfind("\n", max(start - 400, 0), max(start - 1, 0)) + 1
    wrapped = start - 1 - before >= _WRAPPED and text[start - 2] not in ".:;!?"
    return max(before, min(floor, start)) if wrapped else start


def marked_place(group: Group, fault: Fault) -> tuple[int, int]:
    """The faulty part: as the fault says, else the symbol that names the test."""
    if fault.start is not None and fault.end is not None:
        return fault.start, fault.end
    item = group.primary
    return (item.start, item.end) if item is not None else (group.start, group.end)


def _lonely(tag: Item, source: Source) -> list[Unread]:
    """A setting that belongs to nothing; square brackets in plain prose are none."""
    if tag.fault and "Did you mean" not in tag.fault:
        return []
    reason = tag.fault or (
        "a setting without a statistic on its line; settings for all lines stand at the top, as in "
        "defaults: [paired]"
    )
    return [source.places.unread(*(tag.marked or (tag.start, tag.end)), reason)]


def _named(
    built: list[tuple[Group, dict[str, Any]]], line: Line, source: Source
) -> list[ReportedResult]:
    names = _labels([group for group, _ in built], line, source)
    times = Counter(names) if len(names) > 1 else {}
    results = []
    for (group, fields), name in zip(built, names, strict=True):
        sample = group.settings.get("sample") or line.settings.get("sample")
        if len(built) > 1 and sample is None:
            if name is None:
                fields["notes"] = (*fields.get("notes", ()), APART)
            elif times[name] > 1:
                fields["notes"] = (*fields.get("notes", ()), SHARED)
        results.append(
            source.result(
                group,
                fields,
                label=name,
                sample=sample,
                sample_origin="tag" if sample else "assumed",
            )
        )
    return results


def _labels(groups: list[Group], line: Line, source: Source) -> list[str | None]:
    """The label of each group: its own, else that of the line."""
    names: list[str | None] = []
    text, floor, name = source.text, line.start, None
    for group in groups:
        first = _first_statistic(group)
        if floor == line.start:
            name = _words(label_before(text[floor:first]), floor, source)
        elif within := patterns.LABEL_WITHIN_LINE.search(text, floor, group.start):
            name = source.words(*within.span(1))
        cited = None if name else citation_beside(text, floor, first, group.end)
        names.append(source.words(*cited) if cited else name)
        floor = group.end
    return names


def _words(found: tuple[int, int] | None, offset: int, source: Source) -> str | None:
    if found is None:
        return None
    words = source.words(offset + found[0], offset + found[1])
    return re.sub(r" ?\[[^\]]*\]", "", words) or words or None


def _first_statistic(group: Group) -> int:
    """Where the first item starts; a number of participants may stand in the label."""
    return next((i for i in group.items if i.kind != "size"), group.items[0]).start
