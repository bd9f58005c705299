"""Tables and paragraphs for a terminal or a pipe.

On a terminal they fit its width, wrapping text columns; in a pipe they are plain and as wide as
they need to be, so that other tools see one row a line.
"""

from __future__ import annotations

import sys
from collections.abc import Sequence
from typing import Literal, TypeAlias

__all__ = ["Column", "show_list", "show_table", "show_text"]

Column: TypeAlias = tuple[str, Literal["left", "right"]]

_PIPE_WIDTH = 10_000
_TEXT_WIDTH = 100
_NAME_WIDTH = 24  # a text column narrower than this, or than its text, breaks names to bits


def show_table(columns: Sequence[Column], rows: Sequence[Sequence[str]], title: str = "") -> None:
    """Print a table: right-aligned columns never wrap, left-aligned ones may.

    On a terminal too narrow for it every row becomes a short list, so that no number is cut.
    """
    from rich import box
    from rich.table import Table
    from rich.text import Text

    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False, padding=(0, 2, 0, 0))
    for name, justify in columns:
        table.add_column(Text(name), justify=justify, no_wrap=justify == "right", overflow="fold")
    for row in rows:
        table.add_row(*(Text(_printable(cell)) for cell in row))
    if title:
        show_text(title)
    if sys.stdout.isatty() and _needed(columns, rows) > _terminal_width():
        _show_blocks(columns, rows)
    else:
        _print(table)


def _needed(columns: Sequence[Column], rows: Sequence[Sequence[str]]) -> int:
    """Width below which a column would be cut or a name broken to bits."""
    widths = [
        max(len(name), *(len(row[j]) for row in rows), 0) for j, (name, _) in enumerate(columns)
    ]
    kept = [w if columns[j][1] == "right" else min(w, _NAME_WIDTH) for j, w in enumerate(widths)]
    return sum(kept) + 2 * (len(columns) - 1)


def _show_blocks(columns: Sequence[Column], rows: Sequence[Sequence[str]]) -> None:
    for row in rows:
        show_text(row[0] if columns[0][1] == "left" else f"{columns[0][0]}: {row[0]}")
        for (name, _), cell in zip(columns[1:], row[1:], strict=True):
            show_text(f"{name}: {cell}", indent="  ")


def _terminal_width() -> int:
    from rich.console import Console

    return Console().width


def show_text(text: str, indent: str = "") -> None:
    """Print a paragraph, wrapped to the terminal (at most 100 characters), whole in a pipe."""
    from rich.padding import Padding
    from rich.text import Text

    _print(Padding(Text(_printable(text)), (0, 0, 0, len(indent))), limit=_TEXT_WIDTH)


def show_list(title: str, items: Sequence[str]) -> None:
    """Print a titled list, an item a line with a hanging indent; nothing for no items."""
    from rich.table import Table
    from rich.text import Text

    if not items:
        return
    show_text(title)
    grid = Table.grid(padding=(0, 1, 0, 0))
    grid.add_column(width=3, justify="right")
    grid.add_column(overflow="fold")
    for item in items:
        grid.add_row("-", Text(_printable(item)))
    _print(grid, limit=_TEXT_WIDTH)


def _print(renderable: object, limit: int | None = None) -> None:
    import io

    from rich.console import Console

    terminal = sys.stdout.isatty()
    width = _terminal_width() if terminal else _PIPE_WIDTH
    if terminal and limit is not None:
        width = min(width, limit)
    # rendered apart from stdout: rich pads to the full width, which a pipe must not see
    buffer = io.StringIO()
    Console(file=buffer, width=width, highlight=False, color_system=None).print(renderable)
    sys.stdout.write("".join(f"{line.rstrip()}\n" for line in buffer.getvalue().splitlines()))


def _printable(text: str) -> str:
    """Labels are data: control characters must not drive the terminal."""
    return "".join(c if c.isprintable() or c == "\n" else "\N{REPLACEMENT CHARACTER}" for c in text)
