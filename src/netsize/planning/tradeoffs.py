"""Sizes around the answer: other powers and assurances, precision, and what a budget can do."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from netsize.planning.curves import overall_chance, with_goal
from netsize.planning.goals import Sized, power_at, size_for, units_within
from netsize.planning.plan import Plan
from netsize.planning.study import METRIC_OF, effect_on
from netsize.sizing.precision import expected_half_width, has_interval
from netsize.sizing.search import detectable_effect

__all__ = ["Affordable", "Narrow", "Target", "affordable", "narrow", "targets"]

_POWERS = (0.8, 0.9, 0.95)
_ASSURANCES = (0.5, 0.8, 0.9)
_WIDTHS = {"r": (0.15, 0.1, 0.05)}  # half-widths; on mean differences twice that


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """The size for one power at one assurance; `effect` is what it plans for."""

    power: float
    assurance: float
    effect: float
    sized: Sized

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        finite = self.effect if np.isfinite(self.effect) else None
        return {
            "power": self.power,
            "assurance": self.assurance,
            "effect": finite,
            **self.sized.to_dict(),
        }


@dataclass(frozen=True, slots=True, kw_only=True)
class Narrow:
    """The size whose interval has the expected `half_width` at the planning value."""

    half_width: float
    sized: Sized

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {"half_width": self.half_width, **self.sized.to_dict()}


@dataclass(frozen=True, slots=True, kw_only=True)
class Affordable:
    """What a study of a given size can do.

    power_at_value, power_at_median : nan-free; None where the effect is not finite. chance : of a
    significant result as predicted over the planning distribution. detectable : smallest effect
    found with the power wanted. half_width : expected, at the planning value. cost : None without
    a price a participant.
    """

    what: str
    n_total: int
    power_at_value: float | None
    power_at_median: float | None
    chance: float
    detectable: float | None
    half_width: float | None
    cost: float | None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {f: getattr(self, f) for f in self.__dataclass_fields__}


def targets(plan: Plan) -> tuple[Target, ...]:
    """n for power .80, .90, .95 at assurance .50, .80, .90, and the plan's own pair."""
    answer, settings = plan.answer, plan.settings
    powers = sorted({*_POWERS, settings.power})
    assurances = sorted({*_ASSURANCES, settings.assurance})
    quantiles = answer.distribution.quantile(1 - np.array(assurances))
    effects = np.maximum(quantiles, settings.smallest_effect or -np.inf)
    out = []
    for power in powers:
        goal = with_goal(settings, goal="power", power=power)
        inward = effect_on(plan.study, plan.metric, np.where(np.isfinite(effects), effects, 0.0))
        sized = size_for(plan.study, goal, inward)
        out += [
            Target(power=power, assurance=a, effect=float(e), sized=s)
            for a, e, s in zip(assurances, effects, sized, strict=True)
        ]
    return tuple(out)


def narrow(plan: Plan) -> tuple[Narrow, ...]:
    """n for some half-widths of the interval; () where the design's effect has none."""
    if not _measurable(plan):
        return ()
    scale = METRIC_OF[plan.study.design.name][1]
    widths = _WIDTHS.get(scale, tuple(2 * w for w in _WIDTHS["r"]))
    if plan.settings.half_width is not None:
        widths = tuple(sorted({*widths, plan.settings.half_width}, reverse=True))
    at = effect_on(plan.study, plan.metric, np.array([plan.answer.value]))
    return tuple(
        Narrow(
            half_width=w,
            sized=size_for(
                plan.study,
                with_goal(
                    plan.settings, goal="precision", half_width=w, assured=plan.settings.assured
                ),
                at,
            )[0],
        )
        for w in widths
    )


def affordable(plan: Plan) -> tuple[Affordable, ...]:
    """What the planned size can do, beside half and double of it and earlier habits."""
    study, answer, settings = plan.study, plan.answer, plan.settings
    naive = plan.row("as-printed").sized.units
    base, what = answer.sized.units, "planned n"
    if not answer.finite and answer.alternatives:
        smallest = min(answer.alternatives, key=lambda a: a.sized.units)
        base, what = smallest.sized.units, f"n at {smallest.what}"
    largest = units_within(study, max(row.n for row in plan.literature.rows))
    candidates = [
        ("as-printed n", 0 if settings.goal == "budget" else naive),
        ("n of the largest earlier study", largest),
        (f"half the {what}", base // 2),
        (what, base),
        (f"twice the {what}", 2 * base),
    ]
    seen: dict[int, str] = {}
    for name, size in candidates:
        if size >= study.first:
            seen.setdefault(size, name)
    if not seen:
        return ()
    units = np.array(sorted(seen), dtype=float)
    values = np.array([answer.value, answer.median])
    inward = effect_on(study, plan.metric, np.where(np.isfinite(values), values, np.nan))
    powers = power_at(study, units[:, None], inward)
    chances = overall_chance(plan, units)
    scale = study.metric(METRIC_OF[study.design.name][1])
    detectable = scale.outward(detectable_effect(study, units, settings.power))
    widths = np.full(units.shape, np.nan)
    if _measurable(plan):
        widths = expected_half_width(study, units, np.full(units.shape, inward[0]), settings.level)
    recruited = study.recruited(units).sum(axis=0)
    totals = study.groups(units).sum(axis=0)
    price = settings.cost_per
    return tuple(
        Affordable(
            what=seen[int(u)],
            n_total=int(totals[i]),
            power_at_value=_known(powers[i, 0]),
            power_at_median=_known(powers[i, 1]),
            chance=float(chances[i]),
            detectable=_known(detectable[i]),
            half_width=_known(widths[i]),
            cost=None if price is None else float(settings.fixed_cost + price * recruited[i]),
        )
        for i, u in enumerate(units)
    )


def _measurable(plan: Plan) -> bool:
    return has_interval(plan.study) and bool(np.isfinite(plan.answer.value))


def _known(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None
