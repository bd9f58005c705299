"""Table cells as text, by the kind of their column."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from netsize.presentation import format as fmt
from netsize.presentation.report.content import Cell, Kind

__all__ = ["NUMERIC", "text_of"]

NUMERIC: frozenset[Kind] = frozenset(
    {
        "effect", "interval", "count", "counts", "probability", "percent", "p", "factor", "number",
        "money",
    }
)  # fmt: skip

_TEXTS: dict[Kind, Callable[[Any], str]] = {
    "text": str,
    "effect": fmt.effect,
    "interval": lambda pair: fmt.interval(*pair),
    "count": fmt.count,
    "counts": fmt.counts,
    "probability": fmt.probability,
    "percent": fmt.percent,
    "p": fmt.p_value,
    "factor": fmt.factor,
    "number": fmt.number,
    "money": lambda value: fmt.number(value, 0),
}


def text_of(kind: Kind, cell: Cell) -> str:
    """The cell as people read it; a missing one as "-", a text in its place as it is."""
    if cell is None:
        return fmt.MISSING
    if isinstance(cell, str):
        return cell
    return _TEXTS[kind](cell)
