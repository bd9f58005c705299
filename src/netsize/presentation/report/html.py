"""A document as one HTML page: nothing is loaded, nothing runs, everything is escaped."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from netsize.errors import ReadingError
from netsize.presentation.figures import draw
from netsize.presentation.figures.saving import inline_svg
from netsize.presentation.report.cells import NUMERIC, text_of
from netsize.presentation.report.content import (
    Block,
    Bullets,
    Document,
    Facts,
    Paragraph,
    Picture,
    Section,
    Table,
)
from netsize.presentation.report.style import STYLE
from netsize.presentation.report.text import anchor, html_text

__all__ = ["page", "table_html"]

_NO_LOADING = "default-src 'none'; style-src 'unsafe-inline'"


def page(document: Document) -> str:
    """The whole page."""
    contents = "".join(
        f'<li><a href="#{anchor(s.key)}">{html_text(s.heading)}</a></li>' for s in document.sections
    )
    about = f"netsize {document.version} · {document.input.name}"
    return (
        '<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
        f'<meta http-equiv="Content-Security-Policy" content="{_NO_LOADING}">\n'
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
        '<meta name="color-scheme" content="light">\n'
        f"<title>{html_text(document.title)}</title>\n<style>\n{STYLE}</style>\n</head>\n<body>\n"
        f'<a class="skip" href="#{anchor(document.sections[0].key) if document.sections else ""}">'
        "To the answer</a>\n"
        f'<header><h1>{html_text(document.title)}</h1><p class="about">{html_text(about)}</p>'
        f'<nav aria-label="Contents"><ol>{contents}</ol></nav></header>\n<main>\n'
        + "".join(map(_section, document.sections))
        + "</main>\n</body>\n</html>\n"
    )


def _section(section: Section) -> str:
    key = anchor(section.key)
    body = _blocks(section.blocks)
    return (
        f'<section id="{key}" aria-labelledby="{key}-heading">\n'
        f'<h2 id="{key}-heading">{html_text(section.heading)}</h2>\n{body}</section>\n'
    )


def _blocks(blocks: tuple[Block, ...]) -> str:
    return "".join(_RENDERERS[type(block)](block) for block in blocks)


def _paragraph(block: Paragraph) -> str:
    text = html_text(block.text)
    if block.tone == "quote":
        return f"<h3>{html_text(block.title)}</h3>\n<blockquote><p>{text}</p></blockquote>\n"
    kind = "" if block.tone == "plain" else f' class="{block.tone}"'
    return f"<p{kind}>{text}</p>\n"


def _bullets(block: Bullets) -> str:
    items = "".join(f"<li><bdi>{html_text(item)}</bdi></li>" for item in block.items)
    return f"<h3>{html_text(block.title)}</h3>\n<ul>{items}</ul>\n"


def _facts(block: Facts) -> str:
    items = "".join(
        f"<div><dt>{html_text(f.name)}</dt><dd><b>{html_text(text_of(f.kind, f.value))}</b>"
        + (f"<span>{html_text(f.note)}</span>" if f.note else "")
        + "</dd></div>"
        for f in block.items
    )
    return f'<dl class="facts">{items}</dl>\n'


def table_html(table: Table) -> str:
    """A table in a region of its own that scrolls where the screen is narrow."""
    key = anchor(table.key)
    numeric = [c.kind in NUMERIC for c in table.columns]
    head = "".join(
        f'<th scope="col"{_side(right)}>{html_text(c.title)}</th>'
        for c, right in zip(table.columns, numeric, strict=True)
    )
    rows = []
    for index, row in enumerate(table.rows):
        cells = [
            html_text(text_of(c.kind, cell)) for c, cell in zip(table.columns, row, strict=True)
        ]
        first = f'<th scope="row"{_side(numeric[0])}><bdi>{cells[0]}</bdi></th>'
        rest = "".join(
            f"<td{_side(right)}>{cell if right else f'<bdi>{cell}</bdi>'}</td>"
            for cell, right in zip(cells[1:], numeric[1:], strict=True)
        )
        strong = ' class="strong"' if index in table.strong else ""
        rows.append(f"<tr{strong}>{first}{rest}</tr>")
    notes = "".join(f'<p class="under">{html_text(note)}</p>' for note in table.notes)
    return (
        f'<div class="table{" long" if _long(table) else ""}">'
        f'<div class="scroll" role="region" aria-labelledby="{key}-caption" tabindex="0">'
        f'<table id="{key}-table"><caption id="{key}-caption">'
        f"<span>{html_text(table.caption)}</span></caption>"
        f"<thead><tr>{head}</tr></thead><tbody>{''.join(rows)}</tbody></table></div>"
        f"{notes}</div>\n"
    )


def _long(table: Table) -> bool:
    """Whether it may break over pages; small ones stay whole and stand side by side."""
    return len(table.rows) > 16 or len(table.columns) > 6


def _side(right: bool) -> str:
    return ' class="n"' if right else ""


def _picture(block: Picture) -> str:
    key = f"figure-{anchor(block.key)}"
    svg = picture_svg(block, key)
    return (
        f'<figure id="{key}">{svg}\n<figcaption>{html_text(block.caption)}</figcaption></figure>\n'
    )


def picture_svg(block: Picture, key: str) -> str:
    """The drawing of a picture; ReadingError where its numbers, taken from a file, make none."""
    try:
        figure = draw(block.shown)
        return inline_svg(figure, name=key, title=block.caption, description=block.description)
    except (ValueError, ArithmeticError, LookupError, TypeError) as error:
        raise ReadingError(
            f"the figure {block.key!r} cannot be drawn from its numbers ({error})"
        ) from None


_RENDERERS: dict[type[Any], Callable[[Any], str]] = {
    Paragraph: _paragraph,
    Bullets: _bullets,
    Facts: _facts,
    Table: table_html,
    Picture: _picture,
}
