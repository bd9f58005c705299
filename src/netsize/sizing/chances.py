"""What studies of given sizes can do, as arrays: power, chances, errors, detectable effects.

Each function takes a design (name, record or `Study`) with settings as in `solve`; n is the number
of participants recruited in the smaller group (cell, sample) and broadcasts with the effects.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array
from netsize.numerics.grid import GridDistribution
from netsize.sizing import aftermath as _aftermath
from netsize.sizing import distributions as _distributions
from netsize.sizing.aftermath import Aftermath
from netsize.sizing.checks import between
from netsize.sizing.designs import Design
from netsize.sizing.search import detectable_effect
from netsize.sizing.solving import own_effects, units_of
from netsize.sizing.study import Study, make_study

__all__ = [
    "Aftermath",
    "after_significance",
    "expected_power",
    "expected_power_ceiling",
    "power",
    "power_assurance",
    "smallest_detectable",
]


def power(
    design: Study | Design | str,
    *,
    effect: ArrayLike,
    n: ArrayLike,
    predicted_only: bool = False,
    metric: str | None = None,
    **settings: Any,
) -> Array:
    """Power, broadcast over effects and sizes.

    Two-sided power counts both tails; `predicted_only` counts significance in the predicted
    (positive) direction alone.
    """
    study = make_study(design, **settings)
    own, units = own_effects(study, effect, study.metric(metric)), units_of(study, n=n)
    return study.predicted(units, own) if predicted_only else study.power(units, own)


def after_significance(
    design: Study | Design | str,
    *,
    effect: ArrayLike,
    n: ArrayLike,
    metric: str | None = None,
    **settings: Any,
) -> Aftermath:
    """Power with the sign error and exaggeration of a significant result (Gelman & Carlin 2014)."""
    study = make_study(design, **settings)
    own = own_effects(study, effect, study.metric(metric))
    return _aftermath.aftermath(study, units_of(study, n=n), own)


def smallest_detectable(
    design: Study | Design | str,
    *,
    n: ArrayLike,
    power: ArrayLike = 0.8,
    metric: str | None = None,
    **settings: Any,
) -> Array:
    """The smallest effect in the predicted direction with the power wanted, on `metric`."""
    study = make_study(design, **settings)
    wanted = between("power", power, 0, 1)
    least = detectable_effect(study, units_of(study, n=n), wanted)
    return np.asarray(study.metric(metric).outward(least))


def expected_power(
    design: Study | Design | str,
    *,
    effect: GridDistribution,
    n: ArrayLike,
    metric: str | None = None,
    **settings: Any,
) -> Array:
    """P(significant in the predicted direction) averaged over a distribution, shape of n."""
    study = make_study(design, **settings)
    own = _distributions.on_own_scale(study, effect, metric)
    return _distributions.expected_power(study, units_of(study, n=n), own)


def expected_power_ceiling(
    design: Study | Design | str,
    *,
    effect: GridDistribution,
    metric: str | None = None,
    **settings: Any,
) -> float:
    """What the expected power tends to as n grows."""
    study = make_study(design, **settings)
    return _distributions.expected_power_ceiling(
        study, _distributions.on_own_scale(study, effect, metric)
    )


def power_assurance(
    design: Study | Design | str,
    *,
    effect: GridDistribution,
    n: ArrayLike,
    power: float = 0.8,
    metric: str | None = None,
    **settings: Any,
) -> Array:
    """The probability, over a distribution of effects, that the power reaches `power`."""
    study = make_study(design, **settings)
    own = _distributions.on_own_scale(study, effect, metric)
    between("power", power, 0, 1)
    return _distributions.chance_of_power(study, units_of(study, n=n), own, power)
