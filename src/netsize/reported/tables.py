"""Tables in a text: where they stand, and their cells with places.

A table starts at a line whose cells are column names: at least two known ones, one of which can
hold a statistic. Cells are parted by commas, semicolons, tabs or, as in Markdown, by bars.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from netsize.reported.columns import Column, column_named

__all__ = ["Cell", "Table", "find_tables"]

_DELIMITERS = ("\t", ";", "|", ",")
# a header has no "=": this passes over nearly every line of statistics at once
_CANDIDATE = re.compile(r"(?m)^[^\n=]*[,;\t|][^\n=]*$")
_QUOTED = re.compile(r'[ ]*"((?:[^"]|""){0,20000})"[ ]*(?=[,;\t|\n]|\Z)')
_RULE = re.compile(r"[ \t]*\|?[ \t]*:?-{1,}:?[ \t]*(?:\|[ \t]*:?-{1,}:?[ \t]*)*\|?[ \t]*\Z")


@dataclass(frozen=True, slots=True)
class Cell:
    """Text of one cell without quotes and outer blanks, and where it stands in the whole text."""

    text: str
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Table:
    """Header cells with the columns they name, rows of cells, and the range in the text."""

    header: tuple[Cell, ...]
    columns: tuple[Column | None, ...]
    rows: tuple[tuple[Cell, ...], ...]
    start: int
    end: int


def find_tables(text: str) -> list[Table]:
    """Every table of normalised `text`, in order."""
    tables: list[Table] = []
    position = 0
    while True:
        candidate = _CANDIDATE.search(text, position)
        if candidate is None:
            return tables
        position = candidate.end()
        delimiter = _delimiter_of_header(candidate[0])
        if delimiter is not None:
            table = _read(text, candidate.start(), delimiter)
            tables.append(table)
            position = max(table.end, position)


def _delimiter_of_header(line: str) -> str | None:
    if len(line) > 5000:
        return None
    for delimiter in _DELIMITERS:
        if delimiter not in line:
            continue
        names = [c.text for c in _cells(line, 0, delimiter)[0]]
        known = [c for c in map(column_named, names) if c is not None]
        if len(known) >= 2 and any(c.evidence for c in known) and len(known) * 2 >= len(names):
            return delimiter
    return None


def _read(text: str, start: int, delimiter: str) -> Table:
    header, position = _cells(text, start, delimiter)
    rows: list[tuple[Cell, ...]] = []
    end = position
    for cells, after in _rows(text, position, delimiter):
        rows.append(cells)
        end = after
    columns = tuple(column_named(c.text) for c in header)
    return Table(header, columns, tuple(rows), start, end)


def _rows(text: str, position: int, delimiter: str) -> Iterator[tuple[tuple[Cell, ...], int]]:
    while position < len(text):
        line_start = position + 1  # text[position] is the line break
        line_end = text.find("\n", line_start)
        line_end = len(text) if line_end < 0 else line_end
        line = text[line_start:line_end]
        if not line.strip():
            if delimiter == "|":
                return
            position = line_end
            continue
        if delimiter not in line or (delimiter != "|" and _is_prose(line, delimiter)):
            return
        if delimiter == "|" and _RULE.match(line):
            position = line_end
            continue
        cells, position = _cells(text, line_start, delimiter)
        if any(c.text for c in cells):
            yield cells, position


def _is_prose(line: str, delimiter: str) -> bool:
    """A line of running text below a comma table, not a row of it."""
    return (
        delimiter == "," and ", " in line and bool(re.search(r"[a-z]{3} [a-z]{2,}.*[.:] ?\Z", line))
    )


def _cells(text: str, start: int, delimiter: str) -> tuple[tuple[Cell, ...], int]:
    """Cells from `start` to the end of the row, and where the row ends."""
    line_end = text.find("\n", start)
    line_end = len(text) if line_end < 0 else line_end
    line = text[start:line_end]
    cells: list[Cell] = []
    if '"' not in line:
        position = start
        for piece in line.split(delimiter):
            cells.append(_cell(piece, position))
            position += len(piece) + 1
        return _without_borders(cells, delimiter), line_end
    position = start
    while True:
        quoted = _QUOTED.match(text, position)
        if quoted:
            cells.append(Cell(quoted[1].replace('""', '"').strip(), *quoted.span(1)))
            position = quoted.end()
            if position > line_end:  # the quoted cell held line breaks
                line_end = text.find("\n", position)
                line_end = len(text) if line_end < 0 else line_end
        else:
            stop = text.find(delimiter, position, line_end)
            stop = line_end if stop < 0 else stop
            cells.append(_cell(text[position:stop], position))
            position = stop
        if position >= line_end or text[position] != delimiter:
            return _without_borders(cells, delimiter), line_end
        position += 1


def _cell(piece: str, start: int) -> Cell:
    stripped = piece.strip()
    begin = start + (len(piece) - len(piece.lstrip()) if stripped else 0)
    return Cell(stripped, begin, begin + len(stripped))


def _without_borders(cells: list[Cell], delimiter: str) -> tuple[Cell, ...]:
    if delimiter == "|":
        if cells and not cells[0].text:
            cells = cells[1:]
        if cells and not cells[-1].text:
            cells = cells[:-1]
    return tuple(cells)
