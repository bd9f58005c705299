"""What must hold for the power of every design."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from netsize.errors import SettingError
from netsize.sizing import after_significance, make_study, power, smallest_detectable
from netsize.sizing.laws import WELCH
from netsize.sizing.search import detectable_effect, smallest_units
from netsize.sizing.study import Study

Case = tuple[Study, float, float]


def test_power_rises_with_n_and_with_the_effect(case: Case) -> None:
    study, low, high = case
    effects = np.linspace(low, high, 12)
    # the level of Welch's test itself moves in tiny groups (.083 with two and three participants,
    # unequal SDs), so its power is monotone only beyond them
    start, slack = (10, 2e-3) if study.design.law is WELCH else (study.first, 1e-9)
    sizes = np.unique(np.round(np.geomspace(start, 3000, 40)))
    table = study.power(sizes[:, None], effects)
    assert np.isfinite(table).all()
    assert ((table > 0) & (table <= 1)).all()
    assert (np.diff(table, axis=0) > -slack).all()
    assert (np.diff(table, axis=1) > -1e-9).all()


def test_without_an_effect_the_power_is_the_level() -> None:
    for name, options in (
        ("two-groups", {}),
        ("correlation", {}),
        ("anova", {"groups": 5}),
        ("regression", {"added_terms": 3}),
        ("contingency", {}),
        ("two-correlations", {}),
        ("two-proportions", {"test": "arcsine"}),
    ):
        got = power(name, effect=0, n=[10, 100], alpha=0.03, **options)
        np.testing.assert_allclose(got, 0.03, rtol=1e-9)


def test_smallest_units_are_smallest_and_scalar_equals_array(case: Case) -> None:
    study, low, high = case
    effects = np.linspace(low, high, 25)
    for target in (0.3, 0.8, 0.99):
        units, finite = smallest_units(study, effects, target)
        assert finite.all()
        assert (study.power(units, effects) >= target).all()
        above = units > study.first
        assert (study.power(units[above] - 1, effects[above]) < target).all()
        one_by_one = [int(smallest_units(study, e, target)[0]) for e in effects]
        assert units.tolist() == one_by_one


def test_the_detectable_effect_has_the_power_asked_for(case: Case) -> None:
    study, _, _ = case
    units = np.array([20.0, 60.0, 400.0])
    least = detectable_effect(study, units, 0.8)
    np.testing.assert_allclose(study.power(units, least), 0.8, atol=1e-9)
    assert (np.diff(least) < 0).all()


@given(
    d=st.floats(0.05, 3),
    n=st.integers(2, 500),
    ratio=st.floats(0.2, 5),
    alpha=st.floats(1e-6, 0.3),
)
@settings(suppress_health_check=[HealthCheck.too_slow], deadline=None, max_examples=60)
def test_two_groups_have_no_preferred_side(d: float, n: int, ratio: float, alpha: float) -> None:
    settings_ = {"n": n, "alpha": alpha}
    one = power("two-groups", effect=d, ratio=ratio, **settings_)
    np.testing.assert_allclose(power("two-groups", effect=-d, ratio=ratio, **settings_), one)
    # the groups change places
    np.testing.assert_allclose(
        power("two-groups", effect=d, ratio=1 / ratio, **settings_), one, rtol=1e-9
    )
    predicted = power("two-groups", effect=d, ratio=ratio, predicted_only=True, **settings_)
    opposite = power("two-groups", effect=-d, ratio=ratio, predicted_only=True, **settings_)
    np.testing.assert_allclose(predicted + opposite, one, rtol=1e-9)


def test_two_groups_of_anova_and_regression_are_a_t_test() -> None:
    d, n = np.array([0.2, 0.7, 1.5]), np.array([8, 40, 300])
    t = power("two-groups", effect=d, n=n)
    np.testing.assert_allclose(power("anova", groups=2, effect=d / 2, n=n), t, rtol=1e-9)
    np.testing.assert_allclose(power("regression", effect=(d / 2) ** 2, n=2 * n), t, rtol=1e-9)
    metric = power("two-groups", effect=(d / 2) ** 2 / (1 + (d / 2) ** 2), metric="eta2", n=n)
    np.testing.assert_allclose(metric, t, rtol=1e-9)


def test_welch_with_equal_variances_is_nearly_the_pooled_test() -> None:
    same = power("two-groups", effect=0.5, n=100)
    np.testing.assert_allclose(
        power("two-groups", effect=0.5, n=100, spread_ratio=1.0001), same, atol=2e-4
    )


@pytest.mark.parametrize("n", [2, 3])
def test_tiny_groups(n: int) -> None:
    """Defined, or an error that names the smallest study."""
    assert 0.05 < float(power("two-groups", effect=1.0, n=n)) < 0.3
    assert 0.05 < float(power("paired", effect=1.0, n=n)) < 0.3
    assert 0.05 < float(power("anova", effect=1.0, n=n)) < 0.9
    with pytest.raises(SettingError, match=r"--n: too few for a test.*at least 4"):
        power("correlation", effect=0.5, n=n)
    with pytest.raises(SettingError, match=r"at least 7"):
        power("regression", effect=0.5, n=n, added_terms=5)
    with pytest.raises(SettingError, match="--n"):
        power("paired", effect=0.5, n=2, covariate_r2=0.5)


def test_huge_and_tiny_effects() -> None:
    units, finite = smallest_units(make_study("two-groups"), [0.005, 5, -0.005, 19], 0.8)
    assert finite.all()
    assert units.tolist()[:3] == [627_910, 3, 627_910]
    f_units, _ = smallest_units(make_study("anova", groups=3), [0.0025, 5.0], 0.8)
    assert f_units[0] > 500_000
    assert f_units[1] == 2


def test_effects_that_no_study_finds() -> None:
    both = make_study("two-groups")
    one = make_study("two-groups", sides=1)
    assert smallest_units(both, [0.0, -0.5], 0.8)[1].tolist() == [False, True]
    assert smallest_units(one, [0.0, -0.5], 0.8)[1].tolist() == [False, False]
    margin = make_study("equivalence", margin=0.4)
    assert smallest_units(margin, [0.0, 0.39, 0.4, -0.5], 0.8)[1].tolist() == [
        True,
        True,
        False,
        False,
    ]
    worse = make_study("non-inferiority", margin=0.4)
    assert smallest_units(worse, [0.0, -0.39, -0.4], 0.8)[1].tolist() == [True, True, False]


def test_far_tails_do_not_become_nan() -> None:
    """The case in which scipy's noncentral t loses the far tail: δ = 9.19, t = -1.97, ν = 198."""
    assert float(power("two-groups", effect=1.3, n=100)) == pytest.approx(1.0)
    assert np.isfinite(power("two-groups", effect=np.linspace(0, 19, 500), n=[[2], [1000]])).all()


