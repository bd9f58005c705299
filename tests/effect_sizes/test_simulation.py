"""Simulated studies: unbiased estimators sit on the truth where the printed ones do not, and exact
intervals cover at their level. Seeds are fixed; bounds are four Monte Carlo standard errors."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from netsize.effect_sizes import estimators
from netsize.effect_sizes.intervals import exact_intervals
from netsize.effect_sizes.records import Evidence

pytestmark = pytest.mark.slow


def bias(values, truth) -> float:
    """Bias in Monte Carlo standard errors."""
    return float((values.mean() - truth) / (values.std(ddof=1) / np.sqrt(values.size)))


def coverage(kernel, df, scale, x, theta, level=0.9) -> float:
    evidence = [
        Evidence(kernel=kernel, df=df, scale=scale, low=v, high=v, cuts=(2.0,), band=1)
        for v in x.tolist()
    ]
    low, high = exact_intervals(evidence, level=level)
    return float(np.mean((low <= theta) & (theta <= high)))


@pytest.mark.parametrize(("n", "theta"), [(5, 0.8), (10, 0.5)])
def test_mean_differences(n, theta):
    rng = np.random.default_rng(20)
    first = rng.normal(theta, 1, (200_000, n))
    second = rng.normal(0, 1, (200_000, n))
    sd = np.sqrt((first.var(axis=1, ddof=1) + second.var(axis=1, ddof=1)) / 2)
    d = (first.mean(axis=1) - second.mean(axis=1)) / sd
    g = estimators.small_sample_factor(2 * n - 2) * d
    assert abs(bias(g, theta)) < 4
    assert bias(d, theta) > 10
    v = estimators.unbiased_variance(g, 2 * n - 2, 2 / n)
    assert abs(bias(v - (g - theta) ** 2, 0)) < 4
    scale = np.sqrt(n / 2)
    covered = coverage("t", (2.0 * n - 2,), scale, (d * scale)[:4000], theta)
    assert covered == pytest.approx(0.9, abs=4 * np.sqrt(0.09 / 4000))


@pytest.mark.parametrize(("n", "rho"), [(6, 0.6), (15, 0.4)])
def test_correlations(n, rho):
    rng = np.random.default_rng(21)
    x = rng.normal(size=(200_000, n))
    y = rho * x + np.sqrt(1 - rho**2) * rng.normal(size=(200_000, n))
    x -= x.mean(axis=1, keepdims=True)
    y -= y.mean(axis=1, keepdims=True)
    r = (x * y).sum(axis=1) / np.sqrt((x * x).sum(axis=1) * (y * y).sum(axis=1))
    assert abs(bias(estimators.unbiased_correlation(r, n), rho)) < 4
    assert bias(r, rho) < -10
    covered = coverage("r", (n - 2.0,), 1.0, r[:4000], np.arctanh(rho))
    assert covered == pytest.approx(0.9, abs=4 * np.sqrt(0.09 / 4000))


@pytest.mark.parametrize("f", [0.0, 0.3])
def test_shares_of_variance(f):
    groups, n = 4, 8
    rng = np.random.default_rng(22)
    means = np.array([-1.0, -1.0, 1.0, 1.0]) * f
    data = rng.normal(means[:, None], 1, (100_000, groups, n))
    between = n * data.mean(axis=2).var(axis=1, ddof=1)
    within = data.var(axis=2, ddof=1).mean(axis=1)
    ratio, df1, df2 = between / within, groups - 1, groups * (n - 1)
    square = estimators.unbiased_noncentrality(ratio, df1, df2) / (groups * n)
    assert abs(bias(square, f * f)) < 4
    assert bias(df1 * ratio / df2, f * f) > 10  # the printed η²/(1-η²)
    truth = f * f / (1 + f * f)
    # ε² and ω² divide by an estimate, so only nearly unbiased; η² is visibly not
    eta = estimators.eta_squared(ratio, df1, df2).mean() - truth
    for nearly in (estimators.epsilon_squared, estimators.omega_squared):
        assert abs(nearly(ratio, df1, df2).mean() - truth) < 0.1 * eta
    assert estimators.epsilon_squared(ratio, df1, df2).clip(0).mean() - truth > 0.008
    # at f = 0 the interval covers unless its lower end is above 0: with probability .95
    expected = 0.9 if f else 0.95
    scale = np.sqrt(groups * n)
    covered = coverage("f", (df1, df2), scale, ratio[:4000], f)
    assert covered == pytest.approx(expected, abs=4 * np.sqrt(0.09 / 4000))


def test_coverage_of_chi_square():
    x = stats.ncx2.rvs(3, 40 * 0.3**2, size=4000, random_state=np.random.default_rng(23))
    covered = coverage("chi2", (3.0,), np.sqrt(40), x, 0.3)
    assert covered == pytest.approx(0.9, abs=4 * np.sqrt(0.09 / 4000))
