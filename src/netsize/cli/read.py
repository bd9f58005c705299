"""`netsize read`: what was understood of a source, before anything is computed from it."""

from __future__ import annotations

import json
from typing import Annotated

import typer

from netsize.cli.options import Source

__all__ = ["read"]


def read(
    source: Source = None,
    as_json: Annotated[
        bool, typer.Option("--json", help="Print JSON for programs; it can be read back.")
    ] = False,
    as_csv: Annotated[bool, typer.Option("--csv", help="Print the rows as CSV.")] = False,
    template: Annotated[
        bool, typer.Option("--template", help="Print an empty table with its columns explained.")
    ] = False,
) -> None:
    """Show how each statistic of SOURCE is understood, and what cannot be read.

    SOURCE is text, CSV (also with semicolons and decimal commas), TSV, a Markdown table, an .xlsx
    workbook, or the JSON of an earlier reading. Everything is read from running text as well.
    """
    from netsize.cli.source import load
    from netsize.presentation.reading import show_reading, write_reading_csv
    from netsize.reported.check import check
    from netsize.reported.columns import template as empty_table

    if template:
        typer.echo(empty_table(), nl=False)
        return
    reading = load(source)
    findings = tuple(check(r) for r in reading.results)
    if as_json:
        record = reading.to_dict()
        for entry, found in zip(record["results"], findings, strict=True):
            entry["check"] = [f.to_dict() for f in found]
        typer.echo(json.dumps(record, ensure_ascii=False, allow_nan=False))
    elif as_csv:
        write_reading_csv(reading, findings)
    else:
        show_reading(reading, findings)
    if not reading.results:
        raise typer.Exit(3)
