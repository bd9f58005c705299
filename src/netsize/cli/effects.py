"""`netsize effects`: each result as an unbiased effect size with its exact interval."""

from __future__ import annotations

import json
from typing import Annotated

import typer

from netsize.cli.options import SkipUnread, Source, numbers
from netsize.cli.source import load, usable
from netsize.errors import SettingError

__all__ = ["effects"]


def effects(
    source: Source = None,
    metric: Annotated[
        str | None,
        typer.Option(
            help="Scale to convert to: mean-difference, difference-score, fisher-z, cohen-f or "
            "log-ratio. Default: the results', where they share one."
        ),
    ] = None,
    level: Annotated[float, typer.Option(help="Confidence level of the exact intervals.")] = 0.95,
    variance: Annotated[
        str, typer.Option(help="Variance of mean differences: unbiased or large-sample.")
    ] = "unbiased",
    correlation: Annotated[
        float | None,
        typer.Option(
            "--within-pair",
            help="Correlation within pairs, to convert between paired and unpaired.",
        ),
    ] = None,
    alpha: Annotated[
        float, typer.Option(help="Two-sided level at which the papers called results significant.")
    ] = 0.05,
    cut_points: Annotated[
        str | None,
        typer.Option(help="Several such levels, joined by commas, in the place of --alpha."),
    ] = None,
    skip_unread: SkipUnread = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON for programs.")] = False,
    as_csv: Annotated[
        bool, typer.Option("--csv", help="Print the table as CSV, unrounded, on the metric.")
    ] = False,
    as_markdown: Annotated[
        bool, typer.Option("--markdown", help="Print the table as Markdown.")
    ] = False,
) -> None:
    """Convert each result to an unbiased effect size with its exact interval and assumptions.

    Example: netsize effects literature.txt --metric mean-difference --within-pair .5
    """
    import netsize

    if as_json + as_csv + as_markdown > 1:
        raise SettingError("--json, --csv and --markdown", "choose one of them")
    table = netsize.effects(
        usable(load(source), skip_unread=skip_unread),
        metric=metric,
        level=level,
        variance=variance,
        correlation=correlation,
        alpha=alpha,
        cut_points=None if cut_points is None else numbers("--cut-points", cut_points),
    )
    if as_json:
        typer.echo(json.dumps(table.to_dict(), ensure_ascii=False, allow_nan=False))
        return
    from netsize.presentation.effect_table import effects_csv, effects_markdown, show_effects

    if as_csv:
        typer.echo(effects_csv(table), nl=False)
    elif as_markdown:
        typer.echo(effects_markdown(table), nl=False)
    else:
        show_effects(table)
