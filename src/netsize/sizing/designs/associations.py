"""Designs about association: correlations, regression, contingency tables."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.errors import SettingError
from netsize.numerics.arrays import Array
from netsize.sizing.checks import between, whole
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.laws import CHI_SQUARE, CORRELATION, NORMAL, F, Law, Parameters

__all__ = ["Contingency", "Correlation", "Regression", "TwoCorrelations"]


@dataclass(frozen=True, slots=True)
class Correlation(Design):
    """One correlation against 0, t test of r, exact under bivariate normality (Hotelling 1953)."""

    name: ClassVar[str] = "correlation"
    title: ClassVar[str] = "one correlation, t test of r"
    group_word: ClassVar[str] = "sample"
    smallest: ClassVar[int] = 4

    @property
    def law(self) -> Law:
        return CORRELATION

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        return (
            EffectMetric("r", "correlation", -1, 1),
            EffectMetric("z", "Fisher's z", -18, 18, np.tanh, np.arctanh),
        )

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        """On Fisher's scale; starts searches only, the law itself takes ρ and n."""
        return np.asarray(np.arctanh(effect) * np.sqrt(np.maximum(sizes[0] - 3, 0.1)))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        # with many participants a cluster the effective size can fall below what a test needs
        return np.abs(effect), np.maximum(sizes[0], 3.0)

    def assumptions(self) -> tuple[str, ...]:
        return ("independent pairs of values, bivariate normal",)


@dataclass(frozen=True, slots=True)
class TwoCorrelations(Design):
    """Difference of two independent correlations on Fisher's scale (Cohen 1988, ch. 4).

    baseline : correlation in group 1, needed only when the effect is given as the correlation in
        group 2 rather than as q = artanh r₂ - artanh r₁. ratio : as for two groups.
    """

    name: ClassVar[str] = "two-correlations"
    title: ClassVar[str] = "two independent correlations, z test"
    smallest: ClassVar[int] = 4

    baseline: float | None = None
    ratio: float = 1.0

    def __post_init__(self) -> None:
        between("ratio", self.ratio, 0.001, 1000, ends="[]")
        if self.baseline is not None:
            between("baseline", self.baseline, -1, 1)

    @property
    def law(self) -> Law:
        return NORMAL

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        own = EffectMetric("q", "difference of Fisher's z", -36, 36)
        if self.baseline is None:
            return (own,)
        first = np.arctanh(self.baseline)
        return (
            own,
            EffectMetric(
                "r",
                "correlation in group 2",
                -1,
                1,
                lambda r: np.arctanh(r) - first,
                lambda q: np.tanh(q + first),
                f"group 1 has r = {self.baseline:g}",
            ),
        )

    def sizes(self, n: Array) -> Array:
        larger = np.ceil(n * max(self.ratio, 1 / self.ratio) - 1e-9)
        return np.stack([n, larger] if self.ratio >= 1 else [larger, n])

    def standard_error(self, sizes: Array, effect: Array) -> Array:
        first, second = np.maximum(sizes - 3, 1e-3)
        return np.asarray(np.sqrt(1 / first + 1 / second))

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect / self.standard_error(sizes, effect))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return np.asarray(1.0), np.asarray(0.0)

    def assumptions(self) -> tuple[str, ...]:
        return ("bivariate normal samples; Fisher's z taken as normal with variance 1/(n-3)",)


@dataclass(frozen=True, slots=True)
class Regression(Design):
    """What a set of predictors adds to a linear regression, F test (Cohen 1988, ch. 9).

    added_terms : predictors in the set. all_terms : all of them, the set included. other_r2 : R² of
    the remaining predictors, needed when the effect is given as the increment of R². Predictors
    are taken as fixed: λ = f²·N.
    """

    name: ClassVar[str] = "regression"
    title: ClassVar[str] = "increment of R² in a regression, F test"
    group_word: ClassVar[str] = "sample"
    degree: ClassVar[int] = 2

    added_terms: int = 1
    all_terms: int | None = None
    other_r2: float = 0.0

    def __post_init__(self) -> None:
        whole("added_terms", self.added_terms, 1, 10_000)
        between("other_r2", self.other_r2, 0, 1, ends="[)")
        if self.all_terms is not None:
            whole("all_terms", self.all_terms, 1, 100_000)
            if self.all_terms < self.added_terms:
                raise SettingError(
                    "--all-terms",
                    f"{self.all_terms} in all cannot hold {self.added_terms} tested ones",
                )

    @property
    def law(self) -> Law:
        return F

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        rest = 1 - self.other_r2
        metrics = [
            EffectMetric("f2", "Cohen's f²", 0, 400),
            EffectMetric("f", "Cohen's f", 0, 20, np.square, np.sqrt),
            EffectMetric(
                "r2",
                "increment of R²",
                0,
                rest,
                lambda share: share / (rest - share),
                lambda f2: rest * f2 / (1 + f2),
                f"f² = ΔR²/(1 - R² of the whole model), R² of the other predictors "
                f"{self.other_r2:g}",
            ),
        ]
        if self.added_terms == 1:
            metrics.append(
                EffectMetric(
                    "partial-r",
                    "partial correlation",
                    0,
                    1,
                    lambda r: r * r / (1 - r * r),
                    lambda f2: np.sqrt(f2 / (1 + f2)),
                    "the F test has no direction; f² = r²/(1-r²)",
                )
            )
        return tuple(metrics)

    @property
    def _all(self) -> int:
        return self.added_terms if self.all_terms is None else self.all_terms

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(np.sqrt(effect * sizes[0]))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return np.asarray(float(self.added_terms)), sizes[0] - self._all - 1

    def assumptions(self) -> tuple[str, ...]:
        return (
            f"{self.added_terms} of {self._all} predictors tested, predictors taken as "
            "fixed, errors normal with one variance",
        )


@dataclass(frozen=True, slots=True)
class Contingency(Design):
    """Chi-square test of a contingency table or of fit, noncentral chi-square (Cohen 1988, ch. 7).

    rows, columns : of the table; df1 : degrees of freedom instead. λ = w²·N.
    """

    name: ClassVar[str] = "contingency"
    title: ClassVar[str] = "contingency table, chi-square test"
    group_word: ClassVar[str] = "sample"

    rows: int = 2
    columns: int = 2
    df1: int | None = None

    def __post_init__(self) -> None:
        whole("rows", self.rows, 2, 10_000)
        whole("columns", self.columns, 2, 10_000)
        if self.df1 is not None:
            whole("df1", self.df1, 1, 10_000)

    @property
    def law(self) -> Law:
        return CHI_SQUARE

    @property
    def _df(self) -> int:
        return (self.rows - 1) * (self.columns - 1) if self.df1 is None else self.df1

    @property
    def metrics(self) -> tuple[EffectMetric, ...]:
        own = EffectMetric("w", "Cohen's w", 0, 100)
        if self.df1 is not None:
            return (own,)
        root = np.sqrt(min(self.rows, self.columns) - 1)
        return (
            own,
            EffectMetric("v", "Cramér's V", 0, 1, lambda v: v * root, lambda w: w / root),
        )

    def sizes(self, n: Array) -> Array:
        return np.asarray(n)[None]

    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        return np.asarray(effect * np.sqrt(sizes[0]))

    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        return (np.asarray(float(self._df)),)

    def assumptions(self) -> tuple[str, ...]:
        return (
            f"chi-square test on {self._df} df; its large-sample distribution, expected counts of "
            "at least about 5",
        )
