"""`netsize sources`: the published methods behind the numbers."""

from __future__ import annotations

import json
from typing import Annotated

import typer

__all__ = ["sources"]


def sources(
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON for programs.")] = False,
) -> None:
    """List the published methods netsize uses, with where each enters."""
    import netsize

    entries = netsize.sources()
    if as_json:
        typer.echo(json.dumps({"sources": [e.to_dict() for e in entries]}, ensure_ascii=False))
        return
    for entry in entries:
        typer.echo(f"{entry.key}\n    {entry.citation}\n    Used for: {entry.used_for}")
