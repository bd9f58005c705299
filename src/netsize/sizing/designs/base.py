"""What a design of a new study has to say: the one protocol behind all of them."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Callable
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from netsize.numerics.arrays import Array
from netsize.sizing.laws import Law, Parameters

__all__ = ["Design", "EffectMetric", "identity"]


def identity(x: Array) -> Array:
    """The design's own effect scale."""
    return np.asarray(x, dtype=float)


@dataclass(frozen=True, slots=True)
class EffectMetric:
    """One scale on which an effect may be given.

    Attributes
    ----------
    name : how options and JSON call it. title : in words.
    low, high : the open range of its values; low is included where it is 0 ("no effect").
    inward, outward : increasing array functions to and from the design's own scale.
    note : what a reader should know about the conversion.
    """

    name: str
    title: str
    low: float
    high: float
    inward: Callable[[Array], Array] = identity
    outward: Callable[[Array], Array] = identity
    note: str = ""


class Design(ABC):
    """A design with its test, as array functions of the group sizes and the effect.

    `sizes` arguments have shape (groups, ...): participants of each group, or clusters where
    whole clusters are allocated, possibly fractional; they broadcast with effects of shape (...).
    Subclasses are frozen dataclasses whose fields are the design's options.
    """

    name: ClassVar[str]
    title: ClassVar[str]
    group_word: ClassVar[str] = "group"  # what one entry of `sizes` is
    smallest: ClassVar[int] = 2  # of the group searched over
    degree: ClassVar[int] = 1  # the effect is proportional to this power of the noncentrality

    @property
    def null(self) -> float:
        """The effect from which the power rises; nan where it falls from 0 on both sides."""
        return 0.0

    @property
    @abstractmethod
    def law(self) -> Law:
        """Distribution of the test statistic."""

    @property
    @abstractmethod
    def metrics(self) -> tuple[EffectMetric, ...]:
        """Scales for the effect; the first is the design's own."""

    @abstractmethod
    def sizes(self, n: Array) -> Array:
        """Sizes of all groups, shape (groups, ...), when the smaller one has n."""

    @abstractmethod
    def noncentrality(self, sizes: Array, effect: Array) -> Array:
        """Root noncentrality (√λ, or δ with the sign of the effect)."""

    @abstractmethod
    def parameters(self, sizes: Array, effect: Array) -> Parameters:
        """The law's further parameters, degrees of freedom included."""

    def standard_error(self, sizes: Array, effect: Array) -> Array:
        """SE of the estimate where the test is a normal one; nan elsewhere."""
        return np.full(np.broadcast(sizes[0], effect).shape, np.nan)

    def exact_power(self, sizes: Array, effect: float, critical: float, sides: int) -> float | None:
        """Power without the normal approximation where the design knows it; sizes (groups,).

        `critical` is the normal quantile of one tail.
        """
        return None

    def signal(self, effect: Array) -> Array:
        """Its sign tells whether larger studies see the effect: above 0 they do, in the predicted
        direction; 0 never; below 0 only in the opposite one."""
        return np.asarray(effect, dtype=float)

    def assumptions(self) -> tuple[str, ...]:
        """What the computation takes for granted, a sentence each."""
        return ()
