"""Second stage: symbols with their numbers, wherever they stand in the text."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator

from netsize.reported import patterns
from netsize.reported.faults import Fault
from netsize.reported.items import Item
from netsize.reported.numbers import decimal, whole
from netsize.reported.records import Counts, Interval, Printed, Relation
from netsize.reported.tags import parse_settings

__all__ = ["argument_numbers", "printed_number", "scan"]

_UNITS_OF_P = frozenset(("p", "padjusted"))


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
    special = _SPECIAL.get(kind)
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
        )


# --- symbols with a relation and a value ---------------------------------------------------------

_TAKES_ARGUMENTS = frozenset(("t", "F", "r", "z", "chi", "wald", "p", "rank", "slope"))
_ARGUMENT_COUNT = {"t": (1, 1), "F": (2, 2), "r": (1, 1), "chi": (1, 2), "wald": (1, 2)}


def _statistic(kind: str, match: re.Match[str], text: str) -> Item | None:
    start, at = match.span()
    arguments: tuple[float, ...] = ()
    sizes: tuple[int, ...] = ()
    flags: set[str] = set()
    notes: list[str] = []
    bracketed = False
    if kind in _TAKES_ARGUMENTS:
        inside = patterns.BRACKETS.match(text, at)
        bare = None if inside else patterns.BARE_ARGUMENTS.match(text, at)
        if inside:
            found = _arguments(kind, match, inside, text)
            if found is None:
                return None
            arguments, sizes, said = found
            flags |= said
            bracketed = True
            at = inside.end()
        elif bare and kind in _ARGUMENT_COUNT:
            arguments, sizes, _ = argument_numbers(bare[1], bare.start(1))
            _count_arguments(kind, match[0], arguments, (match.start(), bare.end()))
            flags.add("bare")
            at = bare.end()
    relation = patterns.RELATION.match(text, at)
    if relation is None or (relation[2] and not (bracketed or kind in ("smd", "odds"))):
        if not bracketed or kind == "p":
            return None
        return _without_relation(kind, match, text, at, arguments, sizes, flags)
    if relation[1] == ":" and not bracketed:
        return None
    number, end, said_marks = printed_number(
        text, relation.end(), relation[1] or "=", kind, match.start()
    )
    if number is None:
        if bracketed and kind != "p":
            raise Fault("there is no number after it", start, relation.end())
        return None
    flags |= said_marks
    return Item(
        kind, match[0], start, end, number, arguments, sizes, frozenset(flags), notes=tuple(notes)
    )


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
    lost = patterns.NUMBER_HERE.match(text, at)
    if lost and re.search(r"[.,][0-9]", lost[1]) and arguments:
        number, end, said = printed_number(text, at, "=", kind, start)
        note = 'read as if "=" stood before the value'
        return Item(
            kind, match[0], start, end, number, arguments, sizes, frozenset(flags | said),
            notes=(note,),
        )  # fmt: skip
    if text[match.end() : match.end() + 1] in " \t" or not arguments:
        return None
    if kind == "F" and len(arguments) == 1:
        return None
    if kind == "chi" and len(arguments) == 0:
        return None
    hint = " (5 may be a lost equals sign)" if lost and lost[1].strip() == "5" else ""
    raise Fault(f"no value stands after it; write {match[0]}(...) = value{hint}", start, at)


def printed_number(
    text: str, at: int, relation: str, kind: str, start: int
) -> tuple[Printed | None, int, set[str]]:
    """The number at `at` with its relation; None where no number stands there.

    Raises Fault for a number that is part of something else (a range, a date, a quantity with its
    unit, an equation), not finite, or too large.
    """
    found = patterns.NUMBER_HERE.match(text, at)
    if found is None:
        odd = patterns.NOT_FINITE.match(text, at)
        if odd:
            raise Fault(f'"{odd[0].strip()}" is not a number that can be used', start, odd.end())
        return None, at, set()
    end = found.end()
    try:
        value, decimals = decimal(found[1], _around(text, start, end) if "," in found[1] else "")
    except Fault as fault:
        raise Fault(fault.reason, found.start(1), end) from None
    flags: set[str] = set()
    for _ in range(3 if text[end : end + 2].strip() else 0):
        mark = patterns.MARKS.match(text, end)
        if mark is None or mark.end() == end:
            break
        if "*" in mark[0] and re.match(r"[ ]?[0-9(]", text[mark.end() : mark.end() + 2]):
            break  # a product, which the check below refuses
        flags.add("marked")
        end = mark.end()
    _refuse_trailing(text, end, kind, start, found[1])
    return Printed(value, _relation(relation, start, end), decimals), end, flags


def _around(text: str, start: int, end: int) -> str:
    """The line about [start, end), at most 200 characters to either side."""
    line_start = text.rfind("\n", max(start - 200, 0), start) + 1 or max(start - 200, 0)
    line_end = text.find("\n", end, end + 200)
    return text[line_start : line_end if line_end >= 0 else end + 200]


def _refuse_trailing(text: str, end: int, kind: str, start: int, token: str) -> None:
    follows = patterns.TRAILING.match(text, end)
    if follows is None:
        if (
            token[-1].isdigit()
            and "." not in token
            and re.match(r"\.\n[ \t]{0,20}[0-9]", text[end : end + 24])
        ):
            raise Fault("the number is broken across two lines", start, end + 1)
        if kind not in _UNITS_OF_P and patterns.CHAINED.match(text, end):
            raise Fault("this reads as an inequality or equation, not one result", start, end + 1)
        return
    what = follows.lastgroup or ""
    if what == "arithmetic" and kind in _UNITS_OF_P:
        return
    if what == "list" and kind == "size":
        return
    reason = {
        "stuck": "letters or signs are stuck to the number",
        "more": "the number goes on as a date, version, ratio or list",
        "percent": "a percentage stands where the statistic should be",
        "range": "this is a range or carries ±; give one value",
        "list": "several numbers stand after one symbol; give each its own",
        "unit": "the number has a unit, so it is a quantity and not a statistic",
        "arithmetic": "this reads as an equation, not as a result",
    }[what]
    raise Fault(reason, start, follows.end())


def _relation(signs: str, start: int, end: int) -> Relation:
    less, more = "<" in signs, ">" in signs
    if less and more:
        raise Fault(f'"{signs}" is not one relation; write =, < or >', start, end)
    return "<" if less else ">" if more else "="


# --- what stands in the brackets -----------------------------------------------------------------

_ARGUMENT = re.compile(
    r"[ ]?(?:(?P<name>d\.?f\.?[ ]?[12]?|ν|v|[nN])[ ]?[=:]?[ ]?)?(?P<number>[0-9][0-9.,]{0,30})"
    r"(?:[ ]?(?P<after>df|d\.f\.))?[ ]?\Z"
)
_PLAIN_ARGUMENTS = re.compile(
    r"([0-9]{1,8}(?:\.[0-9]{1,6})?)(?:,[ ]?([0-9]{1,8}(?:\.[0-9]{1,6})?))?\Z"
)
_THOUSANDS = re.compile(r"[0-9]{3}\Z")
_REMARK = re.compile(
    r"[ ]?(?:(?P<one>(?:one|1)[ -](?:tailed|sided))|(?P<two>(?:two|2)[ -](?:tailed|sided))|"
    r"GG|HF|G-G|H-F|Greenhouse-Geisser|corrected|Welch)[ ]?\Z",
    re.IGNORECASE,
)


def _arguments(
    kind: str, match: re.Match[str], inside: re.Match[str], text: str
) -> tuple[tuple[float, ...], tuple[int, ...], set[str]] | None:
    content = inside[1]
    place = (match.start(), inside.end())
    year = len(content) in (4, 5) and patterns.YEAR.match(content)
    if year and not patterns.RELATION.match(text, inside.end()):
        return None
    try:
        arguments, sizes, flags = argument_numbers(content, inside.start(1))
    except Fault as fault:
        relation = patterns.RELATION.match(text, inside.end())
        if relation is None or kind not in _ARGUMENT_COUNT:
            return None
        if patterns.NUMBER_HERE.match(text, relation.end()) is None:
            return None
        raise Fault(fault.reason, *place) from None
    if kind in _ARGUMENT_COUNT and not (arguments == () and flags):
        if len(arguments) == 1 and kind == "F" and not patterns.RELATION.match(text, inside.end()):
            return None  # "Study F (2012)", "panel F (3)"
        _count_arguments(kind, match[0], arguments, place, content)
    if kind == "chi" and len(arguments) == 2:
        df, number = arguments[0], arguments[-1]
        if number != int(number) or sizes:
            raise Fault("chi-square takes one df and N: χ²(1, N = 80) = 4.5", *place)
        arguments, sizes = (df,), (int(number),)
        flags.add("second is N")
    return arguments, sizes, flags


def _count_arguments(
    kind: str,
    symbol: str,
    arguments: tuple[float, ...],
    place: tuple[int, int],
    content: str = "",
) -> None:
    fewest, most = _ARGUMENT_COUNT[kind]
    if fewest <= len(arguments) <= most:
        if any(a <= 0 for a in arguments):
            raise Fault("degrees of freedom must be above 0", *place)
        return
    if kind == "t" and len(arguments) == 2:
        joined = content.replace(",", "").replace(" ", "")
        meant = (
            f"; for thousands write t({joined})"
            if re.match(r"[0-9]{1,3},[0-9]{3}\Z", content)
            else ""
        )
        raise Fault(f"t takes one df; two belong to F(1, 56){meant}", *place)
    expected = {"t": "t(38)", "F": "F(1, 56)", "r": "r(48)", "chi": "χ²(1, N = 80)"}
    raise Fault(
        f"{symbol} takes {'two numbers' if fewest == 2 else 'one number'} of degrees of freedom, "
        f"as in {expected.get(kind, 'Wald(1)')}",
        *place,
    )


def argument_numbers(
    content: str, start: int
) -> tuple[tuple[float, ...], tuple[int, ...], set[str]]:
    """Degrees of freedom, numbers of participants and remarks from inside brackets."""
    plain = _PLAIN_ARGUMENTS.match(content)
    if plain:
        if plain[2] is None:
            return (float(plain[1]),), (), set()
        return (float(plain[1]), float(plain[2])), (), set()
    semicolons = ";" in content
    parts = content.split(";") if semicolons else _split_at_commas(content)
    arguments: list[float] = []
    sizes: list[int] = []
    flags: set[str] = set()
    for part in parts:
        remark = _REMARK.match(part)
        if remark:
            flags |= {"one-tailed"} if remark["one"] else {"two-tailed"} if remark["two"] else set()
            flags.add("remark")
            continue
        argument = _ARGUMENT.match(part)
        if argument is None:
            raise Fault("what stands in the brackets is not a number of degrees of freedom")
        if (argument["name"] or "").lower() == "n":
            sizes.append(whole(argument["number"]))
        else:
            arguments.append(_degrees(argument["number"]))
    if len(arguments) > 2:
        raise Fault(
            "more than two numbers stand in the brackets; with decimal commas write F(1,5; 34,2)"
        )
    return tuple(arguments), tuple(sizes), flags


def _degrees(token: str) -> float:
    if re.match(r"[0-9]{1,3},[0-9]{3}\Z", token):
        return float(token.replace(",", ""))  # 1,234 degrees of freedom: thousands
    return decimal(token)[0]


def _split_at_commas(content: str) -> list[str]:
    """Split at commas, except one between digits that parts thousands: "2, 1,045"."""
    pieces = content.split(",")
    parts: list[str] = []
    for piece in pieces:
        spaced = parts and " " in parts[-1][:1]
        if (
            spaced and _THOUSANDS.match(piece) and re.search(r"(?<![0-9])[0-9]{1,3}\Z", parts[-1])
        ) or (
            parts and re.search(r"[nN][ ]?=[ ]?[0-9]{1,3}\Z", parts[-1]) and _THOUSANDS.match(piece)
        ):
            parts[-1] += piece
        else:
            parts.append(piece)
    return parts


# --- items of their own shape --------------------------------------------------------------------


def _tag(match: re.Match[str], text: str) -> Item | None:
    start = match.start()
    end = text.find("]", start, start + 300)
    newline = text.find("\n", start, start + 300)
    if end < 0 or (0 <= newline < end):
        return None
    content = text[start + 1 : end]
    if not content.strip() or re.match(r"[\s0-9.,;:%+-]*\Z", content):
        return None  # an interval or the number of a reference
    settings = parse_settings(content, start + 1)
    return Item("tag", "tag", start, end + 1, settings=settings)


def _interval(match: re.Match[str], text: str) -> Item | None:
    level = re.search(r"[0-9]{2}(?:\.[0-9]{1,2})?", match[0])
    found = patterns.INTERVAL.match(text, match.end())
    if found is None:
        return None
    low, high = decimal(found[1])[0], decimal(found[2])[0]
    confidence = float(level[0]) / 100 if level else 0.95
    if low >= high:
        raise Fault(
            "the lower end of the interval is not below the upper one", match.start(), found.end()
        )
    if not 0.5 <= confidence < 1:
        raise Fault(
            "the level of the interval is not between 50% and 100%", match.start(), found.end()
        )
    return Item("ci", "CI", match.start(), found.end(), interval=Interval(low, high, confidence))


_DF_NUMBERS = re.compile(
    r"[ ]?[=:(][ ]?([0-9]{1,7}(?:\.[0-9]{1,6})?)"
    r"(?:[,;][ ]?([0-9]{1,7}(?:\.[0-9]{1,6})?)(?![.0-9]|[ ]?[=<>]))?"
)


def _df(match: re.Match[str], text: str) -> Item | None:
    found = _DF_NUMBERS.match(text, match.end())
    if found is None:
        return None
    numbers = tuple(float(g) for g in found.groups() if g)
    if any(n <= 0 for n in numbers):
        raise Fault("degrees of freedom must be above 0", match.start(), found.end())
    return Item("df", "df", match.start(), found.end(), arguments=numbers)


def _df_after(match: re.Match[str], text: str) -> Item | None:
    number = re.match(r"[0-9.,]+", match[0])
    value = decimal(number[0])[0] if number else 0.0
    if value <= 0:
        raise Fault("degrees of freedom must be above 0")
    return Item("df", "df", match.start(), match.end(), arguments=(value,))


def _size(match: re.Match[str], text: str) -> Item | None:
    found = patterns.SIZES.match(text, match.end())
    if found is None:
        stray = re.compile(r"[ ]?[=:][ ]?(-?[0-9][0-9.,]{0,30})").match(text, match.end())
        if stray and match[0] in ("n", "N"):
            raise Fault(
                "a number of participants must be a whole number above 0",
                match.start(),
                stray.end(),
            )
        return None
    try:
        sizes = tuple(whole(g) for g in found.groups() if g)
    except Fault as fault:
        raise Fault(fault.reason, match.start(), found.end()) from None
    each = patterns.SIZE_EACH.match(text, found.end())
    flags = {"capital"} if match[0][0] == "N" and not match[0][1:].strip(" _").isdigit() else set()
    if each:
        flags.add("each")
    end = each.end() if each else found.end()
    return Item("size", match[0], match.start(), end, sizes=sizes, flags=frozenset(flags))


def _ns(match: re.Match[str], text: str) -> Item | None:
    return Item("p", "n.s.", match.start(), match.end(), Printed(0.05, ">", 2))


def _pair(match: re.Match[str], text: str) -> Item | None:
    found = patterns.COUNT_PAIR.match(text, match.start())
    if found is None:
        return None
    numbers = [int(g) for g in found.groups()]
    if min(numbers[1], numbers[3]) < 10 and not re.search(
        r"(?:counts?|events?)[: ]{1,3}\Z", text[max(0, match.start() - 10) : match.start()]
    ):
        raise Fault(
            f'these may be fractions; for counts of people write "counts: {found[0][:60]}"',
            match.start(),
            found.end(),
        )
    return _counts_item(numbers, match.start(), found.end())


def _percent(match: re.Match[str], text: str) -> Item | None:
    found = patterns.PERCENT_PAIR.match(text, match.start())
    if found is None:
        return None
    numbers: list[int] = []
    for share, size in ((found[1], found[2]), (found[3], found[4])):
        value, decimals = decimal(share)
        n = whole(size)
        events = round(value / 100 * n)
        if abs(100 * events / n - value) > 0.5000001 * 10.0**-decimals:
            raise Fault(
                f"{share}% of {n} is not a whole number of people; give the counts, as in 12/40",
                match.start(),
                found.end(),
            )
        numbers += [events, n]
    return _counts_item(numbers, match.start(), found.end())


def _two_by_two(match: re.Match[str], text: str) -> Item | None:
    found = patterns.TABLE_2X2.match(text, match.start())
    if found is None:
        return None
    a, b, c, d = (int(g) for g in found.groups())
    return _counts_item([a, a + b, c, c + d], match.start(), found.end())


def _counts_item(numbers: list[int], start: int, end: int) -> Item:
    a, n, c, m = numbers
    if n < 1 or m < 1:
        raise Fault("a number of participants cannot be 0", start, end)
    if a > n or c > m:
        raise Fault("more events than participants", start, end)
    return Item("pair", "counts", start, end, counts=(Counts(a, n), Counts(c, m)))


def _plural(match: re.Match[str], text: str) -> Item | None:
    bracket = patterns.BRACKETS.match(text, match.end())
    if bracket is None:
        # "ps < .05" beside the tests it sums up says nothing new; alone it is no test
        return Item("plural", match[0], match.start(), match.end())
    raise Fault(
        "several tests in one statement; give each its own value", match.start(), bracket.end()
    )


def _other(match: re.Match[str], text: str) -> Item | None:
    bracket = patterns.BRACKETS.match(text, match.end())
    end = bracket.end() if bracket else match.end()
    raise Fault(
        f'"{match[0]}" is not a statistic that netsize reads '
        "(t, F, r, χ², z, d, η², means, counts, odds ratios, b; see netsize read --help)",
        match.start(),
        end,
    )


_SPECIAL: dict[str, Callable[[re.Match[str], str], Item | None]] = {
    "tag": _tag,
    "ci": _interval,
    "df": _df,
    "dfafter": _df_after,
    "size": _size,
    "ns": _ns,
    "pair": _pair,
    "percent": _percent,
    "table": _two_by_two,
    "plural": _plural,
    "other": _other,
}
