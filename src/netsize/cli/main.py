"""The `netsize` command: its subcommands, and the one place where errors become exit codes.

Exit codes: 0 done; 2 wrong usage (no such command or option); 3 input that cannot be used, a bad
option value included; 130 interrupted. Heavy libraries load inside the commands that need them.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from typing import Annotated

import typer

import netsize
from netsize.cli.effects import effects
from netsize.cli.plan import plan
from netsize.cli.read import read
from netsize.cli.report import report
from netsize.cli.solve import solve
from netsize.cli.sources import sources
from netsize.cli.weigh import weigh
from netsize.errors import NetsizeError

__all__ = ["app", "main", "run"]

app = typer.Typer(
    name="netsize",
    help="How many participants, net of publication bias: from pasted statistics to n.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)


def _version(wanted: bool) -> None:
    if wanted:
        typer.echo(f"netsize {netsize.__version__}")
        raise typer.Exit


@app.callback()
def _options(
    version: Annotated[
        bool,
        typer.Option(
            "--version", help="Print the version and stop.", callback=_version, is_eager=True
        ),
    ] = False,
) -> None:
    """How many participants, net of publication bias: from pasted statistics to n."""


for command in (read, effects, weigh, plan, report, solve, sources):
    app.command()(command)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command line and return its exit code; messages about faults go to stderr."""
    try:
        outcome = app(args=arguments, standalone_mode=False)
    except NetsizeError as error:
        typer.echo(f"netsize: {error}", err=True)
        return 3
    except typer.BadParameter as error:
        error.show()
        return 3
    except (KeyboardInterrupt, typer.Abort):
        typer.echo("netsize: interrupted", err=True)
        return 130
    except BrokenPipeError:
        # the reader of a pipe went away, which is its right; keep the interpreter's own flush quiet
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except typer.TyperException as error:
        show = getattr(error, "show", None)
        show() if show else typer.echo(f"netsize: {error}", err=True)
        return getattr(error, "exit_code", 2)
    return outcome if isinstance(outcome, int) else 0


def run() -> None:
    """Entry point of the installed command."""
    sys.exit(main())


if __name__ == "__main__":
    run()
