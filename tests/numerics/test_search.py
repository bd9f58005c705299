"""The smallest integer of a monotone condition: against brute force, from any start."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from netsize.numerics.search import smallest_integer


@given(
    thresholds=st.lists(st.integers(-5, 130), min_size=1, max_size=30),
    guess=st.integers(-10, 10**6),
)
def test_every_answer_is_the_first_that_holds(thresholds: list[int], guess: int) -> None:
    limit = np.array(thresholds)
    found, exists = smallest_integer(
        lambda n, t: n >= t, limit, first=2, last=100, guess=float(guess)
    )
    expected = np.maximum(limit, 2)
    np.testing.assert_array_equal(exists, expected <= 100)
    np.testing.assert_array_equal(found, np.where(expected <= 100, expected, 0))


def test_without_a_guess_and_with_nan_as_a_guess() -> None:
    for guess in (None, np.nan):
        found, exists = smallest_integer(
            lambda n, t: n >= t, [[3, 50], [7, 9]], first=1, last=60, guess=guess
        )
        np.testing.assert_array_equal(found, [[3, 50], [7, 9]])
        assert exists.all()


def test_a_good_guess_costs_two_evaluations() -> None:
    calls: list[int] = []

    def holds(n: np.ndarray, t: np.ndarray) -> np.ndarray:
        calls.append(n.size)
        return n >= t

    targets = np.arange(10, 1010)
    smallest_integer(holds, targets, first=1, last=10**9, guess=targets)
    assert sum(calls) == 2 * targets.size


def test_finished_elements_are_not_evaluated_again() -> None:
    seen: list[np.ndarray] = []

    def holds(n: np.ndarray, t: np.ndarray) -> np.ndarray:
        seen.append(t)
        return n >= t

    smallest_integer(holds, np.array([1, 900]), first=1, last=1000)
    assert (seen[-1] == 900).all()


@pytest.mark.parametrize("shape", [(), (1,), (2, 3)])
def test_shapes_pass_through(shape: tuple[int, ...]) -> None:
    found, exists = smallest_integer(lambda n, t: n >= t, np.full(shape, 4), first=1, last=9)
    assert found.shape == exists.shape == shape
    assert found.dtype == np.int64
