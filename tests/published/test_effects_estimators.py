"""Unbiased estimators against their published forms, and against exact expectations.

Values marked "recomputed" have no publication behind them, only an independent recomputation.
"""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from scipy import special, stats

from netsize.effect_sizes import estimators
from netsize.numerics import correlation, noncentral_t


def test_small_sample_factor_of_hedges_1981(columns):
    m, exact, approximate = columns("hedges_cm", "m", "c_exact", "c_approx")
    factor = estimators.small_sample_factor(m)
    assert factor == pytest.approx(exact, abs=1e-8)  # recomputed from the closed form, eq. 6e
    # Hedges's approximation 1 - 3/(4m - 1) is stated to be within .007, and .0005 for m ≥ 10
    assert np.max(np.abs(factor - approximate)) < 0.0075
    assert np.max(np.abs(factor - approximate)[m >= 10]) < 3.5e-4


@pytest.mark.parametrize("m", [1.001, 1.5, 2, 3, 9.7, 38, 1000, 12345.5, 1e6])
def test_small_sample_factor_at_40_digits(m):
    with mp.workdps(40):
        half = mp.mpf(m) / 2
        ratio = mp.loggamma(half) - mp.loggamma(half - mp.mpf(1) / 2)
        reference = float(mp.exp(ratio) / mp.sqrt(half))
    assert float(estimators.small_sample_factor(m)) == pytest.approx(reference, rel=2e-14)


# Olkin & Pratt (1958): the formula is theirs, the values recomputed
OLKIN_PRATT = {
    (0.3, 20): 0.308538,
    (0.5, 20): 0.511452,
    (0.5, 10): 0.528992,
    (0.5, 30): 0.507116,
    (0.7, 15): 0.714940,
    (0.9, 10): 0.911177,
    (0.2, 50): 0.202094,
    (0.1, 100): 0.100517,
}


def test_unbiased_correlation_values():
    r, n = np.array(list(OLKIN_PRATT)).T
    assert estimators.unbiased_correlation(r, n) == pytest.approx(
        list(OLKIN_PRATT.values()), abs=5e-7
    )


@pytest.mark.parametrize("n", [4, 5, 6, 11, 60, 1000, 10**6])
@pytest.mark.parametrize("r", [-0.999, -0.4, 1e-6, 0.02, 0.6, 0.99999])
def test_unbiased_correlation_at_40_digits(r, n):
    with mp.workdps(40):
        x, c = mp.mpf(r), (mp.mpf(n) - 2) / 2
        if n < 60:
            series = mp.hyp2f1(0.5, 0.5, c, 1 - x * x)
        else:  # the definition's series, which mpmath's own choice of method makes very slow
            series = term = mp.mpf(1)
            k = 0
            while term > mp.mpf(10) ** -42:
                term *= (k + mp.mpf(1) / 2) ** 2 / ((c + k) * (k + 1)) * (1 - x * x)
                series += term
                k += 1
        reference = float(x * series)
    assert float(estimators.unbiased_correlation(r, n)) == pytest.approx(reference, rel=1e-11)


@pytest.mark.parametrize(
    ("rho", "n"), [(0.5, 20), (0.3, 12), (0.8, 15), (0.6, 4), (-0.9, 5), (0.4, 3), (0.95, 60)]
)
def test_unbiased_correlation_is_unbiased(panels, rho, n):
    # the third parameter (n-1)/2 in pairs, a common slip, would give .49943 for (.5, 20)
    z, weights = panels([-17, -8, -3, 0, np.arctanh(rho), 3, 8, 17])
    r = np.tanh(z)
    height = np.exp(correlation.log_density(r, rho, n)) * (1 - r) * (1 + r)
    assert weights @ height == pytest.approx(1, abs=1e-6)
    assert weights @ (estimators.unbiased_correlation(r, n) * height) == pytest.approx(
        rho, abs=1e-6
    )


