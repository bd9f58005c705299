from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from netsize.numerics import noncentral_chi2

degrees = st.floats(1, 1e5)


def test_in_the_bulk_it_is_scipys():
    x = np.array([0.3, 4.0, 25.0, 80.0])[:, None]
    ncp = np.array([0.2, 6.0, 40.0])
    ours = noncentral_chi2.log_density(x, 3, ncp)
    assert ours == pytest.approx(stats.ncx2.logpdf(x, 3, ncp), rel=1e-9)
    assert noncentral_chi2.upper_tail(x, 3, ncp) == pytest.approx(
        stats.ncx2.sf(x, 3, ncp), rel=1e-7
    )


@given(z=st.floats(0.05, 30), delta=st.floats(0, 30))
def test_one_df_is_the_square_of_a_normal(z, delta):
    both = np.logaddexp(stats.norm.logpdf(z - delta), stats.norm.logpdf(z + delta)) - np.log(2 * z)
    assert noncentral_chi2.log_density(z * z, 1, delta**2) == pytest.approx(both, abs=1e-9)


@given(x=st.floats(0.01, 2e4), df=degrees, ncp=st.floats(0, 1e4))
def test_tails_are_complements(x, df, ncp):
    lower = noncentral_chi2.lower_tail(x, df, ncp)
    assert lower + noncentral_chi2.upper_tail(x, df, ncp) == pytest.approx(1, abs=1e-9)


@pytest.mark.parametrize("df", [1, 1.4, 2, 30, 1e5])
@pytest.mark.parametrize("ncp", [0.0, 4.0, 300.0])
def test_density_integrates_to_one(panels, df, ncp):
    # x = e^v tames the density at 0
    mean, sd = df + ncp, np.sqrt(2 * (df + 2 * ncp))
    low = np.log(max(mean - 14 * sd, 1e-30 if df < 3 else 1e-9))
    high = np.log(mean + 30 * sd)
    v, weights = panels([low, high], 60)
    height = np.exp(noncentral_chi2.log_density(np.exp(v), df, ncp) + v)
    assert weights @ height == pytest.approx(1, abs=1e-8)


def test_far_upper_tail_without_noncentrality():
    x = np.array([60.0, 300.0, 1200.0])
    assert noncentral_chi2.upper_tail(x, 4, 0) == pytest.approx(stats.chi2.sf(x, 4), rel=1e-10)


@given(x=st.floats(20, 1e4), df=st.floats(1, 10), p=st.floats(0.01, 0.99))
def test_noncentrality_is_the_root_it_says(x, df, p):
    ncp = noncentral_chi2.noncentrality(x, df, p)
    if ncp > 0:
        assert noncentral_chi2.lower_tail(x, df, ncp) == pytest.approx(p, abs=1e-9)
    else:
        assert noncentral_chi2.lower_tail(x, df, 0) <= p


@pytest.mark.parametrize(("x", "df", "ncp"), [(0, 2, 1), (1, 0, 1), (1, 2, -1), (np.inf, 2, 1)])
def test_outside_its_range_the_density_is_nan(x, df, ncp):
    assert np.isnan(noncentral_chi2.log_density(x, df, ncp))
