"""A document as Markdown: the same text and tables, each figure in words."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from netsize.presentation.report.cells import NUMERIC, text_of
from netsize.presentation.report.content import (
    Bullets,
    Document,
    Facts,
    Paragraph,
    Picture,
    Table,
)
from netsize.presentation.report.text import markdown_text

__all__ = ["markdown"]


def markdown(document: Document) -> str:
    """The whole document."""
    parts = [f"# {markdown_text(document.title)}"]
    about = f"netsize {document.version}, {document.input.name}"
    parts.append(markdown_text(about))
    for section in document.sections:
        parts.append(f"## {markdown_text(section.heading)}")
        parts += [_RENDERERS[type(block)](block) for block in section.blocks]
    return "\n\n".join(part for part in parts if part) + "\n"


def _paragraph(block: Paragraph) -> str:
    text = markdown_text(block.text)
    if block.tone == "quote":
        return f"### {markdown_text(block.title)}\n\n> {text}"
    return f"**{text}**" if block.tone in ("lead", "note") else text


def _bullets(block: Bullets) -> str:
    items = "\n".join(f"- {markdown_text(item)}" for item in block.items)
    return f"### {markdown_text(block.title)}\n\n{items}"


def _facts(block: Facts) -> str:
    return "\n".join(
        f"- {markdown_text(f.name)}: {markdown_text(text_of(f.kind, f.value))}"
        + (f" ({markdown_text(f.note)})" if f.note else "")
        for f in block.items
    )


def _table(table: Table) -> str:
    lines = [
        [markdown_text(c.title) for c in table.columns],
        ["---:" if c.kind in NUMERIC else "---" for c in table.columns],
    ]
    for index, row in enumerate(table.rows):
        cells = [
            markdown_text(text_of(c.kind, cell)) for c, cell in zip(table.columns, row, strict=True)
        ]
        if index in table.strong:
            cells = [f"**{cell}**" if cell else cell for cell in cells]
        lines.append(cells)
    body = "\n".join(f"| {' | '.join(line)} |" for line in lines)
    notes = "\n\n".join(markdown_text(note) for note in table.notes)
    return f"### {markdown_text(table.caption)}\n\n{body}" + (f"\n\n{notes}" if notes else "")


def _picture(block: Picture) -> str:
    return f"*{markdown_text(block.caption)}* {markdown_text(block.description)}"


_RENDERERS: dict[type[Any], Callable[[Any], str]] = {
    Paragraph: _paragraph,
    Bullets: _bullets,
    Facts: _facts,
    Table: _table,
    Picture: _picture,
}
