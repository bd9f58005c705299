"""Helpers for tests of every package."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence

import numpy as np
import pytest
from hypothesis import settings
from numpy.typing import NDArray

# the same examples in every run, and no clock: machines differ
settings.register_profile("netsize", deadline=None, derandomize=True)
settings.load_profile("netsize")

Rule = tuple[NDArray[np.float64], NDArray[np.float64]]


@pytest.fixture(scope="session")
def panels() -> Callable[..., Rule]:
    """panels(ends, parts=1) → nodes and weights of a composite Gauss-Legendre rule.

    80 points on each of `parts` equal pieces of each stretch between increasing `ends`.
    """
    x, w = np.polynomial.legendre.leggauss(80)

    def rule(ends: Sequence[float], parts: int = 1) -> Rule:
        coarse = np.unique(ends)
        edges = np.unique(
            np.concatenate([np.linspace(a, b, parts + 1) for a, b in itertools.pairwise(coarse)])
        )
        half = np.diff(edges) / 2
        return (edges[:-1, None] + half[:, None] * (1 + x)).ravel(), (half[:, None] * w).ravel()

    return rule
