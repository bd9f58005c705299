"""Means, SDs and sizes of two groups, where all of them are printed; what two groups imply."""

from __future__ import annotations

import math
from collections.abc import Sequence

from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.records import Counts
from netsize.reported.records import Group as GroupSummary

__all__ = ["complete_means", "counts_chi_squares", "counts_ratio", "is_negative", "means_t"]

_SIGNED = frozenset(("t", "r", "z", "smd", "coefficient", "estimate"))


def is_negative(
    family: str,
    value: float | None,
    groups: Sequence[GroupSummary] = (),
    counts: Sequence[Counts] = (),
) -> bool:
    """Whether the effect is printed with a minus sign, a ratio below 1 or a first group below the
    second; F, chi-square and shares of variance have no sign.
    """
    if family == "means":
        return groups[0].mean < groups[1].mean
    if family == "counts":
        return counts[0].events * counts[1].n < counts[1].events * counts[0].n
    if value is None:
        return False
    return value < 1 if family == "odds-ratio" else family in _SIGNED and value < 0


def complete_means(group: Group) -> tuple[GroupSummary, ...]:
    means, sds = group.every("mean"), group.every("sd")
    if not means:
        return ()
    sizes = _describing_sizes(group)
    if len(means) != 2 or len(sds) != 2 or len(sizes) != 2:
        return ()
    summaries = []
    for mean, sd, n in zip(means, sds, sizes, strict=True):
        if mean.number is None or sd.number is None:
            return ()
        if sd.number.value <= 0:
            raise Fault("a standard deviation is above 0", sd.start, sd.end)
        summaries.append(GroupSummary(mean.number.value, sd.number.value, n))
    return tuple(summaries)


def _describing_sizes(group: Group) -> tuple[int, ...]:
    """Sizes of the groups whose means are printed, one each."""
    sizes = [i for i in group.every("size") if "capital" not in i.flags]
    if len(sizes) == 1:
        only = sizes[0]
        if len(only.sizes) == 2:
            return only.sizes
        return only.sizes * 2 if "each" in only.flags else ()
    return tuple(n for i in sizes for n in i.sizes)


def means_t(a: GroupSummary, b: GroupSummary) -> tuple[float, float]:
    """Size of t of two independent groups: with the pooled variance, and Welch's."""
    difference = abs(a.mean - b.mean)
    pooled = ((a.n - 1) * a.sd**2 + (b.n - 1) * b.sd**2) / max(a.n + b.n - 2, 1)
    welch = a.sd**2 / a.n + b.sd**2 / b.n
    return difference / math.sqrt(pooled * (1 / a.n + 1 / b.n)), difference / math.sqrt(welch)


def counts_ratio(name: str, a: Counts, b: Counts) -> float | None:
    """Odds ratio ("OR") or risk ratio ("RR") of two groups; None for other names, empty cells."""
    if not 0 < a.events < a.n or not 0 < b.events < b.n:
        return None
    risks = (a.events / a.n) / (b.events / b.n)
    if name == "RR":
        return risks
    return risks * (b.n - b.events) / b.n / ((a.n - a.events) / a.n) if name == "OR" else None


def counts_chi_squares(a: Counts, b: Counts) -> tuple[float, ...]:
    """Chi-square of a 2×2 table: Pearson's, then Yates's; () with an empty margin."""
    events, total = a.events + b.events, a.n + b.n
    margins = events * (total - events) * a.n * b.n
    if margins == 0:
        return ()
    across = abs(a.events * (b.n - b.events) - b.events * (a.n - a.events))
    return tuple(
        total * max(across - less, 0.0) ** 2 / margins for less in (0.0, min(total / 2, across))
    )
