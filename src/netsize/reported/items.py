"""What the scanner hands to the grouping stage: one symbol with its number, in its place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from netsize.reported.records import Counts, Interval, Printed

__all__ = ["NOT_SIGNIFICANT", "PRIMARY", "Item"]

# Kinds that make a result of their own; the rest describe the test beside which they stand.
PRIMARY = frozenset(
    ("t", "F", "r", "z", "chi", "wald", "rank", "odds", "ratio", "pair", "slope", "estimate")
)

NOT_SIGNIFICANT = "n.s."  # the name of a p that is printed in words


@dataclass(slots=True)
class Item:
    """One piece of a statistic.

    `kind` is the pattern that found it, `name` the symbol in one spelling. `arguments` are the
    numbers in its brackets (degrees of freedom), `sizes` numbers of participants. `start`, `end`
    cut the normalised text. `fault` says why it cannot be used, `marked` which part of it is at
    fault, `harmless` that it would be no result anyway.
    """

    kind: str
    name: str
    start: int
    end: int
    number: Printed | None = None
    arguments: tuple[float, ...] = ()
    sizes: tuple[int, ...] = ()
    flags: frozenset[str] = frozenset()
    interval: Interval | None = None
    counts: tuple[Counts, ...] = ()
    settings: dict[str, Any] | None = None  # of a settings bracket
    notes: tuple[str, ...] = ()
    fault: str | None = None
    marked: tuple[int, int] | None = None
    harmless: bool = False
