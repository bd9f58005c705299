"""Pooling against published analyses of open data sets and against statsmodels.

Figures marked "published" were remembered from the source named and came out of an independent
recomputation with the same digits; "recomputed" ones have no publication behind them, only an
independent recomputation with numpy, scipy and quadrature.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats
from statsmodels.stats.meta_analysis import combine_effects

from netsize.synthesis.heterogeneity import q_profile, tau_squared
from netsize.synthesis.random_effects import pool

# BCG log risk ratios: τ² published for all six (Colditz et al. 1994; van Houwelingen, Arends &
# Stijnen 2002; DerSimonian & Laird 1986 and the authors of each estimator), mean and standard error
# published for DerSimonian-Laird and REML, recomputed for the others.
BCG = {
    "dersimonian-laird": (0.3088, -0.7141, 0.1787),
    "likelihood": (0.2800, -0.7112, 0.1719),
    "restricted-likelihood": (0.3132, -0.7145, 0.1798),
    "paule-mandel": (0.3181, -0.7150, 0.1809),
    "hedges": (0.3286, -0.7159, 0.1833),
    "sidik-jonkman": (0.3455, -0.7172, 0.1871),
}


@pytest.mark.parametrize("method", BCG)
def test_bcg_log_risk_ratios(bcg, method):
    tau2, mean, se = BCG[method]
    result = pool(*bcg, heterogeneity=method, interval="wald")
    assert result.tau2 == pytest.approx(tau2, abs=5e-5)
    assert result.mean == pytest.approx(mean, abs=6e-5)
    assert result.se == pytest.approx(se, abs=5.1e-5)


def test_bcg_heterogeneity_and_common_effect(bcg):
    y, v = bcg
    result = pool(y, v)
    assert result.q == pytest.approx(152.233, abs=5e-4)  # published
    assert 100 * result.i2 == pytest.approx(92.12, abs=5e-3)  # published
    common = pool(y, v, interval="wald", heterogeneity="dersimonian-laird")
    assert np.exp([common.mean, common.low, common.high]) == pytest.approx(
        [0.490, 0.345, 0.695], abs=5.1e-4
    )  # published risk ratio
    # Viechtbauer (2007) method, recomputed
    assert q_profile(y, v) == pytest.approx((0.1197, 1.1115), abs=5e-5)
    # Hartung-Knapp with REML, recomputed
    assert (result.se, result.low, result.high) == pytest.approx(
        (0.18079, -1.1084, -0.3206), abs=5e-5
    )


def test_bcg_log_odds_ratios(columns):
    """Van Houwelingen, Arends & Stijnen (2002), likelihood: published."""
    a, b, c, d = columns("bcg_colditz1994", "tpos", "tneg", "cpos", "cneg")
    result = pool(
        np.log(a * d / (b * c)), 1 / a + 1 / b + 1 / c + 1 / d,
        heterogeneity="likelihood", interval="wald",
    )  # fmt: skip
    assert (result.tau2, result.mean, result.se) == pytest.approx((0.302, -0.742, 0.178), abs=6e-4)


def test_teacher_expectancy(teachers):
    """Raudenbush & Bryk print .083, .052, .019 (REML) and .078, .047, .013 (ML)."""
    y, v = teachers
    reml = pool(y, v, interval="wald")
    assert (reml.mean, reml.se, reml.tau2) == pytest.approx((0.0837, 0.0516, 0.0188), abs=1e-3)
    assert reml.q == pytest.approx(35.83, abs=5e-3)  # published
    ml = pool(y, v, interval="wald", heterogeneity="likelihood")
    assert (ml.mean, ml.se, ml.tau2) == pytest.approx((0.078, 0.047, 0.0126), abs=5e-4)
    dl = pool(y, v, interval="wald", heterogeneity="dersimonian-laird")  # recomputed
    assert (dl.mean, dl.se, dl.tau2) == pytest.approx((0.0893, 0.0558, 0.0259), abs=5e-5)
    assert float(tau_squared(y, v, method="paule-mandel").value) == pytest.approx(0.0518, abs=5e-5)
    assert q_profile(y, v) == pytest.approx((0.0059, 0.1977), abs=5e-5)  # recomputed


def test_passive_smoking(smoking):
    """Hackshaw, Law & Wald (1997), abstract, read: excess risk 24 %, 95 % interval 13 to 36 %."""
    y, v = smoking
    result = pool(y, v, heterogeneity="dersimonian-laird", interval="wald")
    excess = 100 * np.expm1([result.mean, result.low, result.high])
    assert np.round(excess) == pytest.approx([24, 13, 36])
    assert (result.tau2, result.q) == pytest.approx((0.01704, 47.50), abs=5e-3)  # recomputed


@pytest.fixture(scope="module")
def borenstein(columns):
    """Borenstein, Hedges, Higgins & Rothstein (2009), chapter 14: the three worked examples."""
    m1, s1, n1, m2, s2, n2 = columns(
        "borenstein2009_ch14_continuous", "m1", "sd1", "n1", "m2", "sd2", "n2"
    )
    pooled = np.sqrt(((n1 - 1) * s1**2 + (n2 - 1) * s2**2) / (n1 + n2 - 2))
    d = (m1 - m2) / pooled
    j = 1 - 3 / (4 * (n1 + n2 - 2) - 1)
    continuous = j * d, j**2 * ((n1 + n2) / (n1 * n2) + d**2 / (2 * (n1 + n2)))
    a, b, c, e = columns("borenstein2009_ch14_binary", "e1", "ne1", "e2", "ne2")
    binary = np.log(a * e / (b * c)), 1 / a + 1 / b + 1 / c + 1 / e
    r, n = columns("borenstein2009_ch14_correlations", "r", "n")
    return {
        "continuous": continuous,
        "binary": binary,
        "correlations": (np.arctanh(r), 1 / (n - 3)),
    }


def test_borenstein_worked_examples(borenstein):
    """Published, except the standard errors .2388 and .1298 (recomputed); the book's .1055 for the
    continuous example recomputes to .1052."""
    g = pool(*borenstein["continuous"], heterogeneity="dersimonian-laird", interval="wald")
    assert (g.mean, g.tau2) == pytest.approx((0.3582, 0.0373), abs=1e-4)
    assert g.se == pytest.approx(0.1055, abs=5e-4)
    assert (g.q, 100 * g.i2) == pytest.approx((12.003, 58.34), abs=5e-3)
    assert (g.prediction_low, g.prediction_high) == pytest.approx((-0.2525, 0.9690), abs=1e-3)
    odds = pool(*borenstein["binary"], heterogeneity="dersimonian-laird", interval="wald")
    assert (odds.mean, odds.tau2, odds.se) == pytest.approx((-0.5663, 0.1729, 0.2388), abs=1e-4)
    z = pool(*borenstein["correlations"], heterogeneity="dersimonian-laird", interval="wald")
    assert (z.mean, z.tau2, z.se) == pytest.approx((0.5328, 0.0819, 0.1298), abs=1e-4)
    assert np.tanh([z.mean, z.low, z.high]) == pytest.approx([0.4875, 0.271, 0.657], abs=5e-4)


@pytest.mark.parametrize(
    ("example", "method", "tau2"),
    [
        ("continuous", "likelihood", 0.02472),
        ("continuous", "restricted-likelihood", 0.03211),
        ("continuous", "paule-mandel", 0.02271),
        ("continuous", "hedges", 0.01009),
        ("continuous", "sidik-jonkman", 0.02679),
        ("binary", "restricted-likelihood", 0.15605),
        ("binary", "paule-mandel", 0.09088),
        ("correlations", "restricted-likelihood", 0.04998),
        ("correlations", "paule-mandel", 0.04180),
    ],
)
def test_borenstein_other_estimators(borenstein, example, method, tau2):
    """Recomputed."""
    assert float(tau_squared(*borenstein[example], method=method).value) == pytest.approx(
        tau2, abs=2e-5
    )


def test_borenstein_hartung_knapp(borenstein):
    """Recomputed, with DerSimonian-Laird."""
    result = pool(*borenstein["continuous"], heterogeneity="dersimonian-laird")
    assert (result.se, result.low, result.high) == pytest.approx(
        (0.09021, 0.1263, 0.5901), abs=2e-4
    )


@pytest.mark.parametrize("name", ["bcg", "teachers", "smoking"])
@pytest.mark.parametrize(
    ("ours", "theirs"), [("dersimonian-laird", "chi2"), ("paule-mandel", "iterated")]
)
def test_against_statsmodels(request, name, ours, theirs):
    y, v = request.getfixturevalue(name)
    reference = combine_effects(y, v, method_re=theirs, atol=1e-14)
    plain = pool(y, v, heterogeneity=ours, interval="wald")
    assert plain.tau2 == pytest.approx(reference.tau2, rel=1e-6)
    assert plain.mean == pytest.approx(reference.mean_effect_re, rel=1e-6)
    assert plain.se == pytest.approx(reference.sd_eff_w_re, rel=1e-6)
    assert plain.q == pytest.approx(reference.q, rel=1e-10)
    adjusted = pool(y, v, heterogeneity=ours)
    assert adjusted.se == pytest.approx(reference.sd_eff_w_re_hksj, rel=1e-6)
    half = stats.t.ppf(0.975, y.size - 1) * reference.sd_eff_w_re_hksj
    assert adjusted.high - adjusted.mean == pytest.approx(half, rel=1e-6)
