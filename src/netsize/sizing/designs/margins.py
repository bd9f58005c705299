"""Designs that show equivalence or non-inferiority of means within a margin."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.errors import SettingError
from netsize.numerics.arrays import Array
from netsize.sizing.checks import between
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.designs.means import LARGEST_D, OneSample, Paired, TwoGroups
from netsize.sizing.laws import EQUIVALENCE, ONE_SIDED_T, Law, Parameters

__all__ = ["Equivalence", "NonInferiority"]


def _means(comparison: str, ratio: float, pair_correlation: float | None) -> Design:
    """The design whose means are compared."""
    if comparison == "two-groups":
        return TwoGroups(ratio=ratio)
    if ratio != 1:
        raise SettingError("--ratio", "only a comparison of two groups has an allocation ratio")
    if comparison == "paired":
        return Paired(pair_correlation=pair_correlation)
    if comparison == "one-sample":
        return OneSample()
    raise SettingError("--comparison", f"{comparison!r} is none of two-groups, paired, one-sample")


@dataclass(frozen=True, slots=True, kw_only=True)
class _Margin(Design):
    """What both have in common: a comparison of means and a margin on the scale of its effect.

    margin : in the units of the effect (d, dz), above 0. comparison : "two-groups", "paired" or
    "one-sample"; ratio, pair_correlation : as for that design.
    """

    margin: float
    comparison: str = "two-groups"
    ratio: float = 1.0
    pair_correlation: float | None = None

    def __post_init__(self) -> None:
        between("margin", self.margin, 0, LARGEST_D)
        _means(self.comparison, self.ratio, self.pair_correlation)

    @property
    def means(self) -> Design:
        """The comparison."""
        return _means(self.comparison, self.ratio, self.pair_correlation)

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return self.means.metrics[:1]

    def sizes(self, n: Array) -> Array:
        return self.means.sizes(n)


@dataclass(frozen=True, slots=True, kw_only=True)
class Equivalence(_Margin):
    """The means differ by less than the margin: two one-sided t tests, each at α.

    The effect is the true difference, usually 0. Power is exact (Schuirmann 1987; Owen 1965).
    """

    name: ClassVar[str] = "equivalence"
    title: ClassVar[str] = "equivalence of means, two one-sided t tests"

    @property
    def law(self) -> Law:
        return EQUIVALENCE

    @property
    def null(self) -> float:
        return float("nan")

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        """Of the margin; the law scales it by effect/margin for the difference itself."""
        return np.asarray(self.means.noncentrality(sizes, np.asarray(self.margin)))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return (effect / self.margin, *self.means.parameters(sizes, effect))

    def signal(self, effect: Array) -> Array:
        return np.asarray(self.margin - np.abs(effect))

    def assumptions(self) -> tuple[str, ...]:
        return (
            f"equivalence margin ±{self.margin:g}; two one-sided t tests, each at α, so the "
            "1-2α interval must lie within the margin; exact power",
            *self.means.assumptions(),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class NonInferiority(_Margin):
    """The new mean is not worse than the standard by the margin or more: a one-sided t test at α.

    The effect is new minus standard with higher better, usually 0.
    """

    name: ClassVar[str] = "non-inferiority"
    title: ClassVar[str] = "non-inferiority of a mean, one-sided t test"

    @property
    def law(self) -> Law:
        return ONE_SIDED_T

    @property
    def null(self) -> float:
        return -self.margin

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return self.means.noncentrality(sizes, effect + self.margin)

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return self.means.parameters(sizes, effect)

    def signal(self, effect: Array) -> Array:
        return np.asarray(effect + self.margin)

    def assumptions(self) -> tuple[str, ...]:
        return (
            f"non-inferiority margin {self.margin:g}, effect = new minus standard, higher is "
            "better; one-sided test at α (regulators commonly ask for .025)",
            *self.means.assumptions(),
        )
