"""Designs with an F test: one-way and factorial analysis of variance, repeated measures."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.errors import SettingError
from netsize.numerics.arrays import Array
from netsize.sizing.checks import between, whole
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.laws import F, Law, Parameters

__all__ = ["Anova", "Factorial", "RepeatedMeasures"]

LARGEST_F = 20.0  # far beyond any real effect
_PRINTED = "the value printed for a small study is too large on average; ω² is nearly unbiased"


def _f_metrics(scale: float = 1.0) -> tuple[EffectMetric, ...]:
    """f and shares of variance; f² = scale · η²/(1-η²)."""
    root = np.sqrt(scale)

    def from_share(share: Array) -> Array:
        return np.asarray(root * np.sqrt(share / (1 - share)))

    def to_share(f: Array) -> Array:
        return np.asarray(f * f / (f * f + scale))

    return (
        EffectMetric("f", "Cohen's f", 0, LARGEST_F),
        EffectMetric("eta2", "partial η²", 0, 1, from_share, to_share, _PRINTED),
        EffectMetric("omega2", "partial ω²", 0, 1, from_share, to_share),
    )


@dataclass(frozen=True, slots=True)
class Anova(Design):
    """Independent groups of equal size, one-way analysis of variance (Cohen 1988, ch. 8).

    groups : how many. λ = f²·N with N all participants.
    """

    name: ClassVar[str] = "anova"
    title: ClassVar[str] = "independent groups, one-way analysis of variance"

    groups: int = 3

    def __post_init__(self) -> None:
        whole("groups", self.groups, 2, 1000)

    @property
    def law(self) -> Law:
        return F

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return _f_metrics()

    def sizes(self, n: Array) -> Array:
        n = np.asarray(n)
        return np.broadcast_to(n, (self.groups, *n.shape))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect * np.sqrt(sizes[0] * self.groups))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return np.asarray(self.groups - 1.0), self.groups * (sizes[0] - 1)

    def assumptions(self) -> tuple[str, ...]:
        return (f"independent observations, normal, one variance in all {self.groups} groups",)


@dataclass(frozen=True, slots=True)
class Factorial(Design):
    """One effect in a between-subjects factorial design with equal cells (Cohen 1988, ch. 8.3).

    df1 : numerator degrees of freedom of the effect. cells : cells of the whole design.
    f is the SD of the cell means that the effect alone produces, over the SD within cells.
    """

    name: ClassVar[str] = "factorial"
    title: ClassVar[str] = "one effect in a factorial design, F test"
    group_word: ClassVar[str] = "cell"

    df1: int = 1
    cells: int = 4

    def __post_init__(self) -> None:
        whole("cells", self.cells, 2, 1000)
        whole("df1", self.df1, 1)
        if self.df1 >= self.cells:
            raise SettingError(
                "--df1",
                f"{self.df1} degrees of freedom need more than {self.cells} cells; "
                "give the cells of the whole design with --cells",
            )

    @property
    def law(self) -> Law:
        return F

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return _f_metrics()

    def sizes(self, n: Array) -> Array:
        n = np.asarray(n)
        return np.broadcast_to(n, (self.cells, *n.shape))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect * np.sqrt(sizes[0] * self.cells))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return np.asarray(float(self.df1)), self.cells * (sizes[0] - 1)

    def assumptions(self) -> tuple[str, ...]:
        return (
            f"independent observations, normal, one variance in all {self.cells} cells; "
            f"the effect has {self.df1} df",
        )


@dataclass(frozen=True, slots=True)
class RepeatedMeasures(Design):
    """Groups measured several times, equal correlation between measurements.

    groups : independent groups (1: within-subjects only). occasions : measurements K a participant.
    pair_correlation : ρ between any two measurements. sphericity : ε, which multiplies λ and both
    degrees of freedom of tests that involve the measurements (Muller & Barton 1989); ε = 1 is
    exact. tested : "within" (measurements), "between" (groups) or "interaction".

    f is the SD of the means that the effect produces, over the SD of one measurement:

        within, interaction   λ = f² N K ε / (1-ρ)
        between               λ = f² N K / (1 + (K-1)ρ)
    """

    name: ClassVar[str] = "repeated"
    title: ClassVar[str] = "repeated measures, univariate F test"

    occasions: int = 2
    groups: int = 1
    pair_correlation: float = 0.5
    sphericity: float = 1.0
    tested: str = "within"

    def __post_init__(self) -> None:
        whole("occasions", self.occasions, 2, 1000)
        whole("groups", self.groups, 1, 1000)
        between("pair_correlation", self.pair_correlation, -1 / (self.occasions - 1), 1)
        lowest = 1 / (self.occasions - 1)
        between("sphericity", self.sphericity, lowest, 1, ends="[]")
        if self.tested not in ("within", "between", "interaction"):
            raise SettingError(
                "--tested", f"{self.tested!r} is none of within, between, interaction"
            )
        if self.tested != "within" and self.groups < 2:
            raise SettingError("--groups", f"a {self.tested} test needs at least 2 groups")

    @property
    def law(self) -> Law:
        return F

    @property
    def _error_share(self) -> float:
        """Error variance of the test over that of one measurement, a participant's K together."""
        if self.tested == "between":
            return 1 + (self.occasions - 1) * self.pair_correlation
        return 1 - self.pair_correlation

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        count = 1 if self.tested == "between" else self.occasions - 1
        return _f_metrics(self._error_share * count / self.occasions)

    def sizes(self, n: Array) -> Array:
        n = np.asarray(n)
        return np.broadcast_to(n, (self.groups, *n.shape))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        epsilon = 1.0 if self.tested == "between" else self.sphericity
        total = sizes[0] * self.groups * self.occasions
        return np.asarray(effect * np.sqrt(total * epsilon / self._error_share))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        subjects = self.groups * (sizes[0] - 1)
        if self.tested == "between":
            return np.asarray(self.groups - 1.0), subjects
        within = (self.occasions - 1) * self.sphericity
        first = within * (self.groups - 1 if self.tested == "interaction" else 1)
        return np.asarray(first), subjects * within

    def assumptions(self) -> tuple[str, ...]:
        spread = (
            "sphericity holds"
            if self.sphericity == 1
            else f"sphericity ε = {self.sphericity:g} multiplies λ and the df (approximation)"
        )
        return (
            f"{self.occasions} measurements a participant, correlated "
            f"{self.pair_correlation:g}; {spread}",
            f"the test is the {self.tested} one; f is in units of the SD of one measurement",
        )
