"""The planning value and what follows from it, in one record."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from netsize.numerics.arrays import Array
from netsize.numerics.grid import GridDistribution
from netsize.planning.goals import Sized, size_for
from netsize.planning.settings import PlanSettings
from netsize.sizing.search import detectable_effect
from netsize.sizing.study import Study
from netsize.synthesis.records import plain

__all__ = ["Alternative", "Answer", "answer"]

_LOWER_ASSURANCES = (0.95, 0.9, 0.8, 0.7, 0.6, 0.5)


@dataclass(frozen=True, slots=True, kw_only=True)
class Alternative:
    """Another way to a finite n: what it is, the effect it plans for, the size."""

    what: str
    assurance: float | None
    effect: float
    sized: Sized

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {
            "what": self.what,
            "assurance": self.assurance,
            "effect": self.effect,
            **self.sized.to_dict(),
        }


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Answer:
    """The planning distribution, its value, and how sure the sized study is.

    Attributes
    ----------
    distribution : of the effect of the new study on the shown scale, given that there is one.
    origin : where it comes from, in words.
    quantile : its (1 - assurance) quantile. value : the planning value, that quantile or the
        smallest effect of interest where that is larger; from_smallest tells which.
    median : of the distribution. low, high : its central interval.
    probability_negligible : posterior probability that there is no effect worth the name, by the
        averaged reading whatever the rule. share_negligible : its share in the chances below; 0
        for rules whose distribution is not conditional on an effect.
    sized : the size for the value; not finite where the value is not positive.
    detectable : the smallest effect that a study of that size finds with the power wanted.
    chance_significant : P(the sized study ends significant in the predicted direction) over the
        whole distribution, the negligible component included; None without a finite size.
    ceiling : what that chance tends to as n grows.
    highest_assurance : the assurance below which a finite size exists.
    alternatives : when there is no finite size, ways that have one.
    """

    distribution: GridDistribution
    origin: str
    assurance: float
    quantile: float
    value: float
    from_smallest: bool
    median: float
    low: float
    high: float
    probability_negligible: float
    share_negligible: float
    sized: Sized
    detectable: float | None
    chance_significant: float | None
    ceiling: float
    highest_assurance: float
    alternatives: tuple[Alternative, ...]

    @property
    def finite(self) -> bool:
        """Whether a finite sample size exists at this assurance."""
        return self.sized.n_total is not None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types; the distribution as its percentiles."""
        percentiles = [5, 10, 20, 25, 30, 40, 50, 60, 70, 75, 80, 90, 95]
        values = self.distribution.quantile(np.array(percentiles) / 100)
        return {
            "probability_negligible": self.probability_negligible,
            "share_negligible": self.share_negligible,
            "value": plain(self.value),
            "quantile": plain(self.quantile),
            "from_smallest_effect": self.from_smallest,
            "median": plain(self.median),
            "low": plain(self.low),
            "high": plain(self.high),
            "assurance": self.assurance,
            "chance_significant": self.chance_significant,
            "ceiling": self.ceiling,
            "highest_assurance": self.highest_assurance,
            "origin": self.origin,
            "alternatives": [a.to_dict() for a in self.alternatives],
            "percentiles": {
                str(p): plain(float(v)) for p, v in zip(percentiles, values, strict=True)
            },
            "n_per_group": self.sized.to_dict()["n_per_group"],
            "n_total": self.sized.n_total,
            "n_recruited": self.sized.recruited,
            "detectable_effect": self.detectable,
        }


def answer(
    distribution: GridDistribution,
    origin: str,
    *,
    probability_negligible: float,
    study: Study,
    settings: PlanSettings,
    scale: str,
) -> Answer:
    """Size the study for the cautious quantile of a distribution on the shown scale.

    `scale` names the design's metric on which the distribution lives (d, r, f, ...).
    """
    inward = study.metric(scale).inward
    quantile = float(distribution.quantile(1 - settings.assurance))
    smallest = settings.smallest_effect
    from_smallest = smallest is not None and smallest > quantile
    value = smallest if from_smallest and smallest is not None else quantile
    sized = size_for(study, settings, inward(np.array([value])))[0]
    positive = 1.0 - float(distribution.cdf(0.0))

    def chance(x: Array) -> Array:
        # mass that escapes below counts as no effect, above as one that cannot be missed
        known = study.predicted(sized.units, inward(np.where(np.isfinite(x), x, 0.0)))
        return np.where(x == np.inf, 1.0, known)

    no_effect = float(study.predicted(max(sized.units, study.first), np.array(0.0)))
    sure = probability_negligible if settings.rule == "averaged" else 0.0
    tail = (1 - settings.level) / 2
    return Answer(
        distribution=distribution,
        origin=origin,
        assurance=settings.assurance,
        quantile=quantile,
        value=value,
        from_smallest=from_smallest,
        median=float(distribution.quantile(0.5)),
        low=float(distribution.quantile(tail)),
        high=float(distribution.quantile(1 - tail)),
        probability_negligible=probability_negligible,
        share_negligible=sure,
        sized=sized,
        detectable=_detectable(study, sized, settings, scale),
        chance_significant=(
            sure * no_effect + (1 - sure) * distribution.expectation(chance)
            if sized.n_total is not None
            else None
        ),
        ceiling=sure * no_effect + (1 - sure) * positive,
        highest_assurance=positive,
        alternatives=(
            _alternatives(distribution, positive, study, settings, scale)
            if sized.n_total is None
            else ()
        ),
    )


def _alternatives(
    distribution: GridDistribution,
    positive: float,
    study: Study,
    settings: PlanSettings,
    scale: str,
) -> tuple[Alternative, ...]:
    """Sizes at lower assurances, and given that the effect has the predicted direction."""
    inward = study.metric(scale).inward
    assurances = [a for a in _LOWER_ASSURANCES if a < min(positive, settings.assurance)]
    found = [(f"assurance {a:.2f}", a, float(distribution.quantile(1 - a))) for a in assurances]
    if positive > 0.001:
        given = distribution.restrict(0.0, np.inf)
        found.append(
            (
                f"assurance {settings.assurance:.2f} given the predicted direction",
                settings.assurance,
                float(given.quantile(1 - settings.assurance)),
            )
        )
    sized = size_for(study, settings, inward(np.array([effect for _, _, effect in found])))
    return tuple(
        Alternative(what=what, assurance=a, effect=effect, sized=s)
        for (what, a, effect), s in zip(found, sized, strict=True)
        if s.n_total is not None
    )


def _detectable(study: Study, sized: Sized, settings: PlanSettings, scale: str) -> float | None:
    if sized.n_total is None:
        return None
    own = detectable_effect(study, sized.units, settings.power)
    return plain(float(study.metric(scale).outward(own)))
