"""Where a command's statistics come from: a file, a pipe, or what is pasted."""

from __future__ import annotations

import os
import sys
from typing import TYPE_CHECKING

import typer

from netsize.errors import ReadingError

if TYPE_CHECKING:
    from netsize.reported import Reading

__all__ = ["load", "usable"]


def load(source: str | None) -> Reading:
    """Read a path, `-` for what is piped in, or None: ask to paste on a terminal, else the pipe."""
    from netsize.reported import read
    from netsize.reported.files import read_file

    if source is not None and source != "-":
        return read_file(source)
    if sys.stdin.isatty():
        key = "Ctrl-Z and Enter" if os.name == "nt" else "Ctrl-D"
        typer.echo(
            f"Paste statistics, such as: Study 1: t(38) = 2.31\nEnd with {key} on an empty line.",
            err=True,
        )
    return read(_standard_input())


def usable(reading: Reading, *, skip_unread: bool) -> Reading:
    """`reading` itself, unless places in it could not be read and they are not to be skipped."""
    from netsize.reported.unread import refuse_unread

    if not skip_unread:
        refuse_unread(reading)
    if not reading.results:
        raise ReadingError("no result could be read", reading.unread)
    return reading


def _standard_input() -> str:
    from netsize.reported.files import LARGEST_FILE, decode

    buffer = getattr(sys.stdin, "buffer", None)
    if buffer is None:  # a stand-in for stdin that holds text only
        return sys.stdin.read()
    content = buffer.read(LARGEST_FILE + 1)
    if len(content) > LARGEST_FILE:
        raise ReadingError(f"the input is too large; at most {LARGEST_FILE // 2**20} MB are read")
    return decode(content, "the input")
