"""Tests of asymmetry and of the significant results against published and recomputed figures."""

from __future__ import annotations

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import stats

from netsize.effect_sizes.records import Evidence
from netsize.synthesis.asymmetry import rank_test_many, regression_test_many
from netsize.synthesis.conditional import Domain
from netsize.synthesis.significance import (
    effects_for_power,
    excess_significance,
    expected_significant,
    significant_shape,
    two_sided_power,
)


def _evidence(y, se):
    z = float(stats.norm.ppf(0.975))
    return [
        Evidence(kernel="z", df=(), scale=1 / s, low=x / s, high=x / s, cuts=(z,),
                 band=0 if x / s > z else 1)
        for x, s in zip(y, se, strict=True)
    ]  # fmt: skip


def test_regression_of_passive_smoking(smoking):
    """.892 remembered from Rothstein, Sutton & Borenstein (2005); .902 recomputed."""
    test = regression_test_many(*smoking)
    assert float(test.slope) == pytest.approx(0.892, abs=0.02)
    assert (float(test.t), float(test.p)) == pytest.approx((2.382, 0.023), abs=5e-4)  # recomputed


def test_regression_of_teacher_expectancy(teachers):
    """Recomputed."""
    test = regression_test_many(*teachers)
    assert (float(test.slope), float(test.t), float(test.p)) == pytest.approx(
        (1.624, 2.038, 0.057), abs=5.1e-4
    )


def test_regression_is_eggers(bcg):
    """Egger et al. (1997): intercept of y/σ on 1/σ, by statsmodels."""
    y, v = bcg
    fit = sm.OLS(y / np.sqrt(v), sm.add_constant(1 / np.sqrt(v))).fit()
    test = regression_test_many(y, v)
    assert (float(test.slope), float(test.t), float(test.p)) == pytest.approx(
        (fit.params[0], fit.tvalues[0], fit.pvalues[0]), rel=1e-8
    )


def test_rank_test_of_passive_smoking(smoking):
    """Begg's tau .144, p .209: tau remembered as published, p recomputed."""
    test = rank_test_many(*smoking)
    assert (float(test.tau), float(test.p)) == pytest.approx((0.144, 0.209), abs=5e-4)


def test_rank_test_of_teacher_expectancy(teachers):
    """Recomputed, with ties."""
    test = rank_test_many(*teachers)
    assert (float(test.tau), float(test.p)) == pytest.approx((0.300, 0.074), abs=5e-4)


@pytest.mark.parametrize(("k", "ties"), [(4, False), (9, False), (33, False), (40, False),
                                         (7, True), (12, True), (40, True)])  # fmt: skip
def test_rank_test_against_scipy(k, ties):
    rng = np.random.default_rng(k)
    y, v = rng.normal(size=k), rng.uniform(0.5, 2, size=k)
    if ties:
        v = np.round(v, 1)
    w = 1 / v
    z = (y - (w * y).sum() / w.sum()) / np.sqrt(v - 1 / w.sum())
    reference = stats.kendalltau(z, v)
    test = rank_test_many(y, v)
    assert float(test.tau) == pytest.approx(reference.statistic, abs=1e-12)
    assert float(test.p) == pytest.approx(reference.pvalue, abs=1e-10)


def test_excess_significance_of_teacher_expectancy(columns):
    """Recomputed: the common effect as truth, O = 3, E = 1.268, chi-square 2.533, p .112."""
    y, se = columns("teacher_expectancy_raudenbush1984", "d", "vi")
    se = np.sqrt(se)
    common = np.average(y, weights=1 / se**2)
    power = two_sided_power(_evidence(y, se), float(common))
    assert power.sum() == pytest.approx(1.268, abs=5.1e-4)
    assert expected_significant(3, power) == pytest.approx((2.533, 0.112), abs=6e-4)
    record = excess_significance(_evidence(y, se), float(common))
    assert record.finding.startswith("3 of 19")
    assert record.p == pytest.approx(0.112, abs=6e-4)


@pytest.mark.parametrize(
    ("n", "d33"),
    [(10, 0.7220), (15, 0.5779), (20, 0.4959), (30, 0.4013), (50, 0.3087), (100, 0.2172)],
)
def test_effect_with_a_third_power(n, d33):
    """Simonsohn (2015) uses the effect that gives 33 % power, two-sided; values recomputed. Ours
    counts the predicted side only, which matters by less than .001."""
    critical = float(stats.t.ppf(0.975, 2 * n - 2))
    e = Evidence(kernel="t", df=(2.0 * n - 2,), scale=float(np.sqrt(n / 2)), low=3.0, high=3.0,
                 cuts=(critical,), band=0)  # fmt: skip
    found = effects_for_power([e], 1 / 3, Domain(-1.0, 1.0))[0]
    assert found == pytest.approx(d33, abs=1e-3)
    assert stats.nct.sf(critical, 2 * n - 2, found * np.sqrt(n / 2)) == pytest.approx(
        1 / 3, abs=1e-6
    )


def test_shape_of_significant_p_values_by_hand():
    """Simonsohn, Nelson & Simmons (2014): at no effect a significant p is uniform on (0, .05), so
    pp = p/.05, combined by Fisher's method (one-sided halves both, which changes nothing)."""
    z = np.array([2.1, 2.5, 3.2, 4.0])
    skew, flat = significant_shape(_evidence(z, np.ones(4)), Domain(-5.0, 12.0))
    share = stats.norm.sf(z) / 0.025
    assert skew.statistic == pytest.approx(-2 * np.log(share).sum(), rel=1e-10)
    assert skew.p == pytest.approx(stats.chi2.sf(skew.statistic, 8), rel=1e-10)
    centre = stats.norm.ppf(0.975) - stats.norm.isf(1 / 3)
    rest = 1 - stats.norm.sf(z - centre) * 3
    assert flat.statistic == pytest.approx(-2 * np.log(rest).sum(), rel=1e-6)
