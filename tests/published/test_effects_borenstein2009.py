"""Worked examples of Borenstein, Hedges, Higgins & Rothstein (2009), chapters 4 to 7 and 14.

Their inputs are remembered from the book; their results were remembered and came out of an
independent recomputation with the same digits.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from netsize.effect_sizes import effects
from netsize.effect_sizes.conversions import d_from_log_odds, d_from_z, z_from_d
from netsize.effect_sizes.estimators import large_sample_variance, small_sample_factor
from netsize.reported.records import Counts, Group, ReportedResult


def only_row(result, **settings):
    (row,) = effects([result], **settings).rows
    return row


def test_chapter_4_independent_groups():
    groups = (Group(103, 5.5, 50), Group(100, 4.5, 50))
    row = only_row(
        ReportedResult(label="a", family="means", groups=groups), variance="large-sample"
    )
    assert row.printed == pytest.approx(0.5970, abs=5e-5)
    assert row.estimate == pytest.approx(0.5924, abs=5e-5)
    j = float(small_sample_factor(98))
    assert j == pytest.approx(0.9923, abs=5e-5)
    v = float(large_sample_variance(row.printed, 100, row.null_variance))
    assert v == pytest.approx(0.0418, abs=5e-5)
    assert j**2 * v == pytest.approx(0.0411, abs=5e-5)
    assert j * math.sqrt(v) == pytest.approx(0.2028, abs=1e-4)
    # ours puts g, not d, into the formula; the book multiplies by J²
    assert row.variance == pytest.approx(0.0411, abs=1e-3)


def test_chapter_4_matched_groups():
    # the book gives the difference, 3, and the SD of the differences, 5.5
    result = ReportedResult(
        label="a", family="means", groups=(Group(3, 5.5, 50),), design="paired", correlation=0.7
    )
    row = only_row(result, metric="mean-difference")
    assert row.printed == pytest.approx(0.4225, abs=5e-5)
    j = float(small_sample_factor(49))
    assert j == pytest.approx(0.9846, abs=1e-4)
    assert row.estimate == pytest.approx(0.4160, abs=1e-4)
    # The book's variance is 2(1-r)(1/n + d²/2n) = .0131 (.0127 for g). Its second term belongs to
    # d_z: on the scale of d the factor cancels, 2(1-r)/n + d²/2n (Becker 1988), as here.
    book = 2 * (1 - 0.7) * (1 / 50 + row.printed**2 / 100)
    assert book == pytest.approx(0.0131, abs=5e-5)
    assert j**2 * book == pytest.approx(0.0127, abs=5e-5)
    ours = float(large_sample_variance(row.printed, 50, row.null_variance))
    assert ours - book == pytest.approx((1 - 0.6) * row.printed**2 / 100, rel=1e-9)


def test_chapter_5_odds_ratio():
    row = only_row(
        ReportedResult(label="a", family="counts", counts=(Counts(5, 100), Counts(10, 100)))
    )
    assert row.metric.name == "log-ratio"
    assert row.estimate == pytest.approx(-0.7472, abs=5e-5)
    assert row.variance == pytest.approx(0.3216, abs=5e-5)
    assert math.sqrt(row.variance) == pytest.approx(0.5671, abs=5e-5)
    assert dict(row.others)["log_risk_ratio"] == pytest.approx(-0.6931, abs=5e-5)


def test_chapter_6_correlation():
    row = only_row(ReportedResult(label="a", family="r", value=0.5, n=(100,)))
    assert row.estimate == pytest.approx(0.5493, abs=5e-5)
    assert row.variance == pytest.approx(0.0103, abs=5e-5)
    assert math.sqrt(row.variance) == pytest.approx(0.1015, abs=5e-5)


def test_chapter_7_log_odds_to_d():
    d, v = d_from_log_odds(0.9069, 0.0676)
    assert d == pytest.approx(0.5, abs=5e-5)
    assert v == pytest.approx(0.0205, abs=1e-4)


def test_chapter_7_r_to_d_and_back():
    r, v_r = 0.5, 0.0058
    v_z = v_r / (1 - r * r) ** 2
    d, v_d = d_from_z(math.atanh(r), v_z)
    assert d == pytest.approx(1.1547, abs=5e-5)
    assert v_d == pytest.approx(0.0550, abs=5e-5)
    z, back = z_from_d(d, v_d)
    assert math.tanh(z) == pytest.approx(r)
    assert back * (1 - r * r) ** 2 == pytest.approx(0.0058, abs=5e-5)


def test_chapter_14_continuous(columns):
    m1, sd1, n1, m2, sd2, n2 = columns(
        "borenstein2009_ch14_continuous", "m1", "sd1", "n1", "m2", "sd2", "n2"
    )
    results = [
        ReportedResult(
            label=str(i),
            family="means",
            groups=(Group(m1[i], sd1[i], int(n1[i])), Group(m2[i], sd2[i], int(n2[i]))),
        )
        for i in range(6)
    ]
    table = effects(results)
    g = [row.estimate for row in table.rows]
    assert g == pytest.approx([0.0945, 0.2774, 0.3665, 0.6644, 0.4618, 0.1852], abs=2e-4)
    # the book's variances: J² times the large-sample variance of d
    v = [
        float(small_sample_factor(sum(row.groups) - 2) ** 2)
        * float(large_sample_variance(row.printed, row.n, row.null_variance))
        for row in table.rows
    ]
    assert v == pytest.approx([0.0329, 0.0307, 0.0499, 0.0105, 0.0427, 0.0234], abs=1e-4)
    # and the unbiased ones agree with them to within 3 %, from 20 a group on
    assert [row.variance for row in table.rows] == pytest.approx(v, rel=0.03)


def test_chapter_14_correlations(columns):
    r, n = columns("borenstein2009_ch14_correlations", "r", "n")
    results = [
        ReportedResult(label=str(i), family="r", value=float(r[i]), n=(int(n[i]),))
        for i in range(6)
    ]
    table = effects(results)
    assert [row.estimate for row in table.rows] == pytest.approx(np.arctanh(r))
    assert [row.variance for row in table.rows] == pytest.approx(1 / (n - 3))
