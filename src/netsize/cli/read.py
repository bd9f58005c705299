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

    SOURCE is running text, one statistic a line, a table (CSV, also with
    semicolons and decimal commas, TSV, Markdown, .xlsx) or the JSON of an
    earlier reading. Exit code 3 when nothing at all could be read.

    \b
    What is read (a label may stand before it, up to a colon):
      t(38) = 2.31, p = .026, d = 0.73        t(33.2) = 2.1 is Welch's
      F(1, 56) = 5.12, ηp² = .08              F(1.54, 43.2) = 5.1
      r(48) = .31         r = .31, n = 50     partial r(45) = .31
      χ²(1, N = 80) = 4.5                     Wald χ²(1, N = 80) = 4.5
      z = 2.31, n = 80                        U = 123, z = 2.31, n = 20, 22
      d = 0.5, n = 20, 22                     η² = .08, n = 58
      M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20
      12/40 vs 22/41      30% of 40 vs 54% of 41      2x2: 12, 28; 22, 19
      OR = 1.85, 95% CI [1.10, 3.10]          r = .31, 95% CI [.03, .54]
      b = 0.42, SE = 0.15, df = 96            β = .28, t(96) = 2.8
      p = .03, n = 40     F(1, 56) < 1        t(38) = 1.2, n.s.

    \b
    Settings in square brackets. After a statistic they belong to it, before
    the first one to the whole line; several are parted by ";" or ",":
      [paired] [one-sample] [two-groups] [correlation]   design
      [n 20, 22]  [N 42]  [n 20 per group]               participants
      [against]  [as predicted]                          direction
      [one-tailed]  [two-tailed]                         the paper's test
      [within-pair r .6]                                 of paired scores
      [sample NAME]                                      whose data
      [cut .01]                                          the paper's level
      [leave out: REASON]                                read, not used

    \b
    For all lines, at the top:      defaults: [paired] [one-tailed]
    Comments: lines that start with #, and " # ..." after a statistic.

    Results of one labelled line share a sample; without a label each is its
    own. Several tests in one sentence, each with its p and d, are told apart.
    A printed minus sign counts as against the prediction.
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
