"""Exact intervals against published worked examples of noncentral intervals.

Marked "published" where the figures were remembered from the source and recomputed with the same
digits, "recomputed" where only an independent quadrature stands behind them.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from netsize.effect_sizes import effects
from netsize.effect_sizes.intervals import exact_intervals
from netsize.numerics import noncentral_f
from netsize.reported.records import ReportedResult


def only_row(result, **settings):
    (row,) = effects([result], **settings).rows
    return row


def lambda_limits(f, df1, df2, level):
    row = only_row(ReportedResult(label="a", family="f", value=f, df=(df1, df2)), level=level)
    n = df1 + df2 + 1
    return row.low**2 * n, row.high**2 * n


def test_steiger_2004_fleishman():
    # Steiger (2004, Psych. Methods 9:164), data of Fleishman (1980): limits 19.38 and 71.5,
    # published; recomputed to more digits at 90 %
    low, high = lambda_limits(11.221, 4, 50, 0.9)
    assert low == pytest.approx(19.3800, abs=5e-5)
    assert high == pytest.approx(71.5493, abs=5e-5)
    assert low / 55 == pytest.approx(0.3524, abs=5e-5)
    assert high / (high + 55) == pytest.approx(0.5654, abs=5e-5)
    assert lambda_limits(11.221, 4, 50, 0.95) == pytest.approx((16.0892, 78.2793), abs=5e-5)


@pytest.mark.parametrize(
    ("f", "df1", "df2", "low", "high"),
    [(3.0, 3, 60, 0.2694, 19.5415), (5.0, 2, 57, 1.3507, 22.4344), (1.2, 3, 40, 0, 9.9504)],
)
def test_noncentrality_limits_90(f, df1, df2, low, high):
    assert lambda_limits(f, df1, df2, 0.9) == pytest.approx((low, high), abs=5e-5)  # recomputed


def test_noncentrality_limits_95_of_one_numerator_df():
    # recomputed; F(1, 38) = 8, both limits from the noncentral F, not from t
    got = noncentral_f.noncentrality(8.0, 1, 38, [0.975, 0.025])
    assert got == pytest.approx([0.5555, 23.7311], abs=5e-5)


@pytest.mark.parametrize(
    ("t", "n1", "n2", "low", "high"),
    [
        (2.0, 20, 20, -0.00728, 1.26430),
        (2.5, 30, 30, 0.12340, 1.16231),
        (1.0, 15, 15, -0.36002, 1.08394),
    ],
)
def test_interval_for_delta(t, n1, n2, low, high):
    # the method of Steiger & Fouladi (1997) and Cumming & Finch (2001); recomputed
    row = only_row(ReportedResult(label="a", family="t", value=t, df=(n1 + n2 - 2,), n=(n1, n2)))
    assert (row.low, row.high) == pytest.approx((low, high), abs=5e-6)


@pytest.mark.parametrize("m", [1, 2, 3, 10, 200])
@pytest.mark.parametrize("t", [-6.0, 0.0, 0.4, 3.0])
def test_ends_of_the_t_interval_against_scipy(m, t):
    row = only_row(ReportedResult(label="a", family="t", value=t, df=(m,), design="one-sample"))
    root = math.sqrt(m + 1)
    assert stats.nct.sf(t, m, row.low * root) == pytest.approx(0.025, abs=1e-8)
    assert stats.nct.cdf(t, m, row.high * root) == pytest.approx(0.025, abs=1e-8)


def test_interval_of_f_too_small_for_any_effect_is_a_point():
    row = only_row(ReportedResult(label="a", family="f", value=0.02, df=(3, 40)))
    assert (row.low, row.high) == (0.0, 0.0)
    assert any("the interval is the point 0" in a for a in row.assumptions)
    assert stats.f.cdf(0.02, 3, 40) < 0.025


def test_interval_of_an_inequality_joins_the_intervals_it_allows():
    below = only_row(ReportedResult(label="a", family="t", value=1.0, relation="<", df=(38,)))
    at_one = only_row(ReportedResult(label="a", family="t", value=1.0, df=(38,)))
    at_minus_one = only_row(ReportedResult(label="a", family="t", value=-1.0, df=(38,)))
    assert (below.low, below.high) == (at_minus_one.low, at_one.high)
    above = only_row(ReportedResult(label="a", family="t", value=1.0, relation=">", df=(38,)))
    assert above.low == at_one.low
    assert above.high == np.inf


def test_intervals_of_many_kernels_at_once_are_those_of_each_alone():
    rows = [
        only_row(ReportedResult(label="a", family="t", value=2.0, df=(20,))),
        only_row(ReportedResult(label="b", family="r", value=0.3, n=(40,))),
        only_row(ReportedResult(label="c", family="f", value=4.0, df=(2, 30))),
        only_row(ReportedResult(label="d", family="chi2", value=9.0, df=(2,), n=(50,))),
        only_row(ReportedResult(label="e", family="z", value=1.2, n=(50, 40))),
    ]
    low, high = exact_intervals([row.evidence for row in rows], level=0.95)
    assert low == pytest.approx([row.low for row in rows])
    assert high == pytest.approx([row.high for row in rows])
