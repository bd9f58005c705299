"""The report of a plan: one document, rendered as a page, as Markdown or as JSON."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from netsize.planning.plan import plan
from netsize.presentation.report.checking import differences
from netsize.presentation.report.compose import compose
from netsize.presentation.report.content import Document
from netsize.presentation.report.files import load_document, write_document, write_figures
from netsize.reported import read
from netsize.reported.records import Reading, ReportedResult

__all__ = [
    "Document",
    "compose",
    "differences",
    "load_document",
    "report",
    "write_document",
    "write_figures",
]


def report(
    source: str | Reading | Sequence[ReportedResult],
    *,
    skip_unread: bool = False,
    name: str = "results",
    sha256: str | None = None,
    command: str = "",
    **choices: Any,
) -> Document:
    """Plan a study and say everything about it in one document.

    Parameters
    ----------
    source, skip_unread, choices : as in `netsize.plan`.
    name, sha256, command : of the input and how the report was asked for; they are only shown.

    Returns
    -------
    A `Document`; `write_document(document, "page.html")` writes it (.html, .md or .json).
    """
    if isinstance(source, str):
        source = read(source)
    reading = source if isinstance(source, Reading) else Reading(results=tuple(source))
    made = plan(reading, skip_unread=skip_unread, **choices)
    return compose(
        made, reading, name=name, sha256=sha256, skip_unread=skip_unread, command=command
    )
