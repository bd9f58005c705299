"""`solve`: the size of a study for a goal, or what a study of a given size can do."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray, IntArray, broadcast
from netsize.numerics.grid import GridDistribution
from netsize.numerics.search import smallest_integer
from netsize.sizing.checks import between, numbers, option, whole
from netsize.sizing.designs import Design, EffectMetric
from netsize.sizing.distributions import (
    chance_of_power,
    expected_power,
    expected_power_ceiling,
    on_own_scale,
    units_for_expected_power,
)
from netsize.sizing.precision import (
    assured_half_width,
    expected_half_width,
    units_for_half_width,
)
from netsize.sizing.records import Cost, Goal, Sizing
from netsize.sizing.search import smallest_units, units_and_power
from netsize.sizing.study import LARGEST, Study, make_study

__all__ = ["own_effects", "solve", "units_of"]

_USUAL_POWER = 0.8


def solve(
    design: Study | Design | str,
    *,
    effect: ArrayLike | GridDistribution,
    power: float | None = None,
    expected_power: float | None = None,
    half_width: float | None = None,
    assurance: float | None = None,
    n: ArrayLike | None = None,
    at_most: ArrayLike | None = None,
    cost_per: float | None = None,
    fixed_cost: float = 0.0,
    level: float = 0.95,
    metric: str | None = None,
    **settings: Any,
) -> Sizing:
    """The smallest study that reaches a goal, for every effect of an array together.

    Parameters
    ----------
    design : name of a design ("two-groups", "anova", ...), a design record or a `Study`.
    effect : true effects on `metric`, any shape; or a distribution of them.
    power : wanted power in (0, 1); 0.80 where no goal is named. With `assurance` and a distribution
        of effects: the size whose power is reached with that probability.
    expected_power : wanted mean over a distribution of effects of the probability of a significant
        result in the predicted direction.
    half_width : wanted half-width of the interval at confidence `level`, on the design's own scale:
        the expected one, or with `assurance` the one not exceeded with that probability.
    n : the study has n participants in the smaller group (cell, sample), recruited.
        at_most : it recruits no more than this many in all; with `cost_per`, it costs no more than
        this much. `power` is then that of the smallest detectable effect. Broadcast with the
        effects.
    cost_per, fixed_cost : price of a participant recruited, and of the study.
    metric : scale of the effects, the design's own where left out.
    settings : options of the design (`ratio`, `groups`, ...) and modifiers (`alpha`, `sides`,
        `tests`, `loss`, `cluster_size`, `cluster_correlation`, `covariate_r2`, `covariates`).

    Returns
    -------
    Sizing. Sizes are the smallest whose exact power (half-width) meets the target: one unit fewer
    in the smaller group does not. Where no size does, `finite` is False.

    Raises
    ------
    SettingError naming the option that is missing, contradictory or out of range.
    """
    study = make_study(design, **settings)
    between("level", level, 0, 1)
    if assurance is not None:
        between("assurance", assurance, 0, 1)
    case = _Case(study, study.metric(metric), _cost(cost_per, fixed_cost), level)
    _one_of(expected_power=expected_power, half_width=half_width, n=n, at_most=at_most)
    if n is not None or at_most is not None:
        _unused("assurance", assurance, "it belongs to a power or half-width to be reached")
        units = units_of(study, n=n, at_most=at_most, cost=case.cost)
        return _given(case, effect, units, _power(power))
    if expected_power is not None:
        _unused("power", power, "name either --power or --expected-power")
        _unused("assurance", assurance, "expected power is an average and takes none")
        return _for_expected_power(case, effect, expected_power)
    if half_width is not None:
        _unused("power", power, "name either --power or --half-width")
        return _for_half_width(case, effect, half_width, assurance)
    if isinstance(effect, GridDistribution) or assurance is not None:
        return _for_assurance(case, effect, _power(power), assurance)
    return _for_power(case, effect, _power(power))


def own_effects(study: Study, effect: object, scale: EffectMetric) -> Array:
    """Effects checked against the range of their metric, on the design's own scale."""
    if isinstance(effect, GridDistribution):
        raise SettingError("--effect", "a distribution of effects needs an assurance")
    values = numbers("effect", effect)  # type: ignore[arg-type]
    inside = (values < scale.high) & ((values > scale.low) | ((values == 0) & (scale.low == 0)))
    if not inside.all():
        bad = float(values[~inside].flat[0])
        start = "from" if scale.low == 0 else "above"
        end = "" if np.isinf(scale.high) else f" to below {scale.high:g}"
        raise SettingError(
            "--effect", f"{bad:g} is no {scale.title}; expected {start} {scale.low:g}{end}"
        )
    return np.asarray(scale.inward(values), dtype=float)