def test_equivalence_shrinks_with_the_true_difference() -> None:
    effects = np.linspace(0, 0.5, 11)
    table = power("equivalence", margin=0.5, effect=effects, n=[[10], [50], [200]])
    assert (np.diff(table, axis=1) <= 0).all()
    assert (np.diff(table, axis=0) >= -1e-9)[:, :-1].all()
    at_margin = power("equivalence", margin=0.5, effect=0.5, n=2000)
    assert float(at_margin) == pytest.approx(0.05, abs=1e-6)  # the level, far from the other margin
    np.testing.assert_allclose(power("equivalence", margin=0.5, effect=-effects, n=50), table[1])


def test_exaggeration_against_simulation() -> None:
    """Exact type M of d in 400,000 simulated studies of 8 a group."""
    rng = np.random.default_rng(3)
    n, d = 8, 0.6
    z = rng.normal(d * np.sqrt(n / 2), 1, 400_000)
    t = z / np.sqrt(rng.chisquare(2 * n - 2, z.size) / (2 * n - 2))
    hits = np.abs(t) > 2.1447866879
    exact = after_significance("two-groups", effect=d, n=n)
    assert float(exact.power) == pytest.approx(hits.mean(), abs=0.003)
    size = np.abs(t[hits]).mean() / np.sqrt(n / 2) / d
    assert float(exact.exaggeration) == pytest.approx(size, rel=0.005)
    assert float(exact.sign_error) == pytest.approx((t[hits] < 0).mean(), abs=0.002)


@pytest.mark.parametrize("design", ["two-groups", "paired", "correlation"])
def test_exaggeration_vanishes_in_large_studies(design: str) -> None:
    after = after_significance(design, effect=0.5, n=[5, 20, 3000])
    assert (np.diff(after.exaggeration) < 0).all()
    assert float(after.exaggeration[-1]) == pytest.approx(1.0, abs=1e-3)
    none = after_significance(design, effect=0.0, n=20)
    assert float(none.sign_error) == pytest.approx(0.5)
    assert np.isinf(none.exaggeration)


def test_exaggeration_of_r_against_its_density() -> None:
    from netsize.numerics import correlation

    n, rho, cut = 15, 0.3, 0.5139775
    r = np.linspace(-1, 1, 400_001)[1:-1]
    density = np.exp(correlation.log_density(r, rho, n))
    hits = np.abs(r) > cut
    size = (np.abs(r) * density)[hits].sum() / density[hits].sum() / rho
    got = after_significance("correlation", effect=rho, n=n)
    assert float(got.exaggeration) == pytest.approx(size, rel=1e-4)


def test_smallest_group_of_two_has_a_mean_and_one_df_has_none() -> None:
    two_df = after_significance("two-groups", effect=0.5, n=2)
    assert np.isfinite(two_df.exaggeration)
    assert two_df.exaggeration > after_significance("two-groups", effect=0.5, n=3).exaggeration
    assert np.isinf(after_significance("paired", effect=0.5, n=2).exaggeration)


def test_detectable_effect_on_the_metric_asked_for() -> None:
    r = smallest_detectable("two-groups", n=50, metric="r")
    assert float(power("two-groups", effect=r, metric="r", n=50)) == pytest.approx(0.8)
