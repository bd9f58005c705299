"""Second stage: symbols with their numbers, wherever they stand in the text."""

from __future__ import annotations

import re
from collections.abc import Iterator

from netsize.reported import patterns
from netsize.reported.arguments import (
    ARGUMENT_COUNT,
    argument_numbers,
    arguments_in,
    count_arguments,
)
from netsize.reported.faults import Fault
from netsize.reported.items import Item
from netsize.reported.pieces import PIECES
from netsize.reported.records import Printed
from netsize.reported.values import bare_interval, printed_number

__all__ = ["scan"]

# how many degrees of freedom a plain value may have: none is right for every kind
_PLAIN_COUNT = {"t": (0, 1), "F": (0, 2), "r": (0, 1), "chi": (0, 1), "wald": (0, 1)}
LEVEL_TAKEN = "the interval's level is not printed: 95% taken"
_TAKES_ARGUMENTS = frozenset(("t", "F", "r", "z", "chi", "wald", "p", "rank", "slope"))


def scan(text: str) -> Iterator[Item]:
    """Every item of normalised `text` in order of place; faulty ones carry their fault."""
    position = 0
    while start := patterns.START.search(text, position):
        position = start.end()
        head = patterns.HEADS.get(start[0], patterns.OTHER_HEAD).match(text, start.start())
        if head is None:
            continue
        position = max(position, head.end())
        item = _item(head.lastgroup or "", head, text)
        if item is not None:
            position = max(item.end, position)
            yield item


def _item(kind: str, match: re.Match[str], text: str) -> Item | None:
    special = PIECES.get(kind)
    try:
        return special(match, text) if special else _statistic(kind, match, text)
    except Fault as fault:
        start = match.start() if fault.start is None else fault.start
        end = match.end() if fault.end is None else fault.end
        end = min(max(end, start + 1), len(text))
        return Item(
            kind,
            match[0],
            match.start(),
            max(end, match.end()),
            fault=fault.reason,
            marked=(start, end),
            harmless=fault.harmless,
        )


def _statistic(kind: str, match: re.Match[str], text: str) -> Item | None:
    start, at = match.span()
    if kind == "p" and _is_level(text, match):
        return None
    if match[0] == "β" and patterns.POWER.search(text, max(start - 4, 0), start):
        return None
    if kind == "z" and patterns.COORDINATE.search(text, max(start - 16, 0), start):
        return None
    plain = patterns.PLAIN_VALUE.match(text, at)
    if plain and len(plain.groups()) - plain.groups().count(None) - 2 in _PLAIN_COUNT.get(
        kind, (0,)
    ):
        return _plain(kind, match[0], start, plain)
    arguments: tuple[float, ...] = ()
    sizes: tuple[int, ...] = ()
    flags: set[str] = set()
    notes: list[str] = []
    bracketed = False
    if text[at : at + 1] == "|" and text[start - 1 : start] == "|":
        at += 1  # |t| = 2.31
    worded = patterns.VALUE_WORD.match(text, at)
    if worded:
        at = worded.end()
    if kind in _TAKES_ARGUMENTS:
        inside = patterns.BRACKETS.match(text, at)
        bare = None if inside else patterns.BARE_ARGUMENTS.match(text, at)
        if inside:
            found = arguments_in(kind, match, inside, text)
            if found is None:
                return None
            arguments, sizes, said = found
            flags |= said
            bracketed = True
            at = inside.end()
        elif bare and kind in ARGUMENT_COUNT:
            arguments, sizes, _ = argument_numbers(bare[1], bare.start(1))
            count_arguments(kind, match[0], arguments, (match.start(), bare.end()))
            flags.add("bare")
            at = bare.end()
    relation = patterns.RELATION.match(text, at)
    if kind in ("odds", "ratio", "smd") and (relation is None or relation[1] in (":", None)):
        before = patterns.ESTIMATE_THEN_INTERVAL.match(text, at)
        if before:
            number, end = printed_number(text, before.end(), "=", kind, start)
            interval, end = bare_interval(kind, text, end)
            told = () if interval is None else (LEVEL_TAKEN,)
            return Item(kind, match[0], start, end, number, interval=interval, notes=told)
    spoken = bracketed or worded or kind in ("smd", "odds", "ratio") or match[0][1:]
    if relation is None or (relation[2] and not spoken):
        if not bracketed or kind == "p":
            return None
        return _without_relation(kind, match, text, at, arguments, sizes, flags)
    named = worded or match[0][1:] == "-value"  # "p-value: 0.0275", "F-statistic: 5.12"
    if relation[1] == ":" and not bracketed and not named:
        return None
    number, end = printed_number(text, relation.end(), relation[1] or "=", kind, match.start())
    if number is None:
        if bracketed and kind != "p" and relation[1] != ":":
            raise Fault("there is no number after it", start, relation.end())
        return None
    interval, end = bare_interval(kind, text, end)
    if interval is not None:
        notes.append(LEVEL_TAKEN)
    return Item(
        kind, match[0], start, end, number, arguments, sizes, frozenset(flags), interval,
        notes=tuple(notes),
    )  # fmt: skip


