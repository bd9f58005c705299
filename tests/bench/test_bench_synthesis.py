"""Time of the classical synthesis; measured and reported, never asserted."""

from __future__ import annotations

import numpy as np
import pytest

from netsize.synthesis.heterogeneity import HETEROGENEITY
from netsize.synthesis.random_effects import pool, pool_many
from netsize.synthesis.small_study import pet_peese_many
from netsize.synthesis.step_function import fit_step_function
from netsize.synthesis.trim_and_fill import trim_and_fill_many


@pytest.fixture(scope="module")
def literatures():
    rng = np.random.default_rng(0)
    v = rng.uniform(0.01, 0.2, (10_000, 10))
    return rng.normal(0.3, np.sqrt(v + 0.03)), v


@pytest.mark.parametrize("method", HETEROGENEITY)
def test_pool_ten_thousand_literatures(benchmark, literatures, method):
    benchmark(pool_many, *literatures, heterogeneity=method)


def test_pool_one_literature(benchmark, literatures):
    benchmark(pool, literatures[0][0], literatures[1][0])


def test_precision_effects_of_ten_thousand(benchmark, literatures):
    benchmark(pet_peese_many, *literatures)


def test_trim_and_fill_of_a_thousand(benchmark, literatures):
    benchmark(trim_and_fill_many, literatures[0][:1000], literatures[1][:1000])


def test_step_function_of_one(benchmark, literatures):
    benchmark(fit_step_function, literatures[0][0], literatures[1][0])
