"""A lower bound from one study, conditional on its having been printed because it was significant.

Taylor & Muller (1996); for planning, Anderson, Kelley & Maxwell (2017): the effect at which a
significant result as small as the one observed, or smaller, has probability `assurance`.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from netsize.effect_sizes.curves import band_probabilities
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array
from netsize.numerics.roots import increasing_root

__all__ = ["conditional_bound"]

_SIGNED = ("t", "z", "r")


def conditional_bound(
    evidence: Evidence, *, assurance: float, only_significant: bool = True
) -> float:
    """The θ ≥ 0 with P(|X| ≤ |x| given |X| > critical; θ) = `assurance`.

    Parameters
    ----------
    evidence : an exact result; its first cut is the critical value. For signed statistics the
        two-sided test is meant, X² in the sources' F form.
    assurance : in (0, 1); 0.5 gives the median-unbiased value.
    only_significant : False drops the condition, which leaves the ordinary lower limit.

    Returns
    -------
    0.0 where no positive effect has that probability: no finite sample size follows then.

    Raises
    ------
    ValueError for an inequality, or for a result that is not significant under the condition.
    """
    observed = abs(evidence.low) if evidence.kernel in _SIGNED else evidence.low
    critical = evidence.cuts[0]
    if evidence.low != evidence.high:
        raise ValueError("an inequality has no bound of its own")
    if only_significant and observed <= critical:
        raise ValueError("the result is not significant, so it cannot have been selected for that")

    def exceeds(x: float, theta: Array) -> Array:
        at = replace(evidence, cuts=(x,))
        chance = band_probabilities([at], theta)[0, 0]
        if evidence.kernel in _SIGNED:
            chance = chance + band_probabilities([at], -theta)[0, 0]
        return np.asarray(chance)

    def shortfall(theta: Array) -> Array:
        share = exceeds(observed, theta)
        if only_significant:
            share = share / exceeds(critical, theta)
        return np.asarray(assurance - (1.0 - share))

    if evidence.kernel == "r":
        high = float(np.arctanh(min(observed, 1 - 1e-12))) + 10 / np.sqrt(evidence.df[0])
    else:
        size = observed if evidence.kernel in _SIGNED else np.sqrt(evidence.df[0] * observed)
        high = (size + 20) / evidence.scale
    root = float(increasing_root(shortfall, np.array([0.0]), np.array([high]))[0])
    return max(root, 0.0)
