"""What a report says, before it takes a form: one frozen document that every renderer reads.

It is built once from a plan and holds typed numbers, not finished text, in its tables and
figures; so page, Markdown and JSON cannot disagree, and a page can be made again from the JSON
alone. Figures are held as the numbers they show and not as drawings: a drawing taken from a file
would have to be trusted, numbers need not.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal, TypeAlias

from netsize.presentation.figures import FigureNumbers

__all__ = [
    "SCHEMA",
    "Block",
    "Bullets",
    "Cell",
    "Column",
    "Document",
    "Fact",
    "Facts",
    "Input",
    "Kind",
    "Paragraph",
    "Picture",
    "Section",
    "Table",
]

SCHEMA = 1  # of the JSON; raised when its shape changes

Kind: TypeAlias = Literal[
    "text", "effect", "interval", "count", "counts", "probability", "percent", "p", "factor",
    "number", "money",
]  # fmt: skip
# a pair of floats is an interval; a text in a column of numbers stands for a missing one
Cell: TypeAlias = str | float | int | tuple[int, ...] | tuple[float | None, ...] | None
Tone: TypeAlias = Literal["plain", "lead", "quote", "note"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """Heading of a table column and what its cells are; see `cells.text_of`."""

    title: str
    kind: Kind = "text"


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A table; the first column names the rows. strong : rows to set off. notes : below it."""

    key: str
    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    strong: tuple[int, ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Paragraph:
    """Running text. quote : to paste elsewhere, named by `title`; note : a caution or aside."""

    text: str
    tone: Tone = "plain"
    title: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Bullets:
    """A list under a line of its own."""

    title: str
    items: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fact:
    """One number that answers at a glance."""

    name: str
    kind: Kind
    value: Cell
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Facts:
    """The few numbers at the top."""

    items: tuple[Fact, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Picture:
    """A figure as its numbers, with its caption and a description for readers who cannot see it."""

    key: str
    caption: str
    description: str
    shown: FigureNumbers


Block: TypeAlias = Paragraph | Bullets | Table | Facts | Picture


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """A heading and what stands under it; `key` is its anchor."""

    key: str
    heading: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Input:
    """What the report rests on.

    name : file name without its folders, or what the input was. sha256 : of the file's bytes, None
    where it was not a file. results_sha256 : of the results as read. results, unread : the reading
    itself, as `netsize read --json` prints it. skip_unread : whether unread places were left out.
    """

    name: str
    sha256: str | None
    results_sha256: str
    results: tuple[Any, ...]
    unread: tuple[Any, ...]
    skip_unread: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Document:
    """A whole report.

    answer : the first sentences. settings : every choice of the plan, for recomputing. numbers :
    the records behind the page, unrounded, as the other commands print them with --json.
    """

    title: str
    answer: str
    sections: tuple[Section, ...]
    input: Input
    settings: dict[str, Any]
    numbers: dict[str, Any]
    command: str
    version: str
    schema: int = SCHEMA

    def tables(self) -> dict[str, Table]:
        """Every table by its key."""
        return {
            block.key: block
            for section in self.sections
            for block in section.blocks
            if isinstance(block, Table)
        }
