"""First stage: every character that papers use for the same thing becomes one character.

Unicode minus and dashes, thin and no-break spaces, compatibility forms (NFKC: mathematical italics,
subscript digits, full-width forms, ligatures), raised digits and HTML entities. Places in the
normalised text map back to the original, so that spans always cut the original text.
"""

from __future__ import annotations

import re
import unicodedata
from bisect import bisect_right
from dataclasses import dataclass
from functools import lru_cache

__all__ = ["Characters", "normalise"]

_EXACT = {
    "\u2212": "-",  # minus sign
    "\u00b7": ".",  # decimal point raised to mid-height, as some medical journals print it
    "\u2219": ".",
    "\u22c5": ".",
    "\u00bc": "=",  # what a lost "=" often becomes when a PDF's own font is copied
    "\u2248": "=",
    "\u2243": "=",
    "\u2245": "=",
    "\u2264": "<",
    "\u2a7d": "<",
    "\u2266": "<",
    "\u2265": ">",
    "\u2a7e": ">",
    "\u2267": ">",
    "\u2018": "'",
    "\u2019": "'",
    "\u2032": "'",
    "\u00b4": "'",
    "`": "'",
    "\u201c": '"',
    "\u201d": '"',
    "\u00d7": "x",
    "\u2715": "x",
    "\u2217": "*",
    "\u2731": "*",
    "\u00ad": "",  # soft hyphen
    "\u03f0": "κ",
    "\u0394": "Δ",
    "\u2206": "Δ",
    "\u0085": "\n",
    "\u2028": "\n",
    "\u2029": "\n",
    "\v": " ",
    "\f": " ",
    "\u03a7": "χ",  # capital chi
}
_RAISED = dict(zip("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-", strict=True))
_ENTITIES = {
    "&lt;": "<", "&gt;": ">", "&amp;": "&", "&nbsp;": " ", "&minus;": "-", "&ndash;": "-",
    "&le;": "<", "&ge;": ">", "&thinsp;": " ", "&chi;": "χ", "&eta;": "η", "&sup2;": "^2",
}  # fmt: skip
# a word divided at the end of a line: "sig-" and "nificant"
_DIVIDED = r"(?<=[a-z])-(?:\r\n?|\n)(?=[a-z])"
_RUNS = "|".join(["[" + "".join(_RAISED) + "]+", *map(re.escape, _ENTITIES), _DIVIDED, "\r\n?"])


@dataclass(frozen=True, slots=True)
class Characters:
    """Normalised text with the way back: at `turns[i]` the offset becomes `shifts[i]`."""

    text: str
    turns: tuple[int, ...] = ()
    shifts: tuple[int, ...] = ()

    def original(self, index: int) -> int:
        """Where the character at `index` of the normalised text stands in the original."""
        if not self.turns:
            return index
        at = bisect_right(self.turns, index) - 1
        return index + self.shifts[at] if at >= 0 else index

    def cut(self, start: int, end: int) -> tuple[int, int]:
        """The half-open range of the original that normalised [start, end) came from."""
        if end <= start:
            here = self.original(start)
            return here, here
        return self.original(start), self.original(end - 1) + 1


def normalise(text: str) -> Characters:
    """Normalise in time and memory linear in the length of `text`."""
    if (
        text.isascii()
        and "&" not in text
        and "\r" not in text
        and "`" not in text
        and "-\n" not in text
    ):
        return Characters(text.translate(_CONTROL) if "\f" in text or "\v" in text else text)
    table = {c: _plain(c) for c in set(text) if not c.isascii() or c in "`\v\f"}
    same_length = {ord(c): r for c, r in table.items() if len(r) == 1 and c not in _RAISED}
    odd = "".join(re.escape(c) for c, r in table.items() if len(r) != 1 and c not in _RAISED)
    pattern = re.compile(f"{_RUNS}|[{odd}]" if odd else _RUNS)
    pieces: list[str] = []
    turns: list[int] = []
    shifts: list[int] = []
    last = length = 0
    for match in pattern.finditer(text):
        start, end = match.span()
        pieces.append(text[last:start].translate(same_length))
        length += start - last
        run = match[0]
        new = _replacement(run, table)
        pieces.append(new)
        raised = run[0] in _RAISED
        if len(new) != end - start or raised:
            for k in range(len(new)):
                turns.append(length + k)
                origin = start + (max(k - 1, 0) if raised else 0)
                shifts.append(origin - (length + k))
            length += len(new)
            turns.append(length)
            shifts.append(end - length)
        else:
            length += len(new)
        last = end
    pieces.append(text[last:].translate(same_length))
    return Characters("".join(pieces), tuple(turns), tuple(shifts))


_CONTROL = {ord("\v"): " ", ord("\f"): " "}


def _replacement(run: str, table: dict[str, str]) -> str:
    if run[0] in _RAISED:
        return "^" + "".join(_RAISED[c] for c in run)
    if run[0] == "\r":
        return "\n"
    if run[0] == "-":
        return ""
    return _ENTITIES[run] if run in _ENTITIES else table[run]


@lru_cache(maxsize=4096)
def _plain(character: str) -> str:
    exact = _EXACT.get(character)
    if exact is not None:
        return exact
    category = unicodedata.category(character)
    if category == "Zs":
        return " "
    if category == "Pd":
        return "-"
    if category in ("Mn", "Me", "Cf"):  # accents over a symbol, joiners, direction marks
        return ""
    if category == "Nd":
        return str(unicodedata.decimal(character))
    folded = unicodedata.normalize("NFKC", character)
    if len(folded) == 1:
        return _EXACT.get(folded, folded)
    # what a compatibility form unfolds to may itself need folding (a spacing accent: space + mark)
    return "".join(c if c.isascii() else _EXACT.get(c, c) for c in folded)
