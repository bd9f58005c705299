"""`netsize report`: the page that goes into the protocol."""

from __future__ import annotations

import hashlib
import shlex
from pathlib import Path
from typing import Annotated, Any

import typer

from netsize.cli.options import SkipUnread, Source, planning_options, spelled
from netsize.cli.waiting import waiting
from netsize.errors import SettingError

__all__ = ["report"]

_MOST_LISTED = 50


@planning_options
def report(
    source: Source = None,
    output: Annotated[
        str | None,
        typer.Option(
            "--output",
            "-o",
            help="File to write: .html, .md or .json. Default: Markdown on standard output.",
            show_default=False,
        ),
    ] = None,
    held: Annotated[
        str | None,
        typer.Option(
            "--from",
            help="Make the page again from the .json of an earlier report, computing nothing.",
            show_default=False,
        ),
    ] = None,
    check: Annotated[
        str | None,
        typer.Option(
            "--check",
            help="Recompute the .json of an earlier report and list what differs (exit code 1).",
            show_default=False,
        ),
    ] = None,
    figures: Annotated[
        str | None,
        typer.Option(
            "--figures", help="Folder for the figures as SVG, PNG and PDF.", show_default=False
        ),
    ] = None,
    skip_unread: SkipUnread = False,
    choices: dict[str, Any] | None = None,
) -> None:
    """Write the report of a plan: answer, evidence, corrections, sizes, justification, sources.

    Takes every planning option of `netsize plan`. Example: netsize report papers.txt -o page.html
    """
    if held is not None or check is not None:
        _alone(source, held, check, skip_unread, choices or {})
    if check is not None:
        _check(check)
        return
    from netsize.presentation.report import load_document, write_document, write_figures
    from netsize.presentation.report.files import form_of
    from netsize.presentation.report.markdown import markdown

    if output is not None:
        form_of(output)  # refuse before computing
    document = (
        load_document(held) if held is not None else _made(source, skip_unread, choices or {})
    )
    if output is not None:
        write_document(document, output)
    elif figures is None:
        typer.echo(markdown(document), nl=False)
    if figures is not None:
        write_figures(document, figures)


def _made(source: str | None, skip_unread: bool, choices: dict[str, Any]) -> Any:
    from netsize.cli.source import load
    from netsize.presentation.report import report as make

    named = source is not None and source != "-"
    reading = load(source)
    parts = ["netsize", "report", Path(source).name if source and named else "-"]
    parts += spelled(choices) + (["--skip-unread"] if skip_unread else [])
    with waiting("fitting, then again under other assumptions"):
        return make(
            reading,
            skip_unread=skip_unread,
            name=Path(source).name if source and named else "standard input",
            sha256=hashlib.sha256(Path(source).read_bytes()).hexdigest()
            if source and named
            else None,
            command=shlex.join(parts),
            **choices,
        )


def _alone(
    source: str | None,
    held: str | None,
    check: str | None,
    skip_unread: bool,
    choices: dict[str, Any],
) -> None:
    option = "--from" if held is not None else "--check"
    if held is not None and check is not None:
        raise SettingError("--from and --check", "choose one of them")
    if source is not None:
        raise SettingError(option, "the report holds its own results; leave the source out")
    if choices or skip_unread:
        given = (spelled(choices) or ["--skip-unread"])[0]
        raise SettingError(option, f"the report holds its own choices; leave {given} out")


def _check(path: str) -> None:
    import netsize
    from netsize.presentation.report import differences, load_document

    document = load_document(path)
    with waiting("recomputing"):
        found = differences(document)
    made = f"made with netsize {document.version}, recomputed with {netsize.__version__}"
    if not found:
        typer.echo(f"Nothing differs ({made}).")
        return
    typer.echo(f"{len(found)} difference{'s' if len(found) > 1 else ''} ({made}):")
    for line in found[:_MOST_LISTED]:
        typer.echo(f"  {line}")
    if len(found) > _MOST_LISTED:
        typer.echo(f"  and {len(found) - _MOST_LISTED} more")
    raise typer.Exit(1)
