"""Settings in square brackets, on a line or in the block of defaults at the top.

    [paired] [one-sample] [two-groups] [correlation]     design
    [n 20, 22] [N 42] [n 20 per group]                    group sizes, total, equal groups
    [against] [as predicted]                              direction
    [one-tailed] [two-tailed]                             the paper's test
    [within-pair r .6]                                    correlation of paired scores
    [sample NAME]                                         which participants
    [cut .01]                                             the paper's significance level
    [leave out: REASON]                                   read it, do not use it

Several may share brackets, parted by ";" or ",". An unknown setting is a fault, never ignored: the
reader would otherwise understand the line differently from its writer.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from functools import lru_cache
from typing import Any

from netsize.reported.faults import Fault
from netsize.reported.numbers import decimal, whole

__all__ = ["KNOWN_SETTINGS", "Settings", "merged", "parse_settings"]

Settings = Mapping[str, Any]

KNOWN_SETTINGS = (
    "paired", "one-sample", "two-groups", "correlation", "n 20, 22", "against", "as predicted",
    "one-tailed", "two-tailed", "within-pair r .6", "sample NAME", "cut .01", "leave out: REASON",
)  # fmt: skip

_WORDS: dict[str, tuple[str, Any]] = {
    spelling: (field, value)
    for field, value, spellings in (
        ("design", "paired", "paired|within|within subjects|within subject|dependent|matched|"
            "repeated measures|paired samples|dependent samples|matched pairs"),
        ("design", "one-sample", "one sample|single sample|one group"),
        ("design", "two-groups", "two groups|two group|two samples|two sample|independent|unpaired|"
            "independent samples|independent groups|between|between subjects|between subject"),
        ("design", "correlation", "correlation|correlational|regression"),
        ("design", "factorial", "factorial"),
        ("against", True, "against|against prediction|opposite|opposite direction|"
            "wrong direction|against the prediction"),
        ("against", False, "as predicted|predicted|predicted direction|with the prediction|for"),
        ("tails", 1, "one tailed|one sided|1 tailed|1 sided|one tail"),
        ("tails", 2, "two tailed|two sided|2 tailed|2 sided|two tail"),
    )
    for spelling in spellings.split("|")
}  # fmt: skip
_CORRELATION = re.compile(
    r"(?:within[- ]?pairs?(?: r| correlation| rho)?|pair(?:ed)? (?:r|correlation)|within r|"
    r"within[- ]?subjects? (?:r|correlation)|rho|ρ|r|correlation)[ :=]{1,3}(-?[0-9.,]{1,12})\Z",
    re.IGNORECASE,
)
_CUT = re.compile(
    r"(?:cut(?:[- ]?(?:point|off))?|alpha|α|level|significant at|significance level)"
    r"[ :=]{1,3}(?:p ?< ?)?([0-9.,]{1,12})\Z",
    re.IGNORECASE,
)
_SIZES = re.compile(
    r"(?:n1?s?[ :=]{1,3})?([0-9][0-9,]*?)"
    r"(?:[ ]?(?:,|/|\+|&|and|vs\.?|;)[ ]?(?:n2?[ :=]{1,3})?([0-9]+))*\Z",
    re.IGNORECASE,
)
_EACH = re.compile(r"(?:n[ :=]{1,3})?([0-9,]{1,12}) (?:per|each|a|in each)(?: group| cell| arm)?\Z")
_FREE_TEXT = re.compile(
    r"(sample|leave[- ]?out|left[- ]?out|omit|exclude|skip)\b[ :=]{0,3}(.*)\Z", re.I | re.S
)
_BOUNDARY = re.compile(r";|,(?=[ ]?(?![nN][0-9 =:])[^\W\d])")


@dataclass(frozen=True, slots=True)
class _Piece:
    text: str
    start: int


def parse_settings(content: str, start: int) -> dict[str, Any]:
    """The settings inside one pair of brackets; `start` is where `content` begins.

    Keys: design, n, per_group, against, tails, correlation, sample, cut, left_out.
    """
    try:
        return dict(_parsed(content))
    except Fault as fault:
        raise Fault(
            fault.reason, start + (fault.start or 0), start + (fault.end or len(content))
        ) from None


@lru_cache(maxsize=4096)  # a literature says [paired] many times
def _parsed(content: str) -> tuple[tuple[str, Any], ...]:
    settings: dict[str, Any] = {}
    for piece in _pieces(content):
        settings.update(_setting(piece))
    return tuple(settings.items())


def merged(*layers: Settings) -> dict[str, Any]:
    """Later layers win; group sizes replace each other as a whole."""
    result: dict[str, Any] = {}
    for layer in layers:
        if "n" in layer:
            result.pop("per_group", None)
        result.update(layer)
    return result


def _pieces(content: str) -> list[_Piece]:
    pieces: list[_Piece] = []
    position = 0
    while position <= len(content):
        rest = content[position:]
        stop = ";" if _FREE_TEXT.match(rest.lstrip()) else None
        if stop:
            end = rest.find(stop)
        else:
            found = _BOUNDARY.search(rest)
            end = found.start() if found else -1
        text = rest if end < 0 else rest[:end]
        if text.strip():
            pieces.append(_Piece(text.strip(), position + len(text) - len(text.lstrip())))
        if end < 0:
            break
        position += end + 1
    return pieces


def _setting(piece: _Piece) -> dict[str, Any]:
    words = re.sub(r"[\s_-]+", " ", piece.text.lower())
    if words in _WORDS:
        field, value = _WORDS[words]
        return {field: value}
    try:
        found = _valued(piece.text)
    except Fault as fault:
        raise Fault(fault.reason, piece.start, piece.start + len(piece.text)) from None
    if found is not None:
        return found
    close = get_close_matches(words, list(_WORDS), n=1, cutoff=0.75)
    meant = f" Did you mean [{close[0]}]?" if close else ""
    raise Fault(
        f"unknown setting [{_short(piece.text)}].{meant} Known: "
        + ", ".join(f"[{k}]" for k in KNOWN_SETTINGS)
        + "; write a remark in round brackets",
        piece.start,
        piece.start + len(piece.text),
    )


def _valued(text: str) -> dict[str, Any] | None:
    free = _FREE_TEXT.match(text)
    if free:
        return _free_text(free[1].lower(), free[2].strip())
    number = _CORRELATION.match(text)
    if number:
        value = decimal(number[1])[0]
        if not -1 < value < 1:
            raise Fault(f"a within-pair correlation lies between -1 and 1, not {number[1]}")
        return {"correlation": value}
    number = _CUT.match(text)
    if number:
        value = decimal(number[1])[0]
        if not 0 < value < 1:
            raise Fault(f"a significance level lies between 0 and 1, not {number[1]}")
        return {"cut": value}
    each = _EACH.match(text)
    if each:
        return {"n": (whole(each[1]),), "per_group": True}
    if _SIZES.match(text):
        sizes = re.findall(
            r"(?<![0-9nN])[0-9]+(?:,[0-9]{3}(?![0-9]))*", re.sub("[nN][12]", "", text)
        )
        return {"n": tuple(whole(s) for s in sizes), "per_group": False}
    return None


def _free_text(word: str, rest: str) -> dict[str, Any]:
    if word == "sample":
        if not rest:
            raise Fault("[sample NAME] needs a name")
        return {"sample": rest.strip("\"' ") or rest}
    return {"left_out": rest or "no reason given"}


def _short(text: str) -> str:
    return text if len(text) <= 40 else text[:37] + "..."
