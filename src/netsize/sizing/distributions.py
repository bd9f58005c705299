"""Power under an uncertain effect: its expectation, its ceiling, and the chance of enough of it."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray, IntArray
from netsize.numerics.grid import GridDistribution
from netsize.numerics.search import smallest_integer
from netsize.sizing.checks import between, numbers
from netsize.sizing.search import detectable_effect
from netsize.sizing.study import LARGEST, Study

__all__ = [
    "chance_of_power",
    "expected_power",
    "expected_power_ceiling",
    "normal_effects",
    "on_own_scale",
    "units_for_expected_power",
]


def normal_effects(*, mean: float, sd: float) -> GridDistribution:
    """A normal distribution of effects, cut at six standard deviations."""
    numbers("effect", mean)
    between("effect_sd", sd, 0, np.inf)
    scores = np.linspace(-6, 6, 2401)
    return GridDistribution.from_weights(mean + sd * scores, np.exp(-scores * scores / 2))


def on_own_scale(
    study: Study, distribution: GridDistribution, metric: str | None
) -> GridDistribution:
    """The distribution carried from the metric named to the design's own scale."""
    scale = study.metric(metric)
    with np.errstate(all="ignore"):
        moved = distribution.mapped(scale.inward)
    own = study.design.metrics[0]
    if not np.all((moved.edges >= own.low) & (moved.edges <= own.high)):
        raise SettingError(
            "--effect",
            f"the distribution reaches beyond the range of {scale.title} "
            f"({scale.low:g} to {scale.high:g})",
        )
    return moved


def expected_power(study: Study, units: ArrayLike, distribution: GridDistribution) -> Array:
    """E P(significant in the predicted direction) over the distribution, shape of `units`.

    Effects against the predicted direction count with their (small) chance of a significant
    result in the predicted one (O'Hagan, Stevens & Campbell 2005).
    """
    units = np.asarray(units, dtype=float)
    chance = study.predicted(units[..., None], distribution.points)
    return np.asarray(chance @ distribution.mass + distribution.above)


def expected_power_ceiling(study: Study, distribution: GridDistribution) -> float:
    """What the expected power tends to as n grows: P(effect that the test can see)."""
    if np.isnan(study.design.null):  # equivalence: the effects within the margin
        seen = study.design.signal(distribution.points) > 0
        return float(distribution.mass[seen].sum())
    return 1.0 - float(distribution.cdf(study.design.null))


def chance_of_power(
    study: Study, units: ArrayLike, distribution: GridDistribution, target: float
) -> Array:
    """P(the study's power reaches `target`) over the distribution, in the predicted direction."""
    least = detectable_effect(study, units, target)
    return np.where(np.isnan(least), 0.0, 1.0 - distribution.cdf(np.nan_to_num(least)))


def units_for_expected_power(
    study: Study, distribution: GridDistribution, target: float
) -> tuple[IntArray, BoolArray]:
    """The fewest units whose expected power reaches the target, and whether any does."""
    if expected_power_ceiling(study, distribution) <= target:
        return np.zeros((), dtype=np.int64), np.zeros((), dtype=bool)

    def reaches(units: Array, target: Array) -> BoolArray:
        return np.asarray(expected_power(study, units, distribution) >= target)

    return smallest_integer(reaches, target, first=study.first, last=LARGEST, guess=100.0)
