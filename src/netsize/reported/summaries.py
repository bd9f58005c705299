"""Means, SDs and sizes of two groups, where all of them are printed."""

from __future__ import annotations

from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.records import Group as GroupSummary

__all__ = ["complete_means"]


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
