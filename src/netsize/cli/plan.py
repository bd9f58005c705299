"""`netsize plan`: from pasted statistics to n."""

from __future__ import annotations

import json
from typing import Annotated, Any

import typer

from netsize.cli.options import SkipUnread, Source, planning_options
from netsize.cli.waiting import waiting

__all__ = ["plan"]


@planning_options
def plan(
    source: Source = None,
    skip_unread: SkipUnread = False,
    sensitivity: Annotated[
        bool,
        typer.Option(
            "--sensitivity", help="Add how the answer moves with priors, assumptions and samples."
        ),
    ] = False,
    figures: Annotated[
        str | None,
        typer.Option(
            "--figures", help="Folder for the figures as SVG, PNG and PDF.", show_default=False
        ),
    ] = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON for programs.")] = False,
    choices: dict[str, Any] | None = None,
) -> None:
    """Size a study from the statistics that earlier papers printed.

    Paste lines such as "Study 1: t(38) = 2.31, p = .026"; `netsize read --help` tells what is
    understood.
    """
    import netsize
    from netsize.cli.source import load
    from netsize.planning import leave_one_out
    from netsize.planning import sensitivity as vary
    from netsize.presentation.planning import show_plan, show_variations

    reading = load(source)
    with waiting("fitting the evidence"):
        made = netsize.plan(reading, skip_unread=skip_unread, **(choices or {}))
        if figures is not None:
            from netsize.presentation.report.files import write_figures

            write_figures(made, figures)
        variations = (*vary(made), *leave_one_out(made)) if sensitivity else ()
    if as_json:
        record = made.to_dict()
        if sensitivity:
            record["sensitivity"] = [v.to_dict() for v in variations]
        typer.echo(json.dumps(record, ensure_ascii=False, allow_nan=False))
        return
    show_plan(made)
    if sensitivity:
        show_variations(made, variations)
