"""Distributions of one real quantity held as probability masses on the cells of a grid."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from netsize.numerics.arrays import Array, BoolArray

__all__ = ["GridDistribution", "cell_edges"]


def cell_edges(points: Array) -> Array:
    """Edges (G+1,) of the cells around increasing points (G,): midpoints, mirrored at both ends."""
    middle = (points[1:] + points[:-1]) / 2
    first, last = 2 * points[0] - middle[0], 2 * points[-1] - middle[-1]
    return np.concatenate([[first], middle, [last]])


@dataclass(frozen=True, slots=True, eq=False)
class GridDistribution:
    """A distribution spread evenly over each cell of a grid, with what escapes beyond its ends.

    Attributes
    ----------
    edges : cell edges, shape (G+1,), increasing; two equal edges hold a point mass.
    mass : probability of each cell, shape (G,), at least 0.
    below, above : probability beyond the first and last edge. A confidence distribution whose
        likelihood levels off has such mass: its quantile there is -inf or inf, which says
        "no finite limit" rather than naming the end of a grid.

    The masses and the two ends sum to 1.
    """

    edges: Array
    mass: Array
    below: float = 0.0
    above: float = 0.0

    def __post_init__(self) -> None:
        total = self.mass.sum() + self.below + self.above
        if self.edges.size != self.mass.size + 1 or not np.isclose(total, 1.0, atol=1e-9):
            raise ValueError("masses must match the cells of the grid and sum to 1")

    @classmethod
    def from_weights(cls, points: Array, weights: Array) -> GridDistribution:
        """The distribution with masses proportional to `weights` on the cells around `points`."""
        return cls(edges=cell_edges(points), mass=weights / weights.sum())

    @classmethod
    def at(cls, value: float) -> GridDistribution:
        """All mass at one value."""
        return cls(edges=np.array([value, value]), mass=np.array([1.0]))

    @classmethod
    def from_cdf(cls, points: Array, cdf: Array) -> GridDistribution:
        """From a distribution function at increasing points; what lies outside escapes."""
        cdf = np.maximum.accumulate(np.clip(cdf, 0.0, 1.0))
        return cls(edges=points, mass=np.diff(cdf), below=float(cdf[0]), above=float(1.0 - cdf[-1]))

    @classmethod
    def mixture(
        cls, parts: Sequence[GridDistribution], weights: Sequence[float]
    ) -> GridDistribution:
        """The mixture of distributions with the given weights (positive, any sum)."""
        shares = np.asarray(weights, dtype=float) / np.sum(weights)
        edges = np.unique(np.concatenate([part.edges for part in parts]))
        jumps = np.unique(np.concatenate([part.edges[:-1][_flat(part)] for part in parts]))
        edges = np.sort(np.concatenate([edges, jumps]))  # a jump twice: a cell of zero width
        mass = np.zeros(edges.size - 1)
        narrow = np.diff(edges) == 0
        for part, share in zip(parts, shares, strict=True):
            spread = np.interp(edges, part.edges, part._cumulative(~_flat(part)))
            mass += share * np.diff(spread)
            cells = np.searchsorted(edges[:-1][narrow], part.edges[:-1][_flat(part)])
            mass[np.flatnonzero(narrow)[cells]] += share * part.mass[_flat(part)]
        return cls(
            edges=edges,
            mass=mass,
            below=float(sum(s * p.below for s, p in zip(shares, parts, strict=True))),
            above=float(sum(s * p.above for s, p in zip(shares, parts, strict=True))),
        )

    @property
    def points(self) -> Array:
        """Midpoint of each cell, shape (G,)."""
        return (self.edges[1:] + self.edges[:-1]) / 2

    def _cumulative(self, include: BoolArray | None = None) -> Array:
        mass = self.mass if include is None else np.where(include, self.mass, 0.0)
        return np.concatenate([[0.0], np.cumsum(mass)])

    def cdf(self, x: ArrayLike) -> Array:
        """P(X ≤ x), any shape; a point mass counts from its value on."""
        x = np.asarray(x, dtype=float)
        flat = _flat(self)
        spread = np.interp(x, self.edges, self._cumulative(~flat))
        jumps = np.sort(self.edges[:-1][flat])
        heights = np.concatenate([[0.0], np.cumsum(self.mass[flat])])
        inside = spread + heights[np.searchsorted(jumps, x, side="right")]
        value = self.below + inside
        return np.where(x == np.inf, 1.0, np.where(x == -np.inf, 0.0, np.minimum(value, 1.0)))

    def quantile(self, probability: ArrayLike) -> Array:
        """The smallest x with P(X ≤ x) ≥ probability, any shape; ±inf in an escaping end."""
        p = np.asarray(probability, dtype=float)
        cumulative = self.below + self._cumulative()
        cell = np.clip(np.searchsorted(cumulative, p, side="left") - 1, 0, self.mass.size - 1)
        with np.errstate(all="ignore"):
            share = np.where(self.mass[cell] > 0, (p - cumulative[cell]) / self.mass[cell], 0.0)
        x = self.edges[cell] + np.clip(share, 0.0, 1.0) * (self.edges[cell + 1] - self.edges[cell])
        tiny = 1e-12  # rounding of the sum of the masses
        x = np.where(p < self.below - tiny, -np.inf, x)
        return np.where(p > 1.0 - self.above + tiny, np.inf, x)

    def expectation(self, function: Callable[[Array], Array]) -> float:
        """E f(X) for a bounded f, each cell at its midpoint, the escaped ends at f(±inf)."""
        value = float(self.mass @ function(self.points))
        if self.below > 0:
            value += self.below * float(function(np.array([-np.inf]))[0])
        if self.above > 0:
            value += self.above * float(function(np.array([np.inf]))[0])
        return value

    @property
    def mean(self) -> float:
        """E X; infinite or nan where mass escapes an end."""
        return self.expectation(lambda x: x)

    @property
    def sd(self) -> float:
        """Standard deviation, the spread within cells included; nan where mass escapes."""
        if self.below > 0 or self.above > 0:
            return float("nan")
        width = np.diff(self.edges)
        return float(np.sqrt(self.mass @ ((self.points - self.mean) ** 2 + width**2 / 12)))

    def restrict(self, low: float, high: float) -> GridDistribution:
        """The distribution given low < X ≤ high; ValueError where that has no probability."""
        left = self.below if low < self.edges[0] else 0.0
        right = self.above if high > self.edges[-1] else 0.0
        edges = np.clip(self.edges, low, high)
        width = np.diff(self.edges)
        whole = (self.edges[:-1] > low) & (self.edges[1:] <= high)
        with np.errstate(all="ignore"):
            share = np.where(width > 0, np.diff(edges) / width, whole)
        mass = self.mass * share
        total = mass.sum() + left + right
        if total <= 0:
            raise ValueError("the interval carries no probability")
        return GridDistribution(edges, mass / total, below=left / total, above=right / total)

    def mapped(self, function: Callable[[Array], Array]) -> GridDistribution:
        """The distribution of an increasing function of X."""
        return GridDistribution(function(self.edges), self.mass, self.below, self.above)


def _flat(part: GridDistribution) -> BoolArray:
    return np.asarray(np.diff(part.edges) == 0)
