"""Properties of the corrections, their statuses at the extremes, arrays against single forms."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import netsize
from netsize.errors import SettingError
from netsize.synthesis.asymmetry import rank_test_many, regression_test_many
from netsize.synthesis.corrections import CORRECTIONS, correct
from netsize.synthesis.limit import limit, limit_many
from netsize.synthesis.padding import pad
from netsize.synthesis.small_study import peese, pet, pet_peese, pet_peese_many
from netsize.synthesis.step_function import fit_step_function
from netsize.synthesis.trim_and_fill import trim_and_fill, trim_and_fill_many
from netsize.synthesis.unrestricted import (
    adequately_powered_many,
    unrestricted,
    unrestricted_many,
)

NORMAL_THEORY = (
    pet,
    peese,
    pet_peese,
    limit,
    unrestricted,
    trim_and_fill,
)


@st.composite
def literatures(draw, smallest=3):
    k = draw(st.integers(smallest, 10))
    y = np.array(draw(st.lists(st.floats(-2, 2), min_size=k, max_size=k)))
    v = np.array(draw(st.lists(st.floats(0.01, 1.0), min_size=k, max_size=k)))
    return np.round(y, 3), np.round(v, 3)


@pytest.fixture
def ragged():
    rng = np.random.default_rng(5)
    ys = [rng.normal(0.4, 0.4, k) for k in (3, 4, 7, 15, 40)]
    ys.append(np.array([0.1, 0.12, 0.11, 0.09, 0.5, 0.7, 0.9, 1.1, 0.13]))  # something to fill
    vs = [rng.uniform(0.01, 0.3, y.size) for y in ys]
    y, mask = pad(ys)
    v, _ = pad(vs)
    return ys, vs, y, v, mask


def test_arrays_agree_with_single_forms(ragged):
    ys, vs, y, v, mask = ragged
    rule = pet_peese_many(y, v, mask)
    lines = limit_many(y, v, mask)
    means = unrestricted_many(y, v, mask)
    powered = adequately_powered_many(y, v, mask)
    regression = regression_test_many(y, v, mask)
    ranks = rank_test_many(y, v, mask)
    for i, (a, b) in enumerate(zip(ys, vs, strict=True)):
        pairs = [
            (rule.pet.intercept[i], pet(a, b).estimate),
            (rule.peese.intercept[i], peese(a, b).estimate),
            (rule.estimate[i], pet_peese(a, b).estimate),
            (rule.se[i], pet_peese(a, b).se),
            (lines.estimate[i], limit(a, b).estimate),
            (lines.se[i], limit(a, b).se),
            (means.mean[i], unrestricted(a, b).estimate),
            (means.se[i], unrestricted(a, b).se),
            (powered.fit.mean[i], float(adequately_powered_many(a, b).fit.mean)),
            (regression.p[i], float(regression_test_many(a, b).p)),
            (ranks.p[i], float(rank_test_many(a, b).p)),
        ]
        for got, expected in pairs:
            assert got == pytest.approx(expected, abs=1e-10)


@pytest.mark.parametrize("asymmetry", ["L0", "R0"])
def test_trim_and_fill_arrays_agree_with_single_forms(ragged, asymmetry):
    ys, vs, y, v, mask = ragged
    many = trim_and_fill_many(y, v, mask, asymmetry=asymmetry)
    assert many.number.max() > 0
    for i, (a, b) in enumerate(zip(ys, vs, strict=True)):
        one = trim_and_fill(a, b, asymmetry=asymmetry)
        assert many.pooled.mean[i] == pytest.approx(one.estimate, abs=1e-10)
        assert many.pooled.se[i] == pytest.approx(one.se, abs=1e-10)


@pytest.mark.parametrize("function", NORMAL_THEORY)
@given(literature=literatures(), seed=st.integers(0, 99))
@settings(deadline=None, max_examples=15)
def test_order_does_not_matter(function, literature, seed):
    y, v = literature
    order = np.random.default_rng(seed).permutation(y.size)
    one, other = function(y, v), function(y[order], v[order])
    assert one.status == other.status
    if one.estimate is not None:
        assert other.estimate == pytest.approx(one.estimate, rel=1e-6, abs=1e-6)


@pytest.mark.parametrize("function", NORMAL_THEORY)
@given(literature=literatures(), power=st.integers(-3, 3))
@settings(deadline=None, max_examples=15)
def test_scale(function, literature, power):
    """Estimates in other units, variances in their squares: answers in those units."""
    y, v = literature
    unit = 2.0**power  # exact in binary, so that ties stay ties
    one, other = function(y, v), function(unit * y, unit**2 * v)
    assert one.status == other.status
    if one.estimate is not None:
        assert other.estimate == pytest.approx(unit * one.estimate, rel=1e-6, abs=1e-6 * unit)
        assert other.se == pytest.approx(unit * one.se, rel=1e-5, abs=1e-6 * unit)


@given(literature=literatures())
@settings(deadline=None, max_examples=15)
def test_sign_flip_of_the_linear_methods(literature):
    y, v = literature
    for function in (pet, peese, limit, unrestricted):
        one, other = function(y, v), function(-y, v)
        if one.estimate is not None:
            assert other.estimate == pytest.approx(-one.estimate, rel=1e-7, abs=1e-9)


@given(
    half=st.lists(st.tuples(st.floats(0.01, 2), st.floats(0.01, 1)), min_size=1, max_size=8),
    centre=st.floats(-1, 1),
)
@settings(deadline=None, max_examples=40)
def test_trim_and_fill_of_a_symmetric_funnel_adds_nothing(half, centre):
    d, v = np.array(half).T
    y = np.concatenate([centre + d, centre - d, [centre]])
    v = np.concatenate([v, v, [0.1]])
    for asymmetry in ("L0", "R0"):
        assert int(trim_and_fill_many(y, v, asymmetry=asymmetry).number) == 0


@given(literature=literatures(), steps=st.sampled_from([(0.025,), (0.025, 0.5), (0.05, 0.3)]))
@settings(deadline=None, max_examples=40)
def test_step_model_never_fits_worse_than_no_selection(literature, steps):
    y, v = literature
    fit = fit_step_function(y, v, cuts=steps)
    w = 1 / (v + fit.tau2)
    assert fit.ratio >= 0
    assert np.isfinite(fit.log_likelihood)
    assert w.min() > 0
    # no-selection likelihood at its own maximum over a grid of τ²
    best = -np.inf
    for tau2 in np.linspace(0, float(np.ptp(y) ** 2) + 0.01, 60):
        total = v + tau2
        mean = (y / total).sum() / (1 / total).sum()
        best = max(best, -0.5 * (np.log(2 * np.pi * total) + (y - mean) ** 2 / total).sum())
    assert fit.log_likelihood >= best - 1e-6


def test_step_gradient_against_differences():
    """The maximum by another route: a simplex search on the likelihood itself."""
    from scipy import optimize, stats

    rng = np.random.default_rng(2)
    v = rng.uniform(0.01, 0.2, 40)
    y = rng.normal(0.2, np.sqrt(v + 0.05))
    fit = fit_step_function(y, v)
    edge = stats.norm.isf(0.025) * np.sqrt(v)

    def loss(x):
        mean, tau2, weight = x[0], np.exp(x[1]), np.exp(x[2])
        eta = np.sqrt(v + tau2)
        inside = stats.norm.sf((edge - mean) / eta)
        return -(
            stats.norm.logpdf(y, mean, eta)
            + np.where(y > edge, 0, x[2])
            - np.log(inside + weight * (1 - inside))
        ).sum()

    best = optimize.minimize(
        loss, [0.2, -3, 0.0], method="Nelder-Mead",
        options={"xatol": 1e-9, "fatol": 1e-12, "maxiter": 10000, "maxfev": 10000},
    )  # fmt: skip
    assert fit.mean == pytest.approx(best.x[0], abs=1e-5)
    assert fit.tau2 == pytest.approx(np.exp(best.x[1]), abs=1e-5)
    assert fit.weights[1] == pytest.approx(np.exp(best.x[2]), rel=1e-4)
    step = 1e-3
    hessian = np.empty((3, 3))
    for i in range(3):
        for j in range(3):
            total = 0.0
            for a, b in ((1, 1), (1, -1), (-1, 1), (-1, -1)):
                x = best.x.copy()
                x[i] += a * step
                x[j] += b * step
                total += a * b * loss(x)
            hessian[i, j] = total / (4 * step**2)
    assert fit.se == pytest.approx(np.sqrt(np.linalg.inv(hessian)[0, 0]), rel=1e-3)


def _text(*ts, n=40):
    return "\n".join(f"S{i}: t({n - 2}) = {t}" for i, t in enumerate(ts, 1))


CASES = {
    "one": _text(2.3),
    "two": _text(2.3, 2.6),
    "three": _text(2.3, 2.6, 0.4),
    "all significant": _text(2.3, 2.6, 2.1, 3.0, 2.2),
    "none significant": _text(0.3, 1.2, -0.4, 0.9),
    "identical": _text(2.5, 2.5, 2.5, 2.5),
    "mixed sign": _text(2.5, -2.6, 3.1, -0.2, -3.3),
    "no effect at all": _text(0.0, 0.0, 0.0),
    "enormous study": _text(2.3, 2.1, 0.5) + "\nBig: t(199998) = 90",
    "enormous effect": _text(2.3, 2.1, 2.5, 60),
    "correlations": "A: r(48) = .31\nB: r(38) = .41\nC: r(98) = -.22",
    "several groups": "A: F(2, 57) = 5.1\nB: F(2, 87) = 4.1\nC: F(3, 47) = 0.5",
    "inequality beside": "A: t(38) = 2.3\nB: t(58) = 2.9\nC: p < .05, n = 40",
}


@pytest.mark.parametrize("case", CASES)
def test_every_row_says_how_it_went(case):
    table = netsize.effects(CASES[case])
    rows = correct(table)
    assert [r.key for r in rows] == list(CORRECTIONS)
    for row in rows:
        assert row.label == CORRECTIONS[row.key].label
        if row.estimate is None:
            assert row.status != "fine"
            assert row.reason
            assert row.distribution is None
        else:
            assert np.isfinite(row.estimate)
            assert row.low <= row.estimate + 1e-9
            assert row.high >= row.estimate - 1e-9
            assert row.distribution is not None
        assert row.to_dict()["key"] == row.key


def test_distribution_and_interval_agree():
    rows = correct(netsize.effects(CASES["all significant"] + "\nX: t(98) = 2.2"))
    checked = 0
    for row in rows:
        if row.estimate is None or row.status != "fine" or not np.isfinite(row.low):
            continue
        low, high = row.distribution.quantile([0.025, 0.975])
        assert (low, high) == pytest.approx((row.low, row.high), abs=5e-3)
        checked += 1
    assert checked >= 6


def test_names_are_picked_in_table_order():
    table = netsize.effects(CASES["three"])
    assert [r.key for r in correct(table, "pet,unrestricted")] == ["unrestricted", "pet"]
    assert [r.key for r in correct(table, ("limit",))] == ["limit"]
    with pytest.raises(SettingError, match="trim-and-fill"):
        correct(table, "duval")


def test_settings_reach_the_corrections():
    table = netsize.effects(CASES["mixed sign"])
    plain = correct(table, "trim-and-fill", interval="wald", heterogeneity="dersimonian-laird")[0]
    wide = correct(table, "trim-and-fill", level=0.99, heterogeneity="dersimonian-laird")[0]
    assert plain.high - plain.low < wide.high - wide.low
    one = correct(table, "step-function", steps=(0.025, 0.5))[0]
    assert one.estimate != correct(table, "step-function")[0].estimate
    with pytest.raises(SettingError, match="steps"):
        correct(table, "step-function", steps=(0.5, 0.5))
    with pytest.raises(SettingError, match="dependence"):
        correct(table, dependence="ignored")


def test_effect_free_errors_make_no_slope_of_their_own():
    """Equal groups differ in g and so in its variance, not in precision: nothing to regress on."""
    rows = {r.key: r for r in correct(netsize.effects(CASES["all significant"]))}
    for key in ("pet", "peese", "pet-peese", "limit"):
        assert rows[key].estimate is None
        assert "equally precise" in rows[key].reason
    diagnostics = {d.key: d for d in netsize.weigh(CASES["all significant"]).diagnostics}
    for key in ("regression-asymmetry", "rank-asymmetry"):
        assert diagnostics[key].statistic is None
        assert "equally precise" in diagnostics[key].reason


def test_no_sign_no_negative_effects():
    rows = {r.key: r for r in correct(netsize.effects(CASES["several groups"]))}
    assert rows["step-function"].status == "does not apply"
    assert rows["conditional-likelihood"].low >= 0
    for row in rows.values():
        if row.estimate is not None and row.estimate < 0:
            assert row.status == "at a boundary"
