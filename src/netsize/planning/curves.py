"""The curves behind a plan's figures: n over effect, power over n, p-values expected of the fit.

Everything on the shown scale, as plain numbers that a page can hold.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from netsize.effect_sizes import effects
from netsize.effect_sizes.curves import band_probabilities
from netsize.numerics.arrays import Array
from netsize.planning.goals import power_at, size_for
from netsize.planning.plan import Plan
from netsize.planning.settings import PlanSettings
from netsize.planning.study import effect_on

__all__ = [
    "Density",
    "ExpectedP",
    "PowerOverN",
    "SizeOverEffect",
    "density",
    "expected_p",
    "power_over_n",
    "size_over_effect",
    "with_goal",
]

_POINTS = 61
_SMOOTHING = 4  # cells; the steps of the distribution's own grid would show otherwise
_SIZES = 41  # on the power curves
_NODES = 64  # equally likely effects that stand for a distribution
_BAND = (0.1, 0.9)  # percentiles of the planning distribution that bound the power band
_BINS = 5  # of the significant p-values
_MOST_SHOWN = 2e6  # participants; larger studies are not drawn


@dataclass(frozen=True, slots=True, kw_only=True)
class Density:
    """A distribution as heights over equal cells of its central 99.6 %.

    edges : (G+1,), equal steps; () where it is all at one `atom`. heights : (G,), per unit of
    effect, lightly smoothed. below, above : probability that escapes at the ends.
    """

    edges: tuple[float, ...]
    heights: tuple[float, ...]
    atom: float | None
    below: float
    above: float


@dataclass(frozen=True, slots=True, kw_only=True)
class SizeOverEffect:
    """Participants in total over the effect; `power` is that of the goal, None for precision.

    rows : the same for each row of the plan's table; for a budget, what `power` would need.
    """

    effects: tuple[float, ...]
    n_total: tuple[int, ...]
    rows: tuple[int | None, ...]
    power: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class PowerOverN:
    """Power over participants in total.

    low, high : at the 10th and 90th percentile of the planning distribution, at_median at its
    median, at_value at the planning value (None where that is not positive). overall : chance of a
    significant result as predicted over the whole distribution, with negligible effects where the
    rule has them.
    """

    n_total: tuple[int, ...]
    low: tuple[float, ...]
    high: tuple[float, ...]
    at_median: tuple[float, ...]
    at_value: tuple[float, ...] | None
    overall: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class ExpectedP:
    """Significant two-sided p-values in equal bins up to the first cut point.

    limits : upper ends of the bins. observed : results in each. expected : shares the averaged fit
    expects of them, no_effect : shares were there no effect; both sum to 1.
    """

    limits: tuple[float, ...]
    observed: tuple[int, ...]
    expected: tuple[float, ...]
    no_effect: tuple[float, ...]


def with_goal(settings: PlanSettings, **choices: Any) -> PlanSettings:
    """The settings for another goal: what serves the present one only is dropped."""
    dropped: dict[str, Any] = {
        "half_width": None,
        "assured": False,
        "at_most": None,
        "cost_per": None,
        "fixed_cost": 0.0,
    }
    return replace(settings, **(dropped | choices))


def density(plan: Plan) -> Density:
    """The planning distribution, ready to draw."""
    d = plan.answer.distribution
    inside = 1.0 - d.below - d.above
    low, high = (float(x) for x in d.quantile([d.below + 0.002 * inside, 1 - d.above - 0.002]))
    if high - low < 1e-9:
        return Density(edges=(), heights=(), atom=low, below=d.below, above=d.above)
    edges = np.linspace(low, high, 2 * _POINTS + 1)
    step = edges[1] - edges[0]
    reach = np.arange(-3 * _SMOOTHING, 3 * _SMOOTHING + 1)
    kernel = np.exp(-0.5 * (reach / _SMOOTHING) ** 2)
    wide = np.diff(d.cdf(low + step * np.arange(reach[0], edges.size + reach[-1]))) / step
    if not plan.metric.signed:  # what lies before 0 is mirrored, not missing
        wide[: reach[-1]] = wide[reach[-1] : 2 * reach[-1]][::-1]
    heights = np.convolve(wide, kernel / kernel.sum(), mode="valid")
    return Density(
        edges=_plain(edges), heights=_plain(heights), atom=None, below=d.below, above=d.above
    )


def size_over_effect(plan: Plan) -> SizeOverEffect:
    """n for the goal over the effects of the table; for a budget, n for the power wanted."""
    settings = plan.settings
    if settings.goal == "budget":
        settings = with_goal(settings, goal="power")
    marked = [row.limit for row in plan.rows if row.limit is not None and row.limit > 0]
    high = 1.1 * max(marked, default=1.0)
    low = max(0.8 * min(marked, default=0.1), high / 1000)
    effect = np.geomspace(low, high, _POINTS)
    effect = effect[np.isfinite(effect_on(plan.study, plan.metric, effect))]
    if plan.metric.name == "fisher-z":
        effect = effect[effect < 0.999]
    sized = size_for(plan.study, settings, effect_on(plan.study, plan.metric, effect))
    limits = np.array([np.nan if row.limit is None else row.limit for row in plan.rows])
    rows = size_for(plan.study, settings, effect_on(plan.study, plan.metric, limits))
    kept = [
        (float(e), s.n_total)
        for e, s in zip(effect, sized, strict=True)
        if s.n_total is not None and s.n_total <= _MOST_SHOWN
    ]
    return SizeOverEffect(
        effects=tuple(e for e, _ in kept),
        n_total=tuple(n for _, n in kept),
        rows=tuple(s.n_total for s in rows),
        power=None if settings.goal == "precision" else settings.power,
    )


def power_over_n(plan: Plan) -> PowerOverN:
    """Power from the smallest study to well beyond every size of the table."""
    study, answer = plan.study, plan.answer
    sizes = [row.sized.units for row in plan.rows if row.sized.units]
    sizes += [a.sized.units for a in answer.alternatives]
    most = int(min(3 * max(sizes, default=100), _MOST_SHOWN))
    units = np.unique(np.geomspace(study.first, max(most, study.first + 10), _SIZES).astype(int))

    def at(effect: float) -> Array:
        if not np.isfinite(effect):
            return np.full(units.shape, 1.0 if effect > 0 else 0.0)
        return power_at(study, units, effect_on(study, plan.metric, np.array(effect)))

    low, high = (float(x) for x in answer.distribution.quantile(_BAND))
    return PowerOverN(
        n_total=tuple(int(n) for n in study.groups(units.astype(float)).sum(axis=0)),
        low=_plain(at(low)),
        high=_plain(at(high)),
        at_median=_plain(at(answer.median)),
        at_value=_plain(at(answer.value)) if answer.value > 0 else None,
        overall=_plain(overall_chance(plan, units)),
    )


def overall_chance(plan: Plan, units: Array) -> Array:
    """P(significant as predicted) of studies of `units` (U,) over the planning distribution."""
    study, answer = plan.study, plan.answer
    x = answer.distribution.quantile((np.arange(_NODES) + 0.5) / _NODES)
    effect = effect_on(study, plan.metric, np.where(np.isfinite(x), x, 0.0))
    chance = study.predicted(np.asarray(units)[:, None], effect)
    given = np.where(x == np.inf, 1.0, chance).mean(axis=1)
    nothing = study.predicted(np.asarray(units), np.zeros(np.shape(units)))
    sure = answer.share_negligible
    return np.asarray(sure * nothing + (1 - sure) * given)


def expected_p(plan: Plan) -> ExpectedP | None:
    """The significant p-values against what the fit expects; None where no result has one.

    Expected of a result that came out significant: with π the distribution of its effect, the mean
    of P(p in bin | θ) over π divided by that of P(significant | θ); averaged over the results.
    """
    cut = plan.settings.cut_points[0]
    limits = tuple(cut * (j + 1) / _BINS for j in range(_BINS))
    table = effects(
        [replace(row.result, cut=None) for row in plan.literature.rows],
        metric=plan.metric.name,
        level=plan.settings.level,
        correlation=plan.settings.correlation,
        cut_points=limits,
    )
    bands = [row.evidence.band for row in table.rows]
    inside = [i for i, band in enumerate(bands) if band is not None and band < _BINS]
    if not inside:
        return None
    fit = plan.literature.averaged
    theta = fit.new_study.quantile((np.arange(_NODES) + 0.5) / _NODES)
    theta = np.append(theta[np.isfinite(theta)], 0.0)
    sure = fit.probability_negligible
    weight = np.full(theta.size, (1 - sure) / (theta.size - 1))
    weight[-1] = sure
    chances = band_probabilities([table.rows[i].evidence for i in inside], theta)[:, :_BINS]
    fitted = chances @ weight
    null = chances[:, :, -1]
    return ExpectedP(
        limits=limits,
        observed=tuple(sum(bands[i] == j for i in inside) for j in range(_BINS)),
        expected=_plain((fitted / fitted.sum(axis=1, keepdims=True)).mean(axis=0)),
        no_effect=_plain((null / null.sum(axis=1, keepdims=True)).mean(axis=0)),
    )


def _plain(values: Array) -> tuple[float, ...]:
    return tuple(float(v) for v in values)
