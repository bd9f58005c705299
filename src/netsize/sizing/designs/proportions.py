"""Designs about proportions: two independent ones, one against a fixed value."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray
from netsize.sizing.binomial import LARGEST_EXACT, rejection_probability
from netsize.sizing.checks import between
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.laws import NORMAL, Law, Parameters

__all__ = ["OneProportion", "TwoProportions"]


def _angle(p: Array) -> Array:
    """Cohen's φ = 2 arcsin √p (1988, eq. 6.2.1)."""
    return np.asarray(2 * np.arcsin(np.sqrt(p)))


def _proportion_metrics(base: float, which: str) -> tuple[EffectMetric, ...]:
    """Scales of a proportion against `base`; the design's own is the difference."""

    def from_h(h: Array) -> Array:
        return np.asarray(np.sin((_angle(np.asarray(base)) + h) / 2) ** 2 - base)

    def from_odds(ratio: Array) -> Array:
        return np.asarray(base * ratio / (1 - base + base * ratio) - base)

    def to_odds(difference: Array) -> Array:
        p = base + difference
        return np.asarray(p / (1 - p) * (1 - base) / base)

    note = f"{which} {base:g}"
    low_h, high_h = float(-_angle(np.asarray(base))), float(np.pi - _angle(np.asarray(base)))
    return (
        EffectMetric("difference", "difference of proportions", -base, 1 - base),
        EffectMetric(
            "proportion", "proportion", 0, 1, lambda p: p - base, lambda d: d + base, note
        ),
        EffectMetric("odds-ratio", "odds ratio", 0, np.inf, from_odds, to_odds, note),
        EffectMetric(
            "risk-ratio",
            "ratio of proportions",
            0,
            1 / base,
            lambda ratio: base * (ratio - 1),
            lambda d: 1 + d / base,
            note,
        ),
        EffectMetric(
            "h",
            "Cohen's h",
            low_h,
            high_h,
            from_h,
            lambda d: _angle(base + d) - _angle(np.asarray(base)),
            note,
        ),
    )


@dataclass(frozen=True, slots=True)
class TwoProportions(Design):
    """Two independent proportions.

    baseline : proportion in group 1. ratio : as for two groups. test :

        "pooled"     z test with the pooled variance under H0 (Fleiss, Levin & Paik 2003, eq. 4.14)
        "corrected"  the same with the continuity correction (their eq. 4.15)
        "arcsine"    Cohen's (1988, ch. 6) test of the transformed proportions

    The normal approximation throughout.
    """

    name: ClassVar[str] = "two-proportions"
    title: ClassVar[str] = "two independent proportions, z test"

    baseline: float = 0.5
    test: str = "pooled"
    ratio: float = 1.0

    def __post_init__(self) -> None:
        between("baseline", self.baseline, 0, 1)
        between("ratio", self.ratio, 0.001, 1000, ends="[]")
        if self.test not in ("pooled", "corrected", "arcsine"):
            raise SettingError("--test", f"{self.test!r} is none of pooled, corrected, arcsine")

    @property
    def law(self) -> Law:
        return NORMAL

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return _proportion_metrics(self.baseline, "group 1 has proportion")

    def sizes(self, n: Array) -> Array:
        larger = np.ceil(n * max(self.ratio, 1 / self.ratio) - 1e-9)
        return np.stack([n, larger] if self.ratio >= 1 else [larger, n])

    def standard_error(self, sizes: Array, effect: Array) -> Array:
        p, q = self.baseline, self.baseline + effect
        return np.asarray(np.sqrt(p * (1 - p) / sizes[0] + q * (1 - q) / sizes[1]))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        if self.test == "arcsine":
            h = _angle(self.baseline + effect) - _angle(np.asarray(self.baseline))
            return np.asarray(h / np.sqrt(1 / sizes[0] + 1 / sizes[1]))
        return np.asarray(effect / self.standard_error(sizes, effect))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        if self.test == "arcsine":
            return np.asarray(1.0), np.asarray(0.0)
        spread = self.standard_error(sizes, effect)
        share = sizes[1] / (sizes[0] + sizes[1])
        pooled = self.baseline + share * effect
        inverse = 1 / sizes[0] + 1 / sizes[1]
        null = np.sqrt(pooled * (1 - pooled) * inverse)
        shift = inverse / 2 / spread if self.test == "corrected" else np.zeros_like(spread)
        return null / spread, shift

    def exact_power(self, sizes: Array, effect: float, critical: float, sides: int) -> float | None:
        n1, n2 = (int(n) for n in sizes)
        if n1 + n2 > LARGEST_EXACT:
            return None

        def rejects(x1: Array, x2: Array) -> BoolArray:
            p1, p2 = x1 / n1, x2 / n2
            inverse = 1 / n1 + 1 / n2
            if self.test == "arcsine":
                statistic, limit = _angle(p2) - _angle(p1), critical * np.sqrt(inverse)
            else:
                pooled = (x1 + x2) / (n1 + n2)
                limit = critical * np.sqrt(pooled * (1 - pooled) * inverse)
                statistic = p2 - p1
                if self.test == "corrected":
                    limit = limit + inverse / 2
            return np.asarray(np.abs(statistic) > limit if sides == 2 else statistic > limit)

        return rejection_probability((n1, n2), (self.baseline, self.baseline + effect), rejects)

    def assumptions(self) -> tuple[str, ...]:
        kind = {
            "pooled": "pooled variance, no continuity correction",
            "corrected": "pooled variance, continuity correction",
            "arcsine": "arcsine transformation",
        }[self.test]
        return (f"z test of two independent proportions, {kind}; normal approximation",)


@dataclass(frozen=True, slots=True)
class OneProportion(Design):
    """One proportion against a fixed value; with baseline .5 the sign test (Cohen 1988, ch. 5).

    baseline : the fixed value. z test with the SD of the fixed value, normal approximation.
    """

    name: ClassVar[str] = "one-proportion"
    title: ClassVar[str] = "one proportion against a fixed value, z test"
    group_word: ClassVar[str] = "sample"

    baseline: float = 0.5

    def __post_init__(self) -> None:
        between("baseline", self.baseline, 0, 1)

    @property
    def law(self) -> Law:
        return NORMAL

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return _proportion_metrics(self.baseline, "the fixed value is")

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def standard_error(self, sizes: Array, effect: Array) -> Array:
        p = self.baseline + effect
        return np.asarray(np.sqrt(p * (1 - p) / sizes[0]))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect / self.standard_error(sizes, effect))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        p = self.baseline + effect
        null = self.baseline * (1 - self.baseline)
        return np.sqrt(null / (p * (1 - p))), np.asarray(0.0)

    def exact_power(self, sizes: Array, effect: float, critical: float, sides: int) -> float | None:
        n = int(sizes[0])
        if n > LARGEST_EXACT:
            return None
        limit = critical * np.sqrt(self.baseline * (1 - self.baseline) / n)

        def rejects(x: Array) -> BoolArray:
            off = x / n - self.baseline
            return np.asarray(np.abs(off) > limit if sides == 2 else off > limit)

        return rejection_probability((n,), (self.baseline + effect,), rejects)

    def assumptions(self) -> tuple[str, ...]:
        return (f"z test of one proportion against {self.baseline:g}; normal approximation",)
