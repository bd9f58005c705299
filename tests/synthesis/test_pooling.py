"""Properties of pooling: invariances, extremes of k, and arrays against single literatures."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize, stats

from netsize.errors import SettingError
from netsize.synthesis.heterogeneity import HETEROGENEITY, q_profile, tau_squared
from netsize.synthesis.padding import guarded, pad
from netsize.synthesis.random_effects import pool, pool_many, quantile

_effects = st.lists(st.floats(-3, 3), min_size=2, max_size=12)


@st.composite
def literatures(draw):
    y = np.array(draw(_effects))
    v = np.array(draw(st.lists(st.floats(0.01, 2.0), min_size=y.size, max_size=y.size)))
    return y, v


def _restricted(tau2, y, v):
    w = 1 / (v + tau2)
    mean = (w * y).sum() / w.sum()
    return -0.5 * (np.log(v + tau2).sum() + np.log(w.sum()) + (w * (y - mean) ** 2).sum())


@given(literatures())
@settings(deadline=None, max_examples=60)
def test_restricted_likelihood_is_at_its_maximum(literature):
    """A second optimiser (scipy's bounded scalar search from several brackets) finds no better."""
    y, v = literature
    found = float(tau_squared(y, v).value)
    best = _restricted(found, y, v)
    reach = float(np.ptp(y) ** 2) + 1e-3
    for high in (reach, 0.1 * reach, 0.01 * reach):
        other = optimize.minimize_scalar(
            lambda x: -_restricted(x, y, v), bounds=(0, high), method="bounded",
            options={"xatol": 1e-12},
        )  # fmt: skip
        assert best >= -other.fun - 1e-9


def test_a_second_maximum_is_not_mistaken_for_the_first():
    """Two precise results that agree and two that do not: the likelihood has two bumps."""
    y, v = np.array([0.0, 0.02, 3.0, -3.0]), np.array([1e-4, 1e-4, 0.01, 0.01])
    grid = np.concatenate([[0], np.geomspace(1e-8, 40, 20001)])
    best = grid[np.argmax([_restricted(t, y, v) for t in grid])]
    assert float(tau_squared(y, v).value) == pytest.approx(best, rel=2e-3)


@pytest.mark.parametrize("method", HETEROGENEITY)
@given(literature=literatures(), shift=st.floats(-5, 5), seed=st.integers(0, 99))
@settings(deadline=None, max_examples=15)
def test_invariances(method, literature, shift, seed):
    y, v = literature
    base = pool(y, v, heterogeneity=method)
    scale = 1e-7 * (1 + base.tau2 + np.abs(y).max())
    order = np.random.default_rng(seed).permutation(y.size)
    permuted = pool(y[order], v[order], heterogeneity=method)
    assert permuted.mean == pytest.approx(base.mean, abs=scale)
    assert permuted.tau2 == pytest.approx(base.tau2, abs=scale)
    flipped = pool(-y, v, heterogeneity=method)
    assert flipped.mean == pytest.approx(-base.mean, abs=scale)
    assert (flipped.low, flipped.high) == pytest.approx((-base.high, -base.low), abs=20 * scale)
    moved = pool(y + shift, v, heterogeneity=method)
    assert moved.mean == pytest.approx(base.mean + shift, abs=10 * scale)
    assert moved.tau2 == pytest.approx(base.tau2, abs=10 * scale)
    doubled = pool(2 * y, 4 * v, heterogeneity=method)
    assert doubled.mean == pytest.approx(2 * base.mean, abs=10 * scale)
    assert doubled.tau2 == pytest.approx(4 * base.tau2, abs=10 * scale)


@pytest.mark.parametrize("interval", ["hartung-knapp", "wald"])
@pytest.mark.parametrize("method", HETEROGENEITY)
def test_padded_arrays_agree_with_single_literatures(method, interval):
    rng = np.random.default_rng(7)
    ys = [rng.normal(0.3, 0.4, k) for k in (1, 2, 3, 5, 11, 30)]
    vs = [rng.uniform(0.01, 0.3, y.size) for y in ys]
    y, mask = pad(ys)
    v, _ = pad(vs)
    many = pool_many(y, v, mask, heterogeneity=method, interval=interval)
    low, high = q_profile(y, v, mask)
    for i, (a, b) in enumerate(zip(ys, vs, strict=True)):
        one = pool(a, b, heterogeneity=method, interval=interval)
        for name in ("mean", "se", "low", "high", "tau2", "q", "i2", "h2", "prediction_low"):
            expected = getattr(one, name)
            got = getattr(many, name)[i]
            if expected is None:
                assert np.isnan(got)
            else:
                assert got == pytest.approx(expected, abs=1e-10)
        if a.size > 1:
            assert (low[i], high[i]) == pytest.approx((one.tau2_low, one.tau2_high), abs=1e-9)


def test_leading_dimensions_and_empty_literatures():
    y = np.linspace(0, 1, 24).reshape(2, 3, 4)
    v = np.full((2, 3, 4), 0.05)
    mask = np.ones((2, 3, 4), dtype=bool)
    mask[1, 2] = False
    many = pool_many(y, v, mask)
    assert many.mean.shape == (2, 3)
    assert np.isnan(many.mean[1, 2])
    assert many.mean[0, 1] == pytest.approx(y[0, 1].mean())


def test_one_result_is_its_own_mean():
    one = pool([0.4], [0.09])
    assert (one.mean, one.se, one.tau2, one.i2, one.prediction_low) == (0.4, 0.3, None, None, None)
    assert one.high == pytest.approx(0.4 + 0.3 * stats.norm.ppf(0.975))
    assert "one result" in one.reason


def test_two_results_have_no_prediction_interval():
    two = pool([0.1, 0.5], [0.04, 0.04])
    assert two.tau2 == pytest.approx(0.08 - 0.04)  # (y₁-y₂)²/2 - v, the restricted maximum
    assert two.prediction_low is None
    assert "two results" in two.reason


@pytest.mark.parametrize("method", HETEROGENEITY)
def test_identical_results_keep_the_common_effect_error(method):
    same = pool([0.3] * 4, [0.04] * 4, heterogeneity=method)
    assert same.tau2 == 0
    assert same.se == pytest.approx(0.1)  # Hartung-Knapp alone would say 0
    assert same.i2 == 0
    assert (same.tau2_low, same.tau2_high) == (0, 0)


@given(literatures())
@settings(deadline=None, max_examples=50)
def test_hartung_knapp_is_never_below_the_common_effect(literature):
    y, v = literature
    assert pool(y, v).se >= 1 / np.sqrt((1 / v).sum()) * (1 - 1e-12)


def test_one_enormous_study():
    big = pool([0.2, 0.1, 0.3, 80.0], [0.1, 0.1, 0.1, 1e-6])
    assert big.converged
    assert big.tau2 == pytest.approx(1590, rel=0.01)


def test_q_profile_covers_the_estimate_when_q_is_moderate(smoking_like):
    y, v = smoking_like
    low, high = q_profile(y, v)
    moment = float(tau_squared(y, v, method="paule-mandel").value)
    assert low <= moment <= high


@pytest.fixture
def smoking_like():
    rng = np.random.default_rng(3)
    v = rng.uniform(0.02, 0.4, 25)
    return rng.normal(0.3, np.sqrt(v + 0.05)), v


@pytest.mark.parametrize("df", [1, 2, 5, 30, np.inf])
def test_quantile_against_scipy(df):
    reference = stats.norm.ppf(0.975) if np.isinf(df) else stats.t.ppf(0.975, df)
    assert float(quantile(0.975, df)) == pytest.approx(reference, rel=1e-10)


def test_settings_are_named_when_wrong():
    with pytest.raises(SettingError, match="restricted-likelihood"):
        pool([0.1, 0.2], [0.1, 0.1], heterogeneity="maximum")
    with pytest.raises(SettingError, match="hartung-knapp"):
        pool([0.1, 0.2], [0.1, 0.1], interval="exact")
    with pytest.raises(SettingError, match="level"):
        pool([0.1, 0.2], [0.1, 0.1], level=95)
    with pytest.raises(ValueError, match="positive"):
        guarded([0.1], [0.0])


@pytest.mark.slow
def test_tau_squared_and_interval_recover_in_simulation():
    """Unselected literatures: the mean of τ̂² by moments is near τ², intervals cover at 95 %."""
    rng = np.random.default_rng(11)
    k, repeats, tau2 = 30, 4000, 0.1
    v = rng.uniform(0.02, 0.2, (repeats, k))
    y = rng.normal(0.3, np.sqrt(v + tau2))
    for method in ("restricted-likelihood", "paule-mandel", "hedges"):
        values = tau_squared(y, v, method=method).value
        assert values.mean() == pytest.approx(tau2, abs=4 * values.std() / np.sqrt(repeats) + 1e-3)
    many = pool_many(y, v)
    covered = ((many.low <= 0.3) & (many.high >= 0.3)).mean()
    assert covered == pytest.approx(0.95, abs=0.015)
    low, high = q_profile(y, v)
    assert ((low <= tau2) & (high >= tau2)).mean() == pytest.approx(0.95, abs=0.015)
