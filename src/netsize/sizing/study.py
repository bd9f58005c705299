"""A design with the modifiers that any design takes: the power of a study of a given size."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, BoolArray, broadcast
from netsize.sizing.checks import between, option, whole
from netsize.sizing.designs import Design, EffectMetric, design_named
from netsize.sizing.laws import Parameters

__all__ = ["LARGEST", "Modifiers", "Study", "make_study"]

LARGEST = 10**8  # of one group; beyond it a study counts as impossible
_MANY = 1e6  # a size at which large-sample behaviour shows


@dataclass(frozen=True, slots=True, kw_only=True)
class Modifiers:
    """What applies to every design.

    Attributes
    ----------
    alpha : level of the test (of the family where there are several tests).
    sides : 2, or 1 for the predicted direction only; F and chi-square tests have no sides.
    tests : number of tests that share alpha, each at alpha/tests (Bonferroni; Dunn 1961).
    loss : expected share of participants recruited but not analysed.
    cluster_size : participants analysed per cluster; whole clusters are allocated to groups.
        cluster_correlation : intraclass correlation. The effective size is that of participants
        over the design effect 1+(m-1)ICC (Kish 1965; Donner & Klar 2000); error degrees of freedom
        count clusters.
    covariate_r2 : share of the error variance that the covariates explain; the noncentrality λ
        grows by 1/(1-r²) (Cohen 1988, p. 380; Borm, Fransen & Lemmens 2007). covariates : how many,
        each costs one error degree of freedom.
    """

    alpha: float = 0.05
    sides: int = 2
    tests: int = 1
    loss: float = 0.0
    cluster_size: int = 1
    cluster_correlation: float = 0.0
    covariate_r2: float = 0.0
    covariates: int = 1

    def __post_init__(self) -> None:
        between("alpha", self.alpha, 0, 1)
        if self.sides not in (1, 2):
            raise SettingError("--sides", f"{self.sides!r} is neither 1 nor 2")
        whole("tests", self.tests, 1)
        between("loss", self.loss, 0, 1, ends="[)")
        whole("cluster_size", self.cluster_size, 1, 10**6)
        between("cluster_correlation", self.cluster_correlation, 0, 1, ends="[]")
        between("covariate_r2", self.covariate_r2, 0, 1, ends="[)")
        whole("covariates", self.covariates, 1, 1000)
        if self.cluster_correlation > 0 and self.cluster_size == 1:
            raise SettingError(
                "--cluster-correlation", "give the participants per cluster with --cluster-size"
            )

    @property
    def design_effect(self) -> float:
        """1+(m-1)ICC."""
        return 1 + (self.cluster_size - 1) * self.cluster_correlation


@dataclass(frozen=True, slots=True)
class Study:
    """A design under modifiers.

    Its sizes are counted in *units* of the smaller group: participants analysed, or clusters where
    `cluster_size` is above 1. All functions broadcast units against effects on the design's own
    scale.
    """

    design: Design
    modifiers: Modifiers = Modifiers()

    def __post_init__(self) -> None:
        if not self.design.law.directional and self.modifiers.sides == 1:
            raise SettingError(
                "--sides",
                f"the test of the design {self.design.name} has no direction; leave it out",
            )
        if self.modifiers.covariate_r2 > 0 and not self.design.law.covariable:
            raise SettingError(
                "--covariate-r2", f"the test of the design {self.design.name} takes no covariate"
            )

    @property
    def tail(self) -> float:
        """Level of one tail of each test."""
        m = self.modifiers
        return m.alpha / m.tests / (m.sides if self.design.law.directional else 1)

    @property
    def _two_tails(self) -> bool:
        return self.design.law.directional and self.modifiers.sides == 2

    def sees(self, effect: Array) -> BoolArray:
        """Whether a large enough study of this effect has any power wanted."""
        signal = self.design.signal(effect)
        return np.asarray(signal != 0 if self._two_tails else signal > 0)

    @property
    def first(self) -> int:
        """The fewest units with which the test exists: one error degree of freedom is left."""
        start = self.design.smallest
        if self.design.law.covariable:  # its last parameter counts them
            while np.any(self.terms(np.asarray(float(start)), np.asarray(0.0))[1][-1] < 1):
                start += 1
        return start

    def groups(self, units: Array) -> Array:
        """Participants analysed in each group, shape (groups, ...)."""
        return np.asarray(self.design.sizes(units) * self.modifiers.cluster_size)

    def recruited(self, units: Array) -> Array:
        """Participants to recruit in each group so that those of `groups` remain."""
        m = self.modifiers
        sizes = self.design.sizes(units)
        if m.cluster_size > 1:
            sizes = sizes * np.ceil(m.cluster_size / (1 - m.loss) - 1e-9)
        else:
            sizes = np.ceil(sizes / (1 - m.loss) - 1e-9)
        return np.asarray(sizes)

    def terms(self, units: Array, effect: Array) -> tuple[Array, Parameters]:
        """Root noncentrality and parameters of the law."""
        m, law = self.modifiers, self.design.law
        sizes = self.design.sizes(units)
        effective = sizes * (m.cluster_size / m.design_effect)
        ncp = self.design.noncentrality(effective, effect)
        parameters = self.design.parameters(sizes if law.error_df else effective, effect)
        if m.covariate_r2 > 0:
            ncp = ncp / np.sqrt(1 - m.covariate_r2)
            parameters = (*parameters[:-1], parameters[-1] - m.covariates)
        return ncp, parameters

    def standard_error(self, units: Array, effect: Array) -> Array:
        """SE of the estimate of a normal test, on the design's own scale."""
        m = self.modifiers
        effective = self.design.sizes(units) * (m.cluster_size / m.design_effect)
        return self.design.standard_error(effective, effect)

    def predicted(self, units: ArrayLike, effect: ArrayLike) -> Array:
        """P(significant in the predicted direction), which is the positive one."""
        ncp, parameters = self.terms(*broadcast(units, effect))
        return self.design.law.chance(self.tail, ncp, parameters)

    def opposite(self, units: ArrayLike, effect: ArrayLike) -> Array:
        """P(significant against the predicted direction); 0 for one-sided and undirected tests."""
        units, effect = broadcast(units, effect)
        if not self._two_tails:
            return np.zeros(units.shape)
        ncp, parameters = self.terms(units, effect)
        return self.design.law.chance(self.tail, -ncp, parameters)

    def power(self, units: ArrayLike, effect: ArrayLike) -> Array:
        """P(significant), both tails counted where the test has two."""
        return np.minimum(self.near_tail(units, effect) + self.far_tail(units, effect), 1.0)

    def near_tail(self, units: ArrayLike, effect: ArrayLike) -> Array:
        """P(significant in the direction of the effect), for a one-sided test in the predicted."""
        return self._tail(units, effect, 1.0)

    def far_tail(self, units: ArrayLike, effect: ArrayLike) -> Array:
        """P(significant against the direction of the effect), at most the level of one tail."""
        if not self._two_tails:
            return np.zeros(np.broadcast(units, effect).shape)
        return self._tail(units, effect, -1.0)

    def _tail(self, units: ArrayLike, effect: ArrayLike, side: float) -> Array:
        ncp, parameters = self.terms(*broadcast(units, effect))
        if self._two_tails:
            ncp = side * np.abs(ncp)
        return self.design.law.chance(self.tail, ncp, parameters)

    def guess(self, effect: Array, target: Array) -> Array:
        """About the units that the target needs, to start a search."""
        law = self.design.law
        ncp, parameters = self.terms(np.asarray(_MANY), effect)
        with np.errstate(all="ignore"):
            needed = law.needed(self.tail, target, parameters)
            units = np.maximum(_MANY * (needed / ncp) ** 2, self.first)
            # once more with the degrees of freedom of that size
            ncp, parameters = self.terms(units, effect)
            units *= (law.needed(self.tail, target, parameters) / ncp) ** 2
        return np.ceil(units - 0.5)

    def metric(self, name: str | None) -> EffectMetric:
        """The scale called `name`; the design's own for None."""
        metrics = self.design.metrics
        if name is None:
            return metrics[0]
        for metric in metrics:
            if metric.name == name:
                return metric
        raise SettingError(
            "--metric",
            f"the design {self.design.name} takes {', '.join(m.name for m in metrics)}, "
            f"not {name!r}" + _missing_option(self.design, name),
        )


def _missing_option(design: Design, name: str) -> str:
    needs = {("paired", "d"): "--pair-correlation", ("two-correlations", "r"): "--baseline"}
    wanted = needs.get((design.name, name))
    return f"; give {wanted} to convert" if wanted else ""


def make_study(design: Study | Design | str, **settings: Any) -> Study:
    """The study meant by a design (its name or record) and settings of the design and modifiers."""
    if isinstance(design, Study):
        if settings:
            raise SettingError(option(next(iter(settings))), "the study given already has settings")
        return design
    ours = {f.name for f in fields(Modifiers)}
    modifiers = Modifiers(**{k: v for k, v in settings.items() if k in ours})
    options = {k: v for k, v in settings.items() if k not in ours}
    if isinstance(design, str):
        return Study(design_named(design, **options), modifiers)
    if options:
        raise SettingError(option(next(iter(options))), "set it on the design record")
    return Study(design, modifiers)
