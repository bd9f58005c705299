"""Several results from one sample."""

from __future__ import annotations

import numpy as np
import pytest
import statsmodels.api as sm

import netsize
from netsize.errors import SettingError
from netsize.synthesis.dependence import clustered_line, composites, sample_codes

ONE = "A: t(38) = 2.3\nB: t(58) = 2.9\nC: t(78) = 1.0\nD: t(48) = 2.2"
DOUBLED = (
    "A: t(38) = 2.3 [sample a]\nA2: t(38) = 2.3 [sample a]\n"
    "B: t(58) = 2.9\nC: t(78) = 1.0\nD: t(48) = 2.2"
)


def test_composite_of_two_by_hand():
    """Borenstein, Hedges, Higgins & Rothstein (2009), ch. 24, formula: variance of a mean of two
    outcomes is (v₁ + v₂ + 2ρ√(v₁v₂))/4."""
    y, v = composites(
        np.array([0.3, 0.1, 0.9]), np.array([0.05, 0.04, 0.2]), np.array([0, 0, 1]), correlation=0.5
    )
    assert y == pytest.approx([0.2, 0.9])
    assert v[0] == pytest.approx((0.05 + 0.04 + 2 * 0.5 * np.sqrt(0.05 * 0.04)) / 4)
    assert v[1] == pytest.approx(0.2)


def test_codes_follow_first_appearance():
    assert sample_codes(["b", "a", "b", "c"]).tolist() == [0, 1, 0, 2]


def test_printing_a_result_twice_changes_nothing_when_fully_correlated():
    once = netsize.weigh(ONE)
    twice = netsize.weigh(DOUBLED, within_sample_correlation=1.0)
    assert twice.pooled.mean == pytest.approx(once.pooled.mean, abs=1e-9)
    assert (twice.pooled.low, twice.pooled.high) == pytest.approx(
        (once.pooled.low, once.pooled.high), abs=1e-9
    )
    for a, b in zip(once.corrections, twice.corrections, strict=True):
        if b.key == "conditional-quantiles" or a.estimate is None:
            continue  # the sum of shares has no weights; a note says so
        assert b.estimate == pytest.approx(a.estimate, abs=2e-4), a.key


def test_twice_counts_for_less_than_two_samples():
    apart = netsize.weigh(DOUBLED.replace(" [sample a]", ""))
    together = netsize.weigh(DOUBLED)
    assert together.samples == 4
    assert apart.samples == 5
    assert together.pooled.used == 4
    assert any("4 samples" in note for note in together.notes)


def test_clustered_line_against_statsmodels():
    """Sandwich by hand with the factor G/(G-1) · (k-1)/(k-p)."""
    rng = np.random.default_rng(0)
    codes = np.array([0, 0, 1, 2, 2, 2, 3, 4])
    x, y, w = rng.normal(size=8), rng.normal(size=8), rng.uniform(1, 3, 8)
    fit = clustered_line([np.ones(8), x], y, w, codes)
    design = np.column_stack([np.ones(8), x])
    bread = np.linalg.inv(design.T @ (w[:, None] * design))
    beta = bread @ design.T @ (w * y)
    scores = design * (w * (y - design @ beta))[:, None]
    meat = sum(np.outer(scores[codes == g].sum(0), scores[codes == g].sum(0)) for g in range(5))
    expected = np.sqrt(np.diag(bread @ meat @ bread) * 5 / 4 * 7 / 6)
    assert fit.coefficients == pytest.approx(beta)
    assert fit.se == pytest.approx(expected)
    assert fit.df == 4
    reference = sm.WLS(y, design, weights=w).fit(cov_type="cluster", cov_kwds={"groups": codes})
    assert fit.se == pytest.approx(reference.bse)


def test_clustered_errors_are_an_option():
    clustered = netsize.weigh(DOUBLED, dependence="clustered")
    assert "clustered" in clustered.pooled.method
    assert clustered.pooled.used == 5
    assert clustered.pooled.df == 3
    rows = {e.key: e for e in clustered.estimators}
    assert rows["pet"].used == 5
    assert "clustered by 4 samples" in rows["pet"].reason
    # without shared samples the option makes no difference
    assert netsize.weigh(ONE, dependence="clustered").pooled == netsize.weigh(ONE).pooled


def test_few_clusters_say_so():
    text = "A: t(38) = 2.3 [sample a]\nB: t(58) = 2.9 [sample a]\nC: t(78) = 1.0 [sample a]"
    weighing = netsize.weigh(text, dependence="clustered")
    assert "one sample" in weighing.pooled.reason
    rows = {e.key: e for e in weighing.estimators}
    assert rows["pet"].status == "too few results"


def test_correlation_range():
    with pytest.raises(SettingError, match="--within-sample-correlation"):
        netsize.weigh(DOUBLED, within_sample_correlation=1.5)
