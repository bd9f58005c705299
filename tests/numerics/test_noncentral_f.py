from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from netsize.numerics import noncentral_f, noncentral_t

degrees = st.floats(1, 1e5)


def test_in_the_bulk_it_is_scipys():
    f = np.array([0.01, 0.8, 2.5, 9.0])[:, None]
    ncp = np.array([0.2, 6.0, 40.0])
    ours = noncentral_f.log_density(f, 3, 40, ncp)
    assert ours == pytest.approx(stats.ncf.logpdf(f, 3, 40, ncp), rel=1e-9)
    assert noncentral_f.upper_tail(f, 3, 40, ncp) == pytest.approx(
        stats.ncf.sf(f, 3, 40, ncp), rel=1e-9
    )


@given(t=st.floats(0.05, 30), df=degrees, ncp=st.floats(0, 30))
def test_one_numerator_df_is_the_square_of_t(t, df, ncp):
    both = np.logaddexp(
        noncentral_t.log_density(t, df, ncp), noncentral_t.log_density(-t, df, ncp)
    ) - np.log(2 * t)
    assert noncentral_f.log_density(t * t, 1, df, ncp**2) == pytest.approx(both, abs=1e-9)


@given(f=st.floats(0.01, 50), df1=degrees, df2=degrees, ncp=st.floats(0, 1e4))
def test_tails_are_complements(f, df1, df2, ncp):
    lower = noncentral_f.lower_tail(f, df1, df2, ncp)
    assert lower + noncentral_f.upper_tail(f, df1, df2, ncp) == pytest.approx(1, abs=1e-9)


def test_tiny_noncentrality_is_none():
    # scipy 1.17 gives .11 here
    assert noncentral_f.lower_tail(2, 1, 1, 8e-301) == noncentral_f.lower_tail(2, 1, 1, 0)


@pytest.mark.parametrize(("df1", "df2"), [(1, 3), (1.4, 2), (2, 57), (40, 5), (1e4, 1e4)])
@pytest.mark.parametrize("ncp", [0.0, 4.0, 300.0])
def test_density_integrates_to_one(panels, df1, df2, ncp):
    # ln F = v: both tails of F become exponential
    low, high = -80 / df1 - 2, 80 / df2 + np.log1p(ncp / df1) + 3
    v, weights = panels([low, high], 60)
    height = np.exp(noncentral_f.log_density(np.exp(v), df1, df2, ncp) + v)
    assert weights @ height == pytest.approx(1, abs=1e-8)


@pytest.mark.parametrize("df2", [1, 2, 5, 60, 1e6])
@pytest.mark.parametrize("ncp", [0, 7])
def test_far_upper_tail_continues_the_near_one(df2, ncp):
    # around the probability at which the tail changes from complement to integral
    f = noncentral_f.lower_tail  # the library's lower tail places the crossing
    grid = np.logspace(0, 10, 4000)
    near = np.flatnonzero(1 - f(grid, 3, df2, ncp) > 1e-4)[-1]
    pair = grid[near : near + 2]
    upper = noncentral_f.upper_tail(pair, 3, df2, ncp)
    assert upper == pytest.approx(1 - f(pair, 3, df2, ncp), rel=1e-9)
    assert upper[1] < upper[0]


def test_far_upper_tail_without_noncentrality():
    f = np.array([30.0, 200.0, 5000.0])
    assert noncentral_f.upper_tail(f, 2, 57, 0) == pytest.approx(stats.f.sf(f, 2, 57), rel=1e-9)


def test_noncentrality_at_the_boundary():
    # an F so small that no λ > 0 leaves 2.5 % below it
    assert noncentral_f.noncentrality(0.02, 3, 40, 0.025) == 0
    assert noncentral_f.noncentrality(0.0, 3, 40, [0.975, 0.025]).tolist() == [0, 0]


@given(f=st.floats(2, 40), df1=st.floats(1, 1e3), df2=st.floats(3, 1e5), p=st.floats(0.01, 0.2))
def test_noncentrality_is_the_root_it_says(f, df1, df2, p):
    ncp = noncentral_f.noncentrality(f, df1, df2, p)
    assert noncentral_f.lower_tail(f, df1, df2, ncp) == pytest.approx(p, abs=1e-9)


@pytest.mark.parametrize(
    ("f", "df1", "df2", "ncp"),
    [(0, 2, 5, 1), (-1, 2, 5, 1), (1, 0, 5, 1), (1, 2, -5, 1), (1, 2, 5, -1), (np.nan, 2, 5, 1)],
)
def test_outside_its_range_the_density_is_nan(f, df1, df2, ncp):
    assert np.isnan(noncentral_f.log_density(f, df1, df2, ncp))


def test_arrays_give_the_numbers_of_their_elements():
    f, ncp = np.logspace(-1, 1, 5)[:, None], np.array([0.0, 3.0, 700.0, 9000.0])
    together = noncentral_f.log_density(f, 3, 60, ncp)
    one = [[noncentral_f.log_density(a, 3, 60, b) for b in ncp] for a in f[:, 0]]
    assert together == pytest.approx(np.array(one), rel=1e-12)
