from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from netsize.numerics import correlation

correlations = st.floats(-0.999, 0.999)
pairs = st.integers(3, 10**6)


@given(r=correlations, rho=correlations, n=pairs)
def test_mirroring_r_and_rho_changes_nothing(r, rho, n):
    assert correlation.log_density(r, rho, n) == pytest.approx(
        correlation.log_density(-r, -rho, n), rel=1e-11, abs=1e-9
    )
    assert correlation.lower_tail(r, rho, n) == correlation.upper_tail(-r, -rho, n)


@given(r=correlations, n=pairs)
def test_without_correlation_it_is_t(r, n):
    t = r * np.sqrt((n - 2) / (1 - r * r))
    assert correlation.lower_tail(r, 0, n) == pytest.approx(
        stats.t.cdf(t, n - 2), rel=1e-8, abs=1e-300
    )


@given(r=correlations, rho=correlations, n=pairs)
def test_tails_are_complements(r, rho, n):
    both = correlation.lower_tail(r, rho, n) + correlation.upper_tail(r, rho, n)
    assert both == pytest.approx(1, abs=1e-12)


@pytest.mark.parametrize("n", [3, 4, 5, 12, 13, 100, 10**6])
@pytest.mark.parametrize("rho", [-0.9999, 0.0, 0.31, 0.95])
def test_density_integrates_to_its_tail(panels, n, rho):
    theta, reach = np.arctanh(rho), min(12 / np.sqrt(n - 2), 18 - abs(np.arctanh(rho)))
    z, weights = panels([theta - reach, theta, theta + reach], 15)
    r = np.tanh(z)
    height = np.exp(correlation.log_density(r, rho, n)) * (1 - r) * (1 + r)
    inside = correlation.lower_tail(np.tanh(theta + reach), rho, n) - correlation.lower_tail(
        np.tanh(theta - reach), rho, n
    )
    assert weights @ height == pytest.approx(inside, abs=1e-8)


@given(r=st.floats(-0.99, 0.99), n=pairs, p=st.floats(0.001, 0.999))
def test_coefficient_is_the_root_it_says(r, n, p):
    rho = correlation.coefficient(r, n, p)
    if abs(rho) < 1 - 1e-9:  # nearer to ±1 a double cannot hold ρ
        assert correlation.lower_tail(r, rho, n) == pytest.approx(p, abs=1e-7)


def test_small_correlations_in_large_samples():
    # ρ = .005 is detectable with n in the hundreds of thousands; the law is then almost normal
    n = 313_000
    critical = 1.96 / np.sqrt(n)
    power = float(correlation.upper_tail(critical, 0.005, n))
    assert power == pytest.approx(stats.norm.sf(1.96 - 0.005 * np.sqrt(n)), abs=2e-4)


def test_edges():
    assert correlation.lower_tail([-2.0, -1.0, 1.0, 1.5], 0.2, 10).tolist() == [0, 0, 1, 1]
    assert np.isneginf(correlation.log_density(0.3, [1.0, -1.0], 10)).all()
    assert np.isnan(correlation.log_density([1.0, 0.2, np.nan], 0.1, [10, 2, 10])).all()
    assert np.isnan(correlation.coefficient([1.0, 0.3, 0.3], [9, 2, 9], [0.5, 0.5, 0.0])).all()
