"""Designs that compare means by a t test: two groups, pairs, one sample."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.numerics.arrays import Array
from netsize.sizing.checks import between
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.laws import WELCH, Law, Parameters, T

__all__ = ["OneSample", "Paired", "TwoGroups", "share_to_f"]

LARGEST_D = 20.0  # far beyond any real effect; larger ones are slips of a decimal point


def share_to_f(share: Array) -> Array:
    """f from a share of variance: f² = η²/(1-η²) (Cohen 1988, eq. 8.2.19)."""
    return np.asarray(np.sqrt(share / (1 - share)))


@dataclass(frozen=True, slots=True)
class TwoGroups(Design):
    """Two independent groups, t test of their means; Welch's test where the SDs differ.

    ratio : size of group 2 over group 1. The smaller group has a whole number n of participants,
        the larger the next whole number at or above n times the ratio (or its inverse).
    spread_ratio : SD in group 2 over group 1; 1 means equal variances and the pooled test.
        Otherwise d is in units of the root mean of the two variances (Cohen 1988, eq. 2.3.2).
    """

    name: ClassVar[str] = "two-groups"
    title: ClassVar[str] = "two independent groups, t test"

    ratio: float = 1.0
    spread_ratio: float = 1.0

    def __post_init__(self) -> None:
        between("ratio", self.ratio, 0.001, 1000, ends="[]")
        between("spread_ratio", self.spread_ratio, 0.01, 100, ends="[]")

    @property
    def law(self) -> Law:
        return T if self.spread_ratio == 1 else WELCH

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        spread = np.sqrt(self.ratio) / (1 + self.ratio)  # SD of group membership: f = d · spread

        def from_r(r: Array) -> Array:
            return np.asarray(r / np.sqrt((1 - r) * (1 + r)) / spread)

        def to_r(d: Array) -> Array:
            return np.asarray(d * spread / np.hypot(1, d * spread))

        return (
            EffectMetric("d", "standardized mean difference", -LARGEST_D, LARGEST_D),
            EffectMetric("r", "point-biserial correlation", -1, 1, from_r, to_r),
            EffectMetric(
                "f", "Cohen's f", 0, LARGEST_D, lambda f: f / spread, lambda d: d * spread
            ),
            EffectMetric(
                "eta2",
                "share of variance η²",
                0,
                1,
                lambda share: share_to_f(share) / spread,
                lambda d: to_r(d) ** 2,
            ),
        )

    def sizes(self, n: Array) -> Array:
        larger = np.ceil(n * max(self.ratio, 1 / self.ratio) - 1e-9)
        return np.stack([n, larger] if self.ratio >= 1 else [larger, n])

    def _variances(self) -> tuple[float, float]:
        first = 2 / (1 + self.spread_ratio**2)
        return first, 2 - first

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        first, second = self._variances()
        return np.asarray(effect / np.sqrt(first / sizes[0] + second / sizes[1]))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        if self.spread_ratio == 1:
            return (sizes[0] + sizes[1] - 2,)
        first, second = self._variances()
        share = first / sizes[0] / (first / sizes[0] + second / sizes[1])
        return sizes[0] - 1, sizes[1] - 1, share

    def assumptions(self) -> tuple[str, ...]:
        if self.spread_ratio == 1:
            return ("independent observations, normal, one variance in both groups",)
        return (
            "independent observations, normal; Welch's test, its exact power",
            f"SD of group 2 is {self.spread_ratio:g} times that of group 1; d is in units of the "
            "root mean of the two variances",
        )


@dataclass(frozen=True, slots=True)
class Paired(Design):
    """Pairs or two occasions, t test of the differences.

    pair_correlation : correlation ρ within pairs; needed only when the effect is given as d in
        units of the single measurement's SD: dz = d/√(2(1-ρ)).
    """

    name: ClassVar[str] = "paired"
    title: ClassVar[str] = "pairs, t test of the differences"
    group_word: ClassVar[str] = "sample"

    pair_correlation: float | None = None

    def __post_init__(self) -> None:
        if self.pair_correlation is not None:
            between("pair_correlation", self.pair_correlation, -1, 1)

    @property
    def law(self) -> Law:
        return T

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        own = EffectMetric("dz", "standardized mean of differences", -LARGEST_D, LARGEST_D)
        if self.pair_correlation is None:
            return (own,)
        scale = np.sqrt(2 * (1 - self.pair_correlation))
        return (
            own,
            EffectMetric(
                "d",
                "standardized mean difference",
                -LARGEST_D,
                LARGEST_D,
                lambda d: d / scale,
                lambda dz: dz * scale,
                f"dz = d/√(2(1-ρ)) with ρ = {self.pair_correlation:g}",
            ),
        )

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect * np.sqrt(sizes[0]))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return (sizes[0] - 1,)

    def assumptions(self) -> tuple[str, ...]:
        return ("independent pairs, differences normal; n counts pairs",)


@dataclass(frozen=True, slots=True)
class OneSample(Design):
    """One sample, t test of its mean against a fixed value."""

    name: ClassVar[str] = "one-sample"
    title: ClassVar[str] = "one sample, t test of its mean"
    group_word: ClassVar[str] = "sample"

    @property
    def law(self) -> Law:
        return T

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return (
            EffectMetric("d", "standardized distance from the fixed value", -LARGEST_D, LARGEST_D),
        )

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect * np.sqrt(sizes[0]))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return (sizes[0] - 1,)

    def assumptions(self) -> tuple[str, ...]:
        return ("independent observations, normal",)
