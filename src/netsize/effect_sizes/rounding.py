"""Which p-band a rounded statistic lies in, where rounding leaves two and the printed p decides."""

from __future__ import annotations

import math
from collections.abc import Sequence

from netsize.reported.records import ReportedResult

__all__ = ["band_from_printed_p"]

_ROOTS = ("f", "chi2")  # families whose directed statistic is the root of the printed one


def band_from_printed_p(
    result: ReportedResult, size: float, levels: Sequence[float], cuts: Sequence[float]
) -> int | None:
    """The band that the printed p names, if a statistic of `size` may round from it; else None.

    t(38) = 2.02, p < .05: the critical value is 2.024, so 2.02 alone would not be significant, and
    the paper's own p says that it was. `levels` and `cuts` part the bands in the predicted
    direction.
    """
    if result.p is None or result.decimals is None or result.value is None:
        return None
    if result.family not in ("t", "f", "r", "z", "chi2") or result.relation != "=":
        return None
    half = 0.5 * 10.0**-result.decimals
    printed = abs(result.value)
    ends = (max(printed - half, 0.0), printed + half)
    if result.family in _ROOTS and not math.isclose(size, printed):
        ends = (math.sqrt(ends[0]), math.sqrt(ends[1]))
    named = _band_of_p(result.p.relation, result.p.value, levels)
    first, last = (sum(end <= cut for cut in cuts) for end in reversed(ends))
    return named if named is not None and first <= named <= last else None


def _band_of_p(relation: str, p: float, levels: Sequence[float]) -> int | None:
    """Band of a printed p, None where p at a level leaves it open."""
    if relation == "=" and p in levels:
        return None
    if relation == ">":
        return len(levels) if p >= levels[-1] else None
    return sum(p > level for level in levels)