def _is_level(text: str, match: re.Match[str]) -> bool:
    """Whether this p names a level of significance instead of a result."""
    start, end = match.span()
    if text[start - 1 : start] in "*†‡§+ abcdef" and patterns.LEGEND.search(
        text[max(start - 8, 0) : start]
    ):
        return patterns.LEGEND_RELATION.match(text, end) is not None
    if patterns.LEVEL_BEFORE.search(text[max(start - 50, 0) : start]):
        return True
    value = patterns.RELATION.match(text, end)
    number = patterns.NUMBER_HERE.match(text, value.end()) if value else None
    return number is not None and patterns.LEVEL_AFTER.match(text, number.end()) is not None


def _arguments_fit(kind: str, plain: re.Match[str]) -> bool:
    given = 0 if plain[1] is None else 1 if plain[2] is None else 2
    return given in _PLAIN_COUNT.get(kind, (0,))


def _plain(kind: str, symbol: str, start: int, plain: re.Match[str]) -> Item:
    first, second, relation, token = plain.groups()
    arguments = (float(first), float(second)) if second else (float(first),) if first else ()
    decimals = len(token) - token.index(".") - 1
    number = Printed(float(token), relation, decimals)  # type: ignore[arg-type]  # one of = < >
    return Item(kind, symbol, start, plain.end(), number, arguments)


def _without_relation(
    kind: str,
    match: re.Match[str],
    text: str,
    at: int,
    arguments: tuple[float, ...],
    sizes: tuple[int, ...],
    flags: set[str],
) -> Item | None:
    """`t(38) 2.31`: the equals sign was lost; anything else has no value."""
    start = match.start()
    stray = patterns.STRAY_COMMA.match(text, at)
    at = stray.end() if stray else at
    lost = patterns.NUMBER_HERE.match(text, at)
    if lost and re.search(r"[.,][0-9]", lost[1]) and arguments:
        number, end = printed_number(text, at, "=", kind, start)
        note = 'read as if "=" stood before the value'
        return Item(
            kind, match[0], start, end, number, arguments, sizes, frozenset(flags),
            notes=(note,),
        )  # fmt: skip
    if text[match.end() : match.end() + 1] in " \t" or not arguments:
        return None
    if kind == "F" and len(arguments) == 1:
        return None
    if kind == "chi" and len(arguments) == 0:
        return None
    if lost:
        hint = " (5 may be a lost equals sign)" if lost[1].strip() == "5" else ""
        raise Fault(f"no value stands after it; write {match[0]}(...) = value{hint}", start, at)
    # t(38), p < .05: the grouping stage knows whether a p stands beside it
    return Item(kind, match[0], start, at, None, arguments, sizes, frozenset(flags))