def units_of(
    study: Study,
    *,
    n: ArrayLike | None = None,
    at_most: ArrayLike | None = None,
    cost: Cost | None = None,
) -> Array:
    """The units of a study given by participants in its smaller group, in all, or by its cost."""
    m = study.modifiers
    if n is not None:
        given = whole("n", n, 1, LARGEST // len(study.design.sizes(np.asarray(1.0))))
        if m.cluster_size > 1:
            units = given // np.ceil(m.cluster_size / (1 - m.loss) - 1e-9)
        else:
            units = (given * (1 - m.loss) + 1e-9) // 1
        _enough(study, units, "--n", "in the smaller group")
        return np.asarray(units)
    limit = between("at_most", 0 if at_most is None else at_most, 0, np.inf)
    if cost is not None and cost.each > 0:
        limit = (limit - cost.fixed) / cost.each
    total = np.clip(np.floor(limit + 1e-9), 0, LARGEST)

    def exceeds(units: Array, total: Array) -> BoolArray:
        return np.asarray(study.recruited(units.astype(float)).sum(axis=0) > total)

    beyond, _ = smallest_integer(exceeds, total, first=1, last=2 * LARGEST, guess=total)
    units = beyond.astype(float) - 1
    _enough(study, units, "--at-most", "in the smaller group")
    return units


def _enough(study: Study, units: Array, setting: str, where: str) -> None:
    if np.any(units < study.first):
        least = study.recruited(np.asarray(float(study.first)))
        raise SettingError(
            setting,
            f"too few for a test: the design {study.design.name} needs at least "
            f"{int(least.min())} {where} and {int(least.sum())} in all",
        )


@dataclass(frozen=True, slots=True)
class _Case:
    """What all goals of one call share."""

    study: Study
    scale: EffectMetric
    cost: Cost
    level: float

    def sizing(
        self,
        goal: Goal,
        *,
        effect: Array,
        own: Array,
        units: IntArray,
        finite: BoolArray,
        power: Array | None = None,
        reached: Array | None = None,
        ceiling: float = float("nan"),
    ) -> Sizing:
        """The answer once its units are known; 0 participants where there is no finite size.

        `power` is computed where left out; `reached` is the goal's own quantity, else the power.
        """
        study, each = self.study, self.cost.each
        sized = np.maximum(units, study.first)
        groups = np.moveaxis(np.where(finite, study.groups(sized), 0), 0, -1).astype(np.int64)
        recruited = np.moveaxis(np.where(finite, study.recruited(sized), 0), 0, -1)
        recruited = recruited.astype(np.int64)
        total = np.asarray(recruited.sum(axis=-1))
        if power is None:
            power = _where(finite, study.power(sized, np.where(finite, own, 0.0)))
        price = np.where(finite & (each > 0), self.cost.fixed + each * total, np.nan)
        return Sizing(
            study=study,
            goal=goal,
            metric=self.scale,
            effect=effect,
            own_effect=own,
            n_per_group=groups,
            n_total=np.asarray(groups.sum(axis=-1)),
            recruited_per_group=recruited,
            recruited_total=total,
            power=power,
            reached=power if reached is None else _where(finite, reached),
            finite=finite,
            ceiling=ceiling,
            cost=price,
        )


def _given(case: _Case, effect: object, units: Array, target: float) -> Sizing:
    own = own_effects(case.study, effect, case.scale)
    shown, own, units = broadcast(effect, own, units)  # type: ignore[arg-type]
    return case.sizing(
        Goal(kind="given", target=target, level=case.level),
        effect=shown,
        own=own,
        units=units.astype(np.int64),
        finite=np.ones(own.shape, dtype=bool),
    )


def _for_power(case: _Case, effect: object, target: float) -> Sizing:
    own = own_effects(case.study, effect, case.scale)
    units, finite, power = units_and_power(case.study, own, target)
    return case.sizing(
        Goal(kind="power", target=target, level=case.level),
        effect=np.asarray(effect, dtype=float),
        own=own,
        units=units,
        finite=finite,
        power=power,
    )


def _for_assurance(case: _Case, effect: object, target: float, assurance: float | None) -> Sizing:
    if not isinstance(effect, GridDistribution):
        raise SettingError("--assurance", "needs a distribution of effects, not single values")
    if assurance is None:
        raise SettingError("--assurance", "needed with a distribution of effects")
    study = case.study
    if np.isnan(study.design.null):
        raise SettingError(
            "--assurance", "equivalence has no single effect to plan for; use --expected-power"
        )
    distribution = on_own_scale(study, effect, case.scale.name)
    own = distribution.quantile(1 - assurance)
    if own > study.design.null:  # a quantile of -inf fails this too
        units, finite = smallest_units(study, own, target)
    else:
        units, finite = np.zeros((), dtype=np.int64), np.zeros((), dtype=bool)
    return case.sizing(
        Goal(kind="assurance", target=target, assurance=assurance, level=case.level),
        effect=case.scale.outward(own),
        own=own,
        units=units,
        finite=finite,
        reached=chance_of_power(study, np.maximum(units, study.first), distribution, target),
        ceiling=1.0 - float(distribution.cdf(study.design.null)),
    )


def _for_expected_power(case: _Case, effect: object, target: float) -> Sizing:
    if not isinstance(effect, GridDistribution):
        raise SettingError("--expected-power", "needs a distribution of effects")
    between("expected_power", target, 0, 1)
    distribution = on_own_scale(case.study, effect, case.scale.name)
    units, finite = units_for_expected_power(case.study, distribution, target)
    own = distribution.quantile(0.5)
    return case.sizing(
        Goal(kind="expected-power", target=target, level=case.level),
        effect=case.scale.outward(own),
        own=own,
        units=units,
        finite=finite,
        reached=expected_power(case.study, np.maximum(units, case.study.first), distribution),
        ceiling=expected_power_ceiling(case.study, distribution),
    )


def _for_half_width(case: _Case, effect: object, target: float, assurance: float | None) -> Sizing:
    between("half_width", target, 0, np.inf)
    study, level = case.study, case.level
    own = own_effects(study, effect, case.scale)
    units, finite = units_for_half_width(study, own, target, level, assurance)
    sized = np.maximum(units, study.first)
    return case.sizing(
        Goal(kind="half-width", target=target, assurance=assurance, level=level),
        effect=np.asarray(effect, dtype=float),
        own=own,
        units=units,
        finite=finite,
        reached=expected_half_width(study, sized, own, level)
        if assurance is None
        else assured_half_width(study, sized, own, level, assurance),
    )


def _power(power: float | None) -> float:
    return float(between("power", _USUAL_POWER if power is None else power, 0, 1))


def _where(finite: BoolArray, values: Array) -> Array:
    return np.where(finite, values, np.nan)


def _cost(each: float | None, fixed: float) -> Cost:
    if each is not None:
        between("cost_per", each, 0, np.inf)
    between("fixed_cost", fixed, 0, np.inf, ends="[)")
    return Cost(fixed=float(fixed), each=0.0 if each is None else float(each))


def _one_of(**goals: object) -> None:
    named = [name for name, value in goals.items() if value is not None]
    if len(named) > 1:
        raise SettingError(
            option(named[1]), f"contradicts {option(named[0])}: a study has one goal at a time"
        )


def _unused(name: str, value: object, reason: str) -> None:
    if value is not None:
        raise SettingError(option(name), reason)
