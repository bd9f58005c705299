"""The size of the new study for a goal, at one or many effects."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, broadcast
from netsize.numerics.search import smallest_integer
from netsize.planning.settings import PlanSettings
from netsize.sizing.precision import units_for_half_width
from netsize.sizing.search import smallest_units
from netsize.sizing.study import Study

__all__ = ["Sized", "as_sized", "power_at", "size_for", "units_within"]

_UNBOUNDED = 10**13  # units that no budget of a plan pays for


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
    """The smallest study for the goal at each effect (E,), on the design's own scale.

    For power, effects at or below zero have no finite size: a larger study only becomes surer of
    the wrong direction. For precision any finite effect has one. A budget buys the same size
    whatever the effect.
    """
    effect = np.asarray(effect, dtype=float)
    if settings.goal == "budget":
        return [as_sized(study, _affordable(study, settings))] * effect.size
    usable = np.isfinite(effect)
    if settings.goal == "precision":
        assurance = settings.assurance if settings.assured else None
        found, finite = units_for_half_width(
            study, effect[usable], _half_width(settings), settings.level, assurance
        )
    else:
        usable &= effect > 0
        found, finite = smallest_units(study, effect[usable], settings.power)
    units = np.zeros(effect.shape, dtype=np.int64)
    units[usable] = np.where(finite, found, 0)
    return [as_sized(study, int(u)) for u in units]


def _half_width(settings: PlanSettings) -> float:
    if settings.half_width is None:
        raise SettingError("--half-width", "the goal precision needs the half-width wanted")
    return settings.half_width


def _affordable(study: Study, settings: PlanSettings) -> int:
    if settings.at_most is None:
        raise SettingError("--at-most", "the goal budget needs the most that can be spent")
    participants = settings.at_most
    if settings.cost_per is not None:
        participants = (settings.at_most - settings.fixed_cost) / settings.cost_per
    units = units_within(study, participants, recruited=True)
    if units == 0:
        raise SettingError(
            "--at-most",
            f"{settings.at_most:g} pays for fewer participants than the smallest study of this "
            "design has",
        )
    return units


def as_sized(study: Study, units: int) -> Sized:
    """The size record of a number of units."""
    if units == 0:
        return Sized(units=0, n_per_group=None, n_total=None, recruited=None)
    groups = tuple(int(g) for g in study.groups(np.array(float(units))))
    recruited = int(study.recruited(np.array(float(units))).sum())
    return Sized(units=units, n_per_group=groups, n_total=sum(groups), recruited=recruited)


def units_within(study: Study, total: float, *, recruited: bool = False) -> int:
    """The most units whose groups together stay within `total` participants; 0 if none fit.

    Participants analysed, or with `recruited` those to recruit for them.
    """
    count = study.recruited if recruited else study.groups

    beyond, _ = smallest_integer(
        lambda units, most: np.asarray(count(units).sum(axis=0) > most),
        np.asarray(float(total)),
        first=study.first,
        last=_UNBOUNDED,
    )
    fit = int(beyond) - 1
    return fit if fit >= study.first else 0


def power_at(study: Study, units: ArrayLike, effect: Array) -> Array:
    """Power of a study of `units` at effects on the design's scale, broadcast; nan passes through.

    Both tails count for an effect in the predicted direction; against it, only a significant
    result in the predicted direction would be called a success.
    """
    units, effect = broadcast(units, effect)
    known = np.isfinite(units) & np.isfinite(effect)
    out = np.full(units.shape, np.nan)
    u, e = units[known], effect[known]
    out[known] = np.where(e > 0, study.power(u, e), study.predicted(u, e))
    return out
