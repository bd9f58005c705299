"""Cells for files that a spreadsheet may open."""

from __future__ import annotations

__all__ = ["harmless"]

_FORMULA_STARTERS = ("=", "+", "-", "@", "\t", "\r")


def harmless(cell: str) -> str:
    """Text that a spreadsheet would run as a formula, preceded by a quote; other text as it is."""
    return f"'{cell}" if cell.startswith(_FORMULA_STARTERS) else cell
