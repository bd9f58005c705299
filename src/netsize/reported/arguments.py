"""What stands in the brackets after a symbol: degrees of freedom, N, remarks."""

from __future__ import annotations

import re

from netsize.reported import patterns
from netsize.reported.faults import Fault
from netsize.reported.numbers import decimal, whole

__all__ = ["ARGUMENT_COUNT", "argument_numbers", "arguments_in", "count_arguments"]

ARGUMENT_COUNT = {"t": (1, 1), "F": (2, 2), "r": (1, 1), "chi": (1, 2), "wald": (1, 2)}
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


def arguments_in(
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
        if relation is None or kind not in ARGUMENT_COUNT:
            return None
        if patterns.NUMBER_HERE.match(text, relation.end()) is None:
            return None
        # f(x) = 2.3, t(n) = 4, the half-life t(1/2) = 4 h
        letters = all(c.isalpha() or c in " ,+-*|'" for c in content)
        function = content == "1/2" or (letters and content.lower() not in ("nan", "inf"))
        raise Fault(fault.reason, *place, harmless=function) from None
    if kind in ARGUMENT_COUNT and not (arguments == () and flags):
        if len(arguments) == 1 and kind == "F" and not patterns.RELATION.match(text, inside.end()):
            return None  # "Study F (2012)", "panel F (3)"
        count_arguments(kind, match[0], arguments, place, content)
    if kind == "chi" and len(arguments) == 2:
        df, number = arguments[0], arguments[-1]
        if number != int(number) or sizes:
            raise Fault("chi-square takes one df and N: χ²(1, N = 80) = 4.5", *place)
        arguments, sizes = (df,), (int(number),)
        flags.add("second is N")
    return arguments, sizes, flags


def count_arguments(
    kind: str,
    symbol: str,
    arguments: tuple[float, ...],
    place: tuple[int, int],
    content: str = "",
) -> None:
    fewest, most = ARGUMENT_COUNT[kind]
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
    content = re.sub(r"[ \t]+", " ", content)
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
