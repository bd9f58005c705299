from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from netsize.numerics import noncentral_t

DF = np.array([1.0, 2.0, 7.5, 38.0, 1e4])


@given(t=st.floats(-50, 50), df=st.floats(1, 1e6), ncp=st.floats(-40, 40))
def test_mirroring_t_and_delta_changes_nothing(t, df, ncp):
    assert noncentral_t.log_density(t, df, ncp) == pytest.approx(
        noncentral_t.log_density(-t, df, -ncp), rel=1e-12
    )
    assert noncentral_t.lower_tail(t, df, ncp) == noncentral_t.upper_tail(-t, df, -ncp)


def test_without_noncentrality_it_is_student():
    t = np.array([-30.0, -1.2, 0.0, 0.4, 8.0])[:, None]
    assert noncentral_t.log_density(t, DF, 0) == pytest.approx(stats.t.logpdf(t, DF), rel=1e-10)
    assert noncentral_t.upper_tail(t, DF, 0) == pytest.approx(stats.t.sf(t, DF), rel=1e-9)


@pytest.mark.parametrize("df", [1.0, 3.0, 40.0, 1e6])
@pytest.mark.parametrize("ncp", [-20.0, 0.0, 0.7, 55.0])
def test_density_integrates_to_one(panels, df, ncp):
    # t = sinh v: the tails fall as e^{-df v}
    end = 6 + 30 / df + np.arcsinh(abs(ncp))
    v, weights = panels([-end, 0, end], 30)
    height = np.exp(noncentral_t.log_density(np.sinh(v), df, ncp)) * np.cosh(v)
    assert weights @ height == pytest.approx(1, abs=2e-8)


@given(t=st.floats(-30, 30), df=st.floats(1, 1e5), p=st.floats(0.001, 0.999))
def test_noncentrality_is_the_root_it_says(t, df, p):
    ncp = noncentral_t.noncentrality(t, df, p)
    assert noncentral_t.lower_tail(t, df, ncp) == pytest.approx(p, abs=1e-9)


def test_beside_zero_the_tail_is_that_of_zero():
    # scipy 1.17 returns nan here
    tail = noncentral_t.lower_tail([-5e-158, 0.0, 5e-158], 1, 0.674)
    assert tail == pytest.approx(stats.norm.cdf(-0.674), rel=1e-12)


def test_infinite_t_is_certain():
    assert noncentral_t.lower_tail([-np.inf, np.inf], 5, 1).tolist() == [0, 1]


@pytest.mark.parametrize(
    ("t", "df", "ncp"), [(np.nan, 5, 0), (1, 0, 0), (1, -3, 0), (1, 5, np.nan), (np.inf, 5, 0)]
)
def test_outside_its_range_the_density_is_nan(t, df, ncp):
    assert np.isnan(noncentral_t.log_density(t, df, ncp))


def test_arrays_give_the_numbers_of_their_elements():
    t, ncp = np.linspace(-5, 9, 7)[:, None, None], np.linspace(-3, 8, 4)[:, None]
    together = noncentral_t.log_density(t, DF, ncp)
    assert together.shape == (7, 4, 5)
    one = [
        float(noncentral_t.log_density(a, b, c))
        for a, b, c in zip(*(x.ravel() for x in np.broadcast_arrays(t, DF, ncp)), strict=True)
    ]
    assert together.ravel() == pytest.approx(one, rel=1e-13)
