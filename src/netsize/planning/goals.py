"""The size of the new study for a goal, at one or many effects."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array
from netsize.planning.settings import PlanSettings
from netsize.sizing.powering import smallest_units
from netsize.sizing.study import Study

__all__ = ["Sized", "as_sized", "power_at", "size_for", "units_within"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Sized:
    """One size: `units` of the design's smaller group, 0 where no finite size serves.

    n_per_group, n_total : participants analysed; recruited : to recruit for them. None where not
    finite.
    """

    units: int
    n_per_group: tuple[int, ...] | None
    n_total: int | None
    recruited: int | None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {
            "n_per_group": list(self.n_per_group) if self.n_per_group else None,
            "n_total": self.n_total,
            "n_recruited": self.recruited,
        }


def size_for(study: Study, settings: PlanSettings, effect: ArrayLike) -> list[Sized]:
    """The smallest study for the power wanted at each effect (E,), on the design's own scale.

    Effects at or below zero, nan included, have no finite size: a larger study only becomes surer
    of the wrong direction.
    """
    effect = np.asarray(effect, dtype=float)
    positive = np.isfinite(effect) & (effect > 0)
    units = np.zeros(effect.shape, dtype=np.int64)
    found, finite = smallest_units(study, effect[positive], settings.power)
    units[positive] = np.where(finite, found, 0)
    return [as_sized(study, int(u)) for u in units]


def as_sized(study: Study, units: int) -> Sized:
    """The size record of a number of units."""
    if units == 0:
        return Sized(units=0, n_per_group=None, n_total=None, recruited=None)
    groups = tuple(int(g) for g in study.groups(np.array(float(units))))
    recruited = int(study.recruited(np.array(float(units))).sum())
    return Sized(units=units, n_per_group=groups, n_total=sum(groups), recruited=recruited)


def units_within(study: Study, total: float) -> int:
    """The most units whose groups together stay within `total` participants; 0 if none fit."""

    def within(units: int) -> bool:
        return float(study.groups(np.array(float(units))).sum()) <= total

    if not within(study.first):
        return 0
    high = study.first
    while within(high * 2):
        high *= 2
    low, high = high, high * 2
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (middle, high) if within(middle) else (low, middle)
    return low


def power_at(study: Study, units: int, effect: Array) -> Array:
    """Power of a study of `units` at effects on the design's scale.

    Both tails count for an effect in the predicted direction; against it, only a significant
    result in the predicted direction would be called a success.
    """
    effect = np.asarray(effect, dtype=float)
    return np.asarray(
        np.where(effect > 0, study.power(units, effect), study.predicted(units, effect))
    )
