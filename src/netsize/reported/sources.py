"""Which kind of text this is: statistics in prose, a table, or JSON of an earlier reading."""

from __future__ import annotations

from netsize.errors import ReadingError
from netsize.reported.json_source import looks_like_json, read_json
from netsize.reported.reader import NOTHING_FOUND, read_text
from netsize.reported.records import Reading

__all__ = ["read"]


def read(text: str) -> Reading:
    """Everything that `text` reports.

    Parameters
    ----------
    text : running text, one statistic a line, a table (comma, semicolon, tab or Markdown), or
        what `netsize read --json` printed.

    Returns
    -------
    Reading : results in order of place; places that look like a statistic and cannot be used are
        in `unread`, never raised.

    Raises
    ------
    ReadingError : empty text, or nothing in it looks like a statistic.
    """
    if not text.strip("\ufeff \t\r\n"):
        raise ReadingError(f"the input is empty; {NOTHING_FOUND.partition('. ')[2]}")
    return read_json(text) if looks_like_json(text) else read_text(text)
