"""What a result is called and whose data it holds.

The label is the text before the first statistic of a line, up to a colon ("Study 1: t(38) = 2.31"),
or a short name with a number there ("Exp. 2b, t(38) = 2.31"), or author and year: where they open
the line ("Alpha & Beta (2009) found ...") or stand in brackets right beside the statistic. Results
of one labelled line come from one paper, most often from one set of participants: they share the
label as their sample. Without a label every result is its own sample. Either is said in the notes,
and `[sample NAME]` sets it.
"""

from __future__ import annotations

import re

__all__ = ["Labels", "citation_beside", "label_before"]

_COLON = re.compile(r":(?=[ \t]|\Z)")
_BULLET = re.compile(r"[ \t]*(?:[-*•>–]+[ \t]+|\([a-z0-9]{1,3}\)[ \t]+)?")
_NO_NAME = (
    r"(?!(?:In|On|By|At|For|With|From|Since|The|And|See|Of|As|Like|Unlike|Following|Contrary|Using|"
    r"But|While|Although|Because|When|After|Before|Given)[ ])"
)
_SHORT_NAME = re.compile(
    rf"[ \t]*{_NO_NAME}"
    r"((?:[^\W\d_][\w.&'-]{0,20}[ ]){1,3}[#(]?[0-9]{1,4}[a-z]?\)?|[#][\w-]{1,20})"
    r"[ \t]*[,;:|)-]?[ \t]*\Z"
)
_LONGEST = 200
_NAME = r"(?:(?:van|von|de|der|den|la|le|di)[ ]){0,3}[^\W\d_a-z][\w'-]{1,24}"
_YEAR = r"(?:1[89]|20)[0-9]{2}[a-z]?"
_AUTHORS = rf"{_NAME}(?:,[ ]{_NAME}){{0,5}}(?:,?[ ](?:&|and)[ ]{_NAME})?(?:,?[ ]et[ ]al\.?)?"
_CITED = rf"(?:{_AUTHORS},?[ ]\({_YEAR}\)|{_AUTHORS},?[ ]{_YEAR})"
_PART = r"(?:,?[ ](?:Exp\.|Expt\.|Experiment|Study)[ ]?[0-9]{1,2}[a-z]?)?"
_OPENING_CITATION = re.compile(
    rf"{_NO_NAME}({_CITED}{_PART})(?:[ \t]*[,;:|)-]?[ \t]*\Z"
    r"|,?[ ](?:found|reported|report|showed|observed|obtained|replicated)\b)"
)
_BRACKETED = rf"\(({_AUTHORS},?[ ]{_YEAR})\)"
_BRACKETED_BEFORE = re.compile(rf"{_BRACKETED}[ \t]*[,:]?[ \t]*\Z")
_BRACKETED_AFTER = re.compile(rf"[ ]{{0,2}}{_BRACKETED}")


def label_before(lead: str) -> tuple[int, int] | None:
    """Where in `lead`, the text of a line before its first statistic, the label stands."""
    if not lead.strip():
        return None
    bullet = _BULLET.match(lead)
    start = bullet.end() if bullet else 0
    colon = _COLON.search(lead, start)
    if colon is None:
        name = _OPENING_CITATION.match(lead, start) or _SHORT_NAME.match(lead, start)
        return (name.start(1), name.end(1)) if name else None
    end = colon.start()
    while end > start and lead[end - 1] in " \t":
        end -= 1
    if lead.count("(", start, end) > lead.count(")", start, end):
        start = lead.rindex("(", start, end) + 1  # "(t test: t(38) = 2.31)"
    elif lead[start:end].startswith("(") and lead[start:end].endswith(")"):
        start, end = start + 1, end - 1
    if _EQUATION.match(lead, start):
        return None
    return (start, end) if start < end <= start + _LONGEST else None


def citation_beside(text: str, floor: int, start: int, end: int) -> tuple[int, int] | None:
    """Where the bracketed author and year right before or after a statistic stand."""
    found = _BRACKETED_BEFORE.search(text, max(floor, start - _LONGEST), start)
    found = found or _BRACKETED_AFTER.match(text, end, end + _LONGEST)
    return found.span(1) if found else None


_EQUATION = re.compile(r"(?:Eqs?\.|Equations?|Figs?\.|Figures?)[ ]?[0-9(]")


class Labels:
    """Gives out unique labels in order of appearance."""

    def __init__(self) -> None:
        self._given: set[str] = set()
        self._times: dict[str, int] = {}
        self._numbered = 0

    def unique(self, label: str | None) -> str:
        """`label`, numbered from its second time on; "result 1", ... where there is none."""
        if label is None:
            self._numbered += 1
            label = f"result {self._numbered}"
        times = self._times.get(label, 0) + 1
        candidate = label if times == 1 else f"{label} ({times})"
        while candidate in self._given:
            times += 1
            candidate = f"{label} ({times})"
        self._times[label] = times
        self._given.add(candidate)
        return candidate
