"""Items with a shape of their own: settings, intervals, sizes, counts; and what is none."""

from __future__ import annotations

import re
from collections.abc import Callable

from netsize.reported import patterns
from netsize.reported.faults import Fault
from netsize.reported.items import NOT_SIGNIFICANT, Item
from netsize.reported.numbers import decimal, whole
from netsize.reported.records import Counts, Interval, Printed
from netsize.reported.tags import parse_settings

__all__ = ["PIECES"]


# [F(1, 56) = 5.12, p = .028]: square brackets round a statistic
_STATISTIC = re.compile(
    r"(?<!\w)(?:[tFrzPpdgMUW]|[XχΧ]\^?2|[ηωβ][^ =<>]{0,3}|OR|HR|RR|CI)"
    r"[ ]?(?:\([0-9dN][^()]{0,30}\)|[0-9]{1,4}(?:, ?[0-9]{1,4})?)?[ ]?[=<>]"
)
_NO_SETTING = re.compile(r"[\s0-9.,;:%+-]*\Z")


def _tag(match: re.Match[str], text: str) -> Item | None:
    start = match.start()
    end = text.find("]", start, start + 300)
    newline = text.find("\n", start, start + 300)
    if end < 0 or (0 <= newline < end):
        return None
    content = text[start + 1 : end]
    if len(content.strip()) < 2 or _NO_SETTING.match(content):
        return None  # an interval, a footnote letter or the number of a reference
    try:
        settings = parse_settings(content, start + 1)
    except Fault:
        if _STATISTIC.search(content):
            return None
        raise
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
    numbers = tuple(decimal(n)[0] for n in re.findall(r"[0-9]+(?:[.,][0-9]+)?", match[0]))
    if any(n <= 0 for n in numbers):
        raise Fault("degrees of freedom must be above 0")
    return Item("df", "df", match.start(), match.end(), arguments=numbers)


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
    words = frozenset(("words",)) if match[0][-1] == "t" else frozenset()
    number = Printed(0.05, ">", 2)
    return Item("p", NOT_SIGNIFICANT, match.start(), match.end(), number, flags=words)


def _pair(match: re.Match[str], text: str) -> Item | None:
    found = patterns.COUNT_PAIR.match(text, match.start())
    if found is None:
        return None
    numbers = [int(g) for g in found.groups()]
    before = max(0, match.start() - 10)
    named = re.search(r"\b(?:counts?|events?)[: ]{1,3}\Z", text[before : match.start()])
    if re.match(r"[ ]?(?:vs|versus)\b", text[found.end() : found.end() + 8]):
        raise Fault("more than two groups; netsize reads two", match.start(), found.end())
    if min(numbers[1], numbers[3]) < 10 and not named:
        raise Fault(
            f'these may be fractions; for counts of people write "counts: {found[0][:60]}"',
            match.start(),
            found.end(),
            harmless=numbers[0] > numbers[1] or numbers[2] > numbers[3],
        )
    start = before + named.start() if named else match.start()
    return _counts_item(numbers, start, found.end())


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


def _plus_minus(match: re.Match[str], text: str) -> Item | None:
    return Item("plusminus", "±", match.start(), match.end())


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
        harmless=_is_word(match[0]),
    )


_TEST_WORD = re.compile(
    r"chi|test|pair|obs|welch|stud|stat|val|ratio|anova|ind|change", re.IGNORECASE
)


def _is_word(name: str) -> bool:
    """Words such as "best(38)"; Q, H, minF', tpaired and the like are or may be statistics."""
    return len(name) > 2 and name.isalpha() and name[1:].islower() and not _TEST_WORD.search(name)


PIECES: dict[str, Callable[[re.Match[str], str], Item | None]] = {
    "tag": _tag,
    "ci": _interval,
    "df": _df,
    "dfafter": _df_after,
    "size": _size,
    "ns": _ns,
    "pair": _pair,
    "percent": _percent,
    "table": _two_by_two,
    "plusminus": _plus_minus,
    "plural": _plural,
    "other": _other,
}
