"""Places in the original text: lines, columns, spans, and what surrounds a fault."""

from __future__ import annotations

import re
from bisect import bisect_right

from netsize.reported.characters import Characters
from netsize.reported.records import Span, Unread

__all__ = ["Places", "faulty_part_at"]

_LINE_END = re.compile(r"\r\n|[\n\r\x85\u2028\u2029]")
_AROUND = 60


class Places:
    """Turns ranges of the normalised text into places of the original."""

    def __init__(self, original: str, characters: Characters) -> None:
        self._text = original
        self._characters = characters
        self._starts = [0, *(m.end() for m in _LINE_END.finditer(original))]

    def span(self, start: int, end: int) -> Span:
        """Span of normalised [start, end)."""
        first, last = self._characters.cut(start, end)
        line = bisect_right(self._starts, first)
        return Span(line, first - self._starts[line - 1] + 1, first, last)

    def cut(self, span: Span) -> str:
        """The very characters of the original."""
        return self._text[span.start : span.end]

    def unread(self, start: int, end: int, reason: str, *, harmless: bool = False) -> Unread:
        """A fault at normalised [start, end), with the rest of its line around it."""
        span = self.span(start, end)
        line_start = self._starts[span.line - 1]
        context_start = max(line_start, span.start - _AROUND)
        context_end = min(len(self._text), span.end + _AROUND)
        line_end = _LINE_END.search(self._text, span.end, context_end)
        if line_end:
            context_end = line_end.start()
        before = "..." if context_start > line_start else ""
        after = "..." if context_end == span.end + _AROUND else ""
        return Unread(
            line=span.line,
            column=span.column,
            text=self.cut(span),
            reason=reason,
            context=f"{before}{self._text[context_start:context_end]}{after}",
            harmless=harmless,
        )


def faulty_part_at(place: Unread) -> int:
    """Where in the context of `place` its text starts; -1 where it does not stand there."""
    for at in (place.column - 1, _AROUND + len("...")):
        if place.context.startswith(place.text, at):
            return at
    return place.context.find(place.text)
