"""From text to a `Reading`: the stages in order. Pure: text in, frozen records out."""

from __future__ import annotations

import re

from netsize.errors import ReadingError
from netsize.reported import patterns
from netsize.reported.characters import normalise
from netsize.reported.defaults import read_defaults
from netsize.reported.places import Places
from netsize.reported.prose import read_prose
from netsize.reported.records import Reading, ReportedResult, Unread
from netsize.reported.source import Source
from netsize.reported.table_rows import read_table
from netsize.reported.tables import find_tables

__all__ = ["NOTHING_FOUND", "read_text"]

NOTHING_FOUND = (
    "nothing here looks like a statistic. Expected lines such as\n"
    "    Study 1: t(38) = 2.31, p = .026\n"
    "    Study 2: F(1, 56) = 5.12\n"
    "    Study 3: r(48) = .31\n"
    "or a table; `netsize read --help` shows everything that can be read"
)
_COMMENT_LINE = re.compile(r"(?m)^[ \t]{0,40}#.*$")
_COMMENT_AFTER = re.compile(r"[0-9*\])][ \t]{1,40}#[ \t][^\n]*")


def read_text(original: str) -> Reading:
    """Statistics from running text, one a line, and from tables in the text.

    Raises ReadingError where nothing looks like a statistic; places that do and cannot be used
    are in `unread`.
    """
    characters = normalise(original)
    text = _without_comments(characters.text)
    places = Places(original, characters)
    defaults, begin, faults = read_defaults(text)
    if faults:
        # without the settings meant for all lines, every line could be understood wrongly
        unread = [places.unread(f.start or 0, f.end or 0, f.reason) for f in faults]
        return Reading((), tuple(unread))
    text = " " * begin + text[begin:]
    tables = find_tables(text)
    for table in tables:
        text = text[: table.start] + _blank(text[table.start : table.end]) + text[table.end :]
    text = patterns.SOFT_BREAK.sub(lambda m: m[0].replace("\n", " "), text)
    source = Source(
        original=original,
        text=text,
        characters=characters,
        places=places,
        defaults=defaults,
        against_words=patterns.AGAINST_WORDS.search(text) is not None,
    )
    results: list[ReportedResult] = []
    lost: list[Unread] = []
    for found, missed in [*(read_table(t, source) for t in tables), read_prose(source)]:
        results += found
        lost += missed
    if not results and not lost:
        raise ReadingError(NOTHING_FOUND if not tables else "the table has a header and no rows")
    if tables:
        results.sort(key=lambda r: r.span.start)
    lost.sort(key=lambda u: (u.line, u.column))
    return Reading(tuple(results), tuple(lost))


def _blank(text: str) -> str:
    """Blanks in place of everything but line breaks, so that places stay."""
    return re.sub(r"[^\n]", " ", text)


def _without_comments(text: str) -> str:
    """Blank out lines that start with "#", and " # ..." after a value, keeping every place."""
    if "#" not in text:
        return text
    text = _COMMENT_LINE.sub(lambda m: " " * len(m[0]), text)
    return _COMMENT_AFTER.sub(lambda m: m[0][0] + " " * (len(m[0]) - 1), text)
