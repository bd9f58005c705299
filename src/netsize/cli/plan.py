"""`netsize plan`: from pasted statistics to n."""

from __future__ import annotations

import json
from typing import Annotated, Any

import typer

from netsize.cli.options import SkipUnread, Source, planning_options

__all__ = ["plan"]


@planning_options
def plan(
    source: Source = None,
    skip_unread: SkipUnread = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON for programs.")] = False,
    choices: dict[str, Any] | None = None,
) -> None:
    """Size a study from the statistics that earlier papers printed.

    Paste lines such as "Study 1: t(38) = 2.31, p = .026"; `netsize read --help` tells what is
    understood.
    """
    import netsize
    from netsize.cli.source import load
    from netsize.presentation.planning import show_plan

    made = netsize.plan(load(source), skip_unread=skip_unread, **(choices or {}))
    if as_json:
        typer.echo(json.dumps(made.to_dict(), ensure_ascii=False, allow_nan=False))
    else:
        show_plan(made)