@pytest.mark.parametrize("theta", [0, 0.4, 1.5])
@pytest.mark.parametrize("m", [2, 3, 5, 18, 100])
def test_g_and_its_variance_are_unbiased(panels, theta, m):
    # two equal groups; t = √m sinh v turns the power tails of t into exponential ones
    v0 = 4 / (m + 2)
    end = 6 + 40 / max(m - 2, 1)
    v, weights = panels([-end, -4, -1, 0, 1, 4, end])
    t = np.sqrt(m) * np.sinh(v)
    height = np.exp(noncentral_t.log_density(t, m, theta / np.sqrt(v0))) * np.sqrt(m) * np.cosh(v)
    g = estimators.small_sample_factor(m) * t * np.sqrt(v0)
    assert weights @ height == pytest.approx(1, abs=1e-9)
    assert weights @ (g * height) == pytest.approx(theta, abs=1e-9)
    if m > 2:  # the variance of g on 2 degrees of freedom is infinite
        variance = weights @ (g * g * height) - theta**2
        expected = weights @ (estimators.unbiased_variance(g, m, v0) * height)
        assert expected == pytest.approx(variance, rel=1e-8)


@pytest.mark.parametrize(("df1", "df2", "ncp"), [(2, 57, 8.0), (1, 5, 0.0), (4, 9, 30.0)])
def test_noncentrality_estimate_is_unbiased(df1, df2, ncp):
    mean, variance = stats.ncf.stats(df1, df2, ncp, moments="mv")
    slope = float(estimators.unbiased_noncentrality(1.0, df1, df2) + df1)
    assert slope * mean - df1 == pytest.approx(ncp, abs=1e-9)
    ours = estimators.unbiased_noncentrality_variance(ncp, df1, df2)
    assert float(ours) == pytest.approx(slope**2 * variance, rel=1e-9)


def test_shares_of_variance_of_a_printed_anova_table():
    """A published 2×2 table: SS 186.0937042, 63.6027042, 106.2604167 on 1 df each, error
    14295.21251 on 380 df, printed F 4.95, 1.69, 2.82; the shares recomputed from it."""
    ss = np.array([186.0937042, 63.6027042, 106.2604167])
    f = ss / (14295.21251 / 380)
    assert f == pytest.approx([4.95, 1.69, 2.82], abs=0.005)
    others = f.sum() - f
    assert estimators.eta_squared(f, 1, 380, others=others) == pytest.approx(
        [0.012702, 0.004341, 0.007253], abs=5e-7
    )
    assert estimators.eta_squared(f, 1, 380) == pytest.approx(
        [0.012851, 0.004430, 0.007378], abs=5e-7
    )
    assert estimators.omega_squared(f, 1, 380, others=others) == pytest.approx(
        [0.010108, 0.001769, 0.004673], abs=5e-7
    )
    assert estimators.epsilon_squared(f, 1, 380, others=others) == pytest.approx(
        [0.010134, 0.001773, 0.004685], abs=5e-7
    )


@pytest.mark.parametrize(
    ("df1", "df2", "f", "eta", "omega", "epsilon"),
    [
        (2, 57, 5, 0.14925, 0.11765, 0.11940),
        (3, 60, 3, 0.13043, 0.08571, 0.08696),
        (1, 38, 8, 0.17391, 0.14894, 0.15217),
        (4, 50, 11.221, 0.47304, 0.42639, 0.43088),
    ],
)
def test_shares_of_variance_from_f(df1, df2, f, eta, omega, epsilon):
    # recomputed; the last is Fleishman's (1980) F in Steiger (2004)
    assert float(estimators.eta_squared(f, df1, df2)) == pytest.approx(eta, abs=5e-6)
    assert float(estimators.omega_squared(f, df1, df2)) == pytest.approx(omega, abs=5e-6)
    assert float(estimators.epsilon_squared(f, df1, df2)) == pytest.approx(epsilon, abs=5e-6)


def test_epsilon_squared_is_nearly_unbiased_where_eta_squared_is_not():
    # no effect, exact law: F(3, 20) ~ beta; E η² = df1/(df1+df2), E ε² = 0 (Okada 2013)
    x = special.roots_jacobi(200, 9, 0.5)
    nodes, weights = (1 + x[0]) / 2, x[1] / x[1].sum()
    f = nodes / (1 - nodes) * 20 / 3
    assert weights @ estimators.eta_squared(f, 3, 20) == pytest.approx(3 / 23, abs=1e-9)
    assert weights @ estimators.epsilon_squared(f, 3, 20) == pytest.approx(0, abs=1e-9)
