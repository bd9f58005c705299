"""Group sizes and degrees of freedom, from what was printed and what has to be assumed."""

from __future__ import annotations

import math
from typing import Literal, TypeAlias

from netsize.effect_sizes.forms.base import equal_groups
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["Comparison", "comparison", "degrees", "total", "two_groups"]

Comparison: TypeAlias = Literal["two-groups", "paired", "one-sample", "correlation"]


def total(result: ReportedResult) -> int:
    """All participants as printed; EvidenceError where no n is given or one is below 1."""
    if not result.n:
        raise EvidenceError("the number of participants is missing; give it as [n 40]")
    if min(result.n) < 1:
        raise EvidenceError(f"group sizes must be at least 1, and {min(result.n)} is given")
    return sum(result.n)


def degrees(result: ReportedResult, position: int = -1) -> float:
    """Degrees of freedom printed at `position`, positive and finite."""
    df = result.df[position]
    if not (math.isfinite(df) and df > 0):
        raise EvidenceError(f"{df:g} degrees of freedom are not possible; expected more than 0")
    return df


def comparison(result: ReportedResult, df: float | None) -> tuple[Comparison, tuple[str, ...]]:
    """What a test on `df` error degrees of freedom compares, and what that takes for granted."""
    if result.design in ("two-groups", "paired", "one-sample", "correlation"):
        return result.design, ()
    if result.design == "factorial":
        return "two-groups", ("two halves of the design compared",)
    if len(result.n) == 2:
        return "two-groups", ()
    if len(result.n) == 1 and df is not None and result.n[0] == df + 1:
        return "paired", ("paired or one-sample, because n is df + 1",)
    return "two-groups", ("independent groups assumed; [paired] or [one-sample] if not",)


def two_groups(result: ReportedResult, df: float | None) -> tuple[tuple[int, int], tuple[str, ...]]:
    """Sizes of the two groups behind a test on `df` error degrees of freedom (None: n - 2)."""
    if not result.n:
        if df is None:
            total(result)  # raises
        if df != round(df or 0):
            raise EvidenceError(
                f"df {df:g} (Welch) does not tell the group sizes; give them as [n 18, 22]"
            )
        first, second = equal_groups(round(df or 0) + 2)
        return (first, second), (_assumed((first, second), f"df {df:g}"),)
    everyone = total(result)
    if everyone < 3 or (df is not None and df > everyone - 2 + 1e-9):
        needed = "3" if df is None else f"{math.ceil(df) + 2}"
        raise EvidenceError(
            f"two groups need at least {needed} participants"
            + ("" if df is None else f" for df {df:g}")
            + f", and n is {everyone}"
        )
    if len(result.n) == 2:
        return (result.n[0], result.n[1]), ()
    sizes = equal_groups(everyone)
    return sizes, (_assumed(sizes, f"n {everyone}"),)


def _assumed(sizes: tuple[int, int], source: str) -> str:
    text = f"{sizes[0]}" if sizes[0] == sizes[1] else f"{sizes[0]} and {sizes[1]}"
    return f"equal groups of {text} assumed from {source}; give [n 18, 22] if they differ"
