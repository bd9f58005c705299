"""A document to and from files: the form follows the suffix."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

from netsize.errors import ReadingError, SettingError
from netsize.presentation.figures import FIGURES, draw
from netsize.presentation.figures.saving import FORMATS, rendered
from netsize.presentation.report.codec import decode, encode
from netsize.presentation.report.content import SCHEMA, Document, Picture
from netsize.presentation.report.html import page
from netsize.presentation.report.markdown import markdown
from netsize.presentation.writing import check_place, write_atomically

__all__ = ["form_of", "load_document", "write_document", "write_figures"]

_TITLE = "netsize report"  # tells the JSON of a report from other JSON
_FORMS: dict[str, Callable[[Document], str]] = {
    ".html": page,
    ".htm": page,
    ".md": markdown,
    ".json": lambda document: to_json(document),
}


def to_json(document: Document) -> str:
    """The document as JSON text."""
    record = {"is": _TITLE, "schema": document.schema} | {
        k: v for k, v in encode(document).items() if k not in ("is", "schema")
    }
    return json.dumps(record, ensure_ascii=False, allow_nan=False, indent=1) + "\n"


def form_of(path: str, *, option: str = "--output") -> Callable[[Document], str]:
    """The renderer for a file; SettingError for another suffix or a place that cannot hold it."""
    form = _FORMS.get(Path(path).suffix.lower())
    if form is None:
        raise SettingError(
            option, f"{Path(path).name!r} ends in none of {', '.join(_FORMS)}, which tell the form"
        )
    check_place(path, option=option)
    return form


def write_document(document: Document, path: str, *, option: str = "--output") -> None:
    """Write page, Markdown or JSON, whole or not at all."""
    form = form_of(path, option=option)
    # halves of characters, which UTF-8 cannot hold, become the escapes of JSON
    write_atomically(path, form(document).encode("utf-8", "backslashreplace"), option=option)


def load_document(path: str) -> Document:
    """The document of a JSON file; ReadingError where it is none, or is of another schema."""
    name = Path(path).name
    try:
        record = json.loads(Path(path).read_bytes())
    except OSError as error:
        raise ReadingError(f"{name}: cannot be read ({error.strerror or error})") from None
    except (ValueError, RecursionError):
        raise ReadingError(
            f"{name}: not JSON; expected what `netsize report -o x.json` writes"
        ) from None
    if not isinstance(record, dict) or record.get("is") != _TITLE:
        raise ReadingError(f"{name}: not a report; expected what `netsize report -o x.json` writes")
    if record.get("schema") != SCHEMA:
        raise ReadingError(
            f"{name}: its schema is {record.get('schema')!r}, and this version reads {SCHEMA}; "
            "make the report again from its source"
        )
    try:
        return decode(Document, record)
    except ReadingError as error:
        raise ReadingError(f"{name}: {error}") from None


def write_figures(source: Any, folder: str, *, option: str = "--figures") -> list[Path]:
    """Every figure of a plan (or the pictures of a document) as SVG, PNG and PDF in a folder.

    The folder is made where it is missing. Returns the files written.
    """
    place = Path(folder)
    try:
        place.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise SettingError(option, f"{place.name!r} cannot be a folder: {error.strerror}") from None
    if isinstance(source, Document):
        shown = {
            block.key: block.shown
            for section in source.sections
            for block in section.blocks
            if isinstance(block, Picture)
        }
    else:
        shown = {name: kind.of(source) for name, kind in FIGURES.items()}
    written = []
    for name, numbers in shown.items():
        for form in FORMATS:
            written.append(place / f"{name}.{form}")
            write_atomically(written[-1], rendered(draw(numbers), form), option=option)
    return written
