"""A sign of life on a terminal when a command takes longer than two seconds."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager
from threading import Timer

__all__ = ["waiting"]

_PATIENCE = 2.0  # seconds


@contextmanager
def waiting(what: str) -> Iterator[None]:
    """Show a turning sign and `what` on stderr from the third second on; nothing in a pipe."""
    if not sys.stderr.isatty():
        yield
        return
    from rich.console import Console

    status = Console(stderr=True).status(f"{what} ...")
    timer = Timer(_PATIENCE, status.start)
    timer.daemon = True
    timer.start()
    try:
        yield
    finally:
        timer.cancel()
        status.stop()
