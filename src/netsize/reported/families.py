"""Fourth stage: one group of items becomes the fields of one reported result, a function a family.

Each takes the group with its settings and returns the fields of `ReportedResult`, or raises `Fault`
with what is missing and how to write it.
"""

from __future__ import annotations

from collections.abc import Callable

from netsize.reported import family_estimates, family_tests
from netsize.reported.family_parts import Context, Fields
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group

__all__ = ["family_fields"]

_BY_PRIMARY: dict[str, Callable[[Context], Fields]] = {
    "t": family_tests.from_t,
    "F": family_tests.from_f,
    "r": family_tests.from_r,
    "z": family_tests.from_z,
    "chi": family_tests.from_chi,
    "wald": family_tests.from_wald,
    "rank": family_tests.from_rank,
    "odds": family_estimates.from_odds,
    "ratio": family_estimates.from_ratio,
    "slope": family_estimates.from_slope,
    "pair": family_estimates.from_counts,
    "estimate": family_estimates.from_estimate,
}
# where no test stands, the first of these names the family
_BY_FOLLOWER: tuple[tuple[str, Callable[[Context], Fields | None]], ...] = (
    ("mean", family_estimates.from_means),
    ("smd", family_estimates.from_smd),
    ("eta", family_estimates.from_share),
    ("r2", family_estimates.from_share),
    ("p", family_tests.from_p),
    ("plural", family_estimates.from_several),
    ("plusminus", family_estimates.from_plus_minus),
)


def family_fields(context: Context) -> Fields | None:
    """Fields of the result, or None where the group holds no statistic at all."""
    group = context.group
    if group.primary is not None:
        _require_value(group)
        return _BY_PRIMARY[group.primary.kind](context)
    for kind, build in _BY_FOLLOWER:
        if group.first(kind):
            return build(context)
    return None


def _require_value(group: Group) -> None:
    """A test without its value still says something where its p is printed."""
    item = group.primary
    if item is None or item.number is not None or item.counts:
        return
    if item.kind not in ("t", "F", "r", "z", "chi") or group.first("p") is None:
        raise Fault(f"no value stands after it; write {item.name}(...) = value")
    item.notes = (*item.notes, "no value is printed: read through its p")
