"""`solve`: goals, modifiers, conversions, records, and the errors of wrong settings."""

from __future__ import annotations

import json
from typing import Any

import numpy as np
import pytest
from scipy import stats

import netsize
from netsize.errors import SettingError
from netsize.numerics.grid import GridDistribution
from netsize.sizing import DESIGNS, make_study, normal_effects, power, power_assurance, solve
from netsize.sizing.precision import assured_half_width, expected_half_width


def test_the_contract_of_a_single_answer() -> None:
    found = netsize.solve("two-groups", effect=0.5, power=0.95).to_dict()
    assert found["n_per_group"] == [105, 105]
    assert found["n_total"] == 210
    assert found["power"] == pytest.approx(0.9501, abs=1e-4)
    json.dumps(found, allow_nan=False)


def test_the_contract_over_arrays() -> None:
    found = netsize.solve("two-groups", effect=[[0.2, 0.5], [0.8, 0.0]], power=0.8)
    assert found.n_per_group.shape == (2, 2, 2)
    assert found.n_per_group.dtype == np.int64
    assert found.n_total.tolist() == [[788, 128], [52, 0]]
    assert found.finite.tolist() == [[True, True], [True, False]]
    assert np.isnan(found.power[1, 1])
    plain = found.to_dict()
    assert plain["n_per_group"] == [[[394, 394], [64, 64]], [[26, 26], None]]
    assert plain["n_total"] == [[788, 128], [52, None]]
    json.dumps(plain, allow_nan=False)


def test_the_table_has_a_row_an_effect() -> None:
    table = solve("two-groups", effect=[0.5, 0.0], ratio=2.0, cost_per=10.0).table()
    assert table["d"].tolist() == [0.5, 0.0]
    assert table["n_2"].tolist() == [2 * table["n_1"][0], 0]
    assert table["cost"][0] == 10 * table["recruited_total"][0]


def test_given_n_gives_the_power() -> None:
    found = solve("two-groups", effect=0.5, n=105)
    assert float(found.power) == pytest.approx(0.9501, abs=1e-4)
    assert found.n_per_group.tolist() == [105, 105]
    plain = found.to_dict()
    assert plain["detectable_effect"] == pytest.approx(0.3885, abs=1e-3)
    assert plain["sign_error"] < 1e-6


def test_n_and_effects_broadcast() -> None:
    found = solve("two-groups", effect=[[0.2], [0.5]], n=[10, 20, 40])
    assert found.power.shape == (2, 3)
    assert found.n_per_group.shape == (2, 3, 2)
    np.testing.assert_array_equal(found.abilities().detectable[0], found.abilities().detectable[1])


@pytest.mark.parametrize(("ratio", "sizes"), [(1.5, [33, 50]), (1 / 1.5, [50, 33]), (0.1, [40, 4])])
def test_allocation_rounds_the_larger_group_up(ratio: float, sizes: list[int]) -> None:
    assert solve("two-groups", effect=0.5, n=min(sizes), ratio=ratio).n_per_group.tolist() == sizes


def test_loss_recruits_more_and_analyses_as_many() -> None:
    plain, losing = (solve("two-groups", effect=0.5, loss=loss) for loss in (0.0, 0.15))
    assert losing.n_total == plain.n_total == 128
    assert losing.recruited_per_group.tolist() == [76, 76]  # 64/.85 = 75.3
    back = solve("two-groups", effect=0.5, n=76, loss=0.15)
    assert back.n_per_group.tolist() == [64, 64]


def test_clusters_come_whole() -> None:
    found = solve("anova", groups=3, effect=0.25, cluster_size=8, cluster_correlation=0.02)
    assert (found.n_per_group % 8 == 0).all()
    given = solve("anova", groups=3, effect=0.25, n=60, cluster_size=8, cluster_correlation=0.02)
    assert given.n_per_group.tolist() == [56, 56, 56]
    lost = solve("anova", groups=3, effect=0.25, cluster_size=8, cluster_correlation=0.02, loss=0.2)
    assert (lost.recruited_per_group == lost.n_per_group // 8 * 10).all()


def test_every_modifier_changes_the_answer_and_says_so() -> None:
    plain = solve("two-groups", effect=0.5)
    words = {
        "tests": (3, "Bonferroni"),
        "sides": (1, "one-sided"),
        "loss": (0.1, "recruited"),
        "covariate_r2": (0.4, "covariate"),
        "ratio": (2.0, "group 2 is 2 times"),
        "spread_ratio": (2.0, "Welch"),
    }
    for name, (value, word) in words.items():
        changed = solve("two-groups", effect=0.5, **{name: value})
        assert changed.recruited_total != plain.recruited_total, name
        assert any(word in s for s in changed.assumptions()), name
    clustered = solve("two-groups", effect=0.5, cluster_size=10, cluster_correlation=0.05)
    assert any("design effect 1.45" in s for s in clustered.assumptions())


def test_budget_in_participants_and_in_money() -> None:
    people = solve("two-groups", effect=0.4, at_most=151)
    assert people.n_per_group.tolist() == [75, 75]
    money = solve("two-groups", effect=0.4, at_most=3525, cost_per=20, fixed_cost=500)
    assert money.n_per_group.tolist() == [75, 75]
    assert float(money.cost) == 3500
    losing = solve("two-groups", effect=0.4, at_most=151, loss=0.1)
    assert losing.recruited_total <= 151
    assert losing.n_per_group.tolist() == [67, 67]  # 67/.9 = 74.4, two groups of 75


def test_assurance_under_a_distribution() -> None:
    effects = normal_effects(mean=0.5, sd=0.2)
    found = solve("two-groups", effect=effects, power=0.8, assurance=0.8)
    assert float(found.effect) == pytest.approx(0.5 - 0.8416 * 0.2, abs=1e-3)
    assert found.n_total == solve("two-groups", effect=float(found.effect), power=0.8).n_total
    n = found.n_per_group[0]
    reached = power_assurance("two-groups", effect=effects, n=[n - 1, n], power=0.8)
    assert reached[0] < 0.8 <= reached[1] == pytest.approx(float(found.reached))


def test_assurance_without_a_finite_size() -> None:
    found = solve("two-groups", effect=normal_effects(mean=0.1, sd=0.2), power=0.8, assurance=0.8)
    assert not found.finite
    assert found.to_dict()["n_per_group"] is None
    assert found.ceiling == pytest.approx(0.6915, abs=1e-3)


def test_escaped_mass_is_no_finite_size() -> None:
    points = np.linspace(-1, 1, 201)
    effects = GridDistribution.from_cdf(points, 0.3 + 0.6 * (points + 1) / 2)
    assert not solve("two-groups", effect=effects, power=0.8, assurance=0.8).finite


def test_expected_power_and_its_ceiling() -> None:
    effects = normal_effects(mean=0.3, sd=0.3)
    found = solve("two-groups", effect=effects, expected_power=0.7)
    assert float(found.reached) >= 0.7
    assert found.ceiling == pytest.approx(0.8413, abs=1e-3)
    assert not solve("two-groups", effect=effects, expected_power=0.85).finite


def test_distribution_on_another_metric() -> None:
    z = normal_effects(mean=0.3, sd=0.05)
    found = solve("correlation", effect=z, metric="z", power=0.8, assurance=0.9)
    assert float(found.effect) == pytest.approx(0.3 - 1.2816 * 0.05, abs=1e-3)
    with pytest.raises(SettingError, match="beyond the range"):
        solve("correlation", effect=normal_effects(mean=0.9, sd=0.1), power=0.8, assurance=0.9)


@pytest.mark.parametrize(
    ("design", "options", "effects", "width"),
    [
        ("two-groups", {"ratio": 2.0}, [0.0, 0.5, 2.0], 0.25),
        ("paired", {}, [0.0, 0.4], 0.3),
        ("correlation", {}, [0.0, 0.3, 0.8], 0.15),
        ("anova", {"groups": 3}, [0.1, 0.4], 0.15),
        ("two-proportions", {"baseline": 0.3}, [0.0, 0.2], 0.1),
    ],
)
def test_precision_is_reached_and_minimal(
    design: str, options: dict[str, Any], effects: list[float], width: float
) -> None:
    found = solve(design, effect=effects, half_width=width, **options)
    assert found.finite.all()
    assert (found.reached <= width).all()
    study = make_study(design, **options)
    units = found.n_per_group.min(axis=-1)
    before = expected_half_width(study, units - 1, found.own_effect, 0.95)
    assert (before > width).all()


def test_one_error_df_has_no_mean_half_width() -> None:
    widths = expected_half_width(make_study("paired"), np.array([2.0, 3.0, 30.0]), 0.5, 0.95)
    assert np.isinf(widths[0])
    assert 1 < widths[1] < 10
    assert widths[2] < 0.5


@pytest.mark.parametrize(("design", "effect"), [("two-groups", 0.6), ("correlation", 0.4)])
def test_assured_precision_by_simulation(design: str, effect: float) -> None:
    """The half-width kept with probability .9, against its simulated distribution."""
    rng = np.random.default_rng(11)
    n, runs = 40, 3000
    if design == "two-groups":
        z = rng.normal(effect * np.sqrt(n / 2), 1, runs)
        seen = z / np.sqrt(rng.chisquare(2 * n - 2, runs) / (2 * n - 2)) / np.sqrt(n / 2)
    else:
        x = rng.standard_normal((runs, n))
        y = effect * x + np.sqrt(1 - effect**2) * rng.standard_normal((runs, n))
        x, y = (a - a.mean(axis=1, keepdims=True) for a in (x, y))
        seen = (x * y).sum(axis=1) / np.sqrt((x * x).sum(axis=1) * (y * y).sum(axis=1))
    from netsize.sizing.precision import observed_half_width

    study = make_study(design)
    widths = observed_half_width(study, n, seen, 0.95)
    limit = float(assured_half_width(study, n, effect, 0.95, 0.9))
    assert np.mean(widths <= limit) == pytest.approx(0.9, abs=0.02)
    mean = float(expected_half_width(study, n, effect, 0.95))
    assert widths.mean() == pytest.approx(mean, rel=2e-3)


@pytest.mark.parametrize("test", ["pooled", "corrected", "arcsine"])
@pytest.mark.parametrize("sides", [1, 2])
def test_exact_power_of_proportions_by_brute_force(test: str, sides: int) -> None:
    """Every outcome of 12 and 18 participants, binomial probabilities from scipy."""
    found = solve(
        "two-proportions", baseline=0.3, effect=0.4, n=12, ratio=1.5, test=test, sides=sides
    )
    z = stats.norm.isf(0.05 / sides)
    total = 0.0
    for x1 in range(13):
        for x2 in range(19):
            p1, p2, pooled, inverse = x1 / 12, x2 / 18, (x1 + x2) / 30, 1 / 12 + 1 / 18
            off, limit = p2 - p1, z * np.sqrt(pooled * (1 - pooled) * inverse)
            if test == "arcsine":
                off, limit = 2 * np.arcsin(np.sqrt([p2, p1])) @ [1, -1], z * np.sqrt(inverse)
            if test == "corrected":
                limit += inverse / 2
            if (abs(off) if sides == 2 else off) > limit:
                total += stats.binom.pmf(x1, 12, 0.3) * stats.binom.pmf(x2, 18, 0.7)
    assert found.exact_power() == pytest.approx(total, abs=1e-12)
    assert found.to_dict()["exact_power"] == pytest.approx(total, abs=1e-12)


def test_exact_power_of_one_proportion() -> None:
    """The sign test of Cohen (1988, ch. 5): 30 pairs, .5 against .75, against scipy's binomial."""
    found = solve("one-proportion", effect=0.25, n=30)
    assert found.exact_power() == pytest.approx(
        stats.binom.sf(20, 30, 0.75) + stats.binom.cdf(9, 30, 0.75), abs=1e-12
    )
    large = solve("one-proportion", effect=0.02)
    assert large.exact_power() == pytest.approx(float(large.power), abs=0.01)
    assert solve("one-proportion", effect=0.001).exact_power() is None
    assert solve("two-groups", effect=0.5).exact_power() is None


def test_ten_thousand_effects_equal_one_by_one() -> None:
    effects = np.geomspace(0.01, 4, 10_000)
    together = solve("two-groups", effect=effects, power=0.9).n_per_group[:, 0]
    some = np.arange(0, 10_000, 397)
    alone = [int(solve("two-groups", effect=effects[i], power=0.9).n_per_group[0]) for i in some]
    assert together[some].tolist() == alone


def test_metrics_convert_there_and_back() -> None:
    inside = {
        "d": 0.4, "dz": 0.4, "r": 0.3, "f": 0.3, "eta2": 0.1, "omega2": 0.1, "f2": 0.2, "r2": 0.1,
        "partial-r": 0.3, "z": 0.3, "q": 0.3, "w": 0.3, "v": 0.3, "difference": 0.1,
        "proportion": 0.6, "odds-ratio": 2.0, "risk-ratio": 1.2, "h": 0.3,
    }  # fmt: skip
    options: dict[str, dict[str, Any]] = {
        "paired": {"pair_correlation": 0.6},
        "two-correlations": {"baseline": 0.2},
        "equivalence": {"margin": 0.9},
        "non-inferiority": {"margin": 0.9},
        "regression": {"other_r2": 0.2},
    }
    seen = set()
    for name in DESIGNS:
        design = make_study(name, **options.get(name, {})).design
        for metric in design.metrics:
            value = inside[metric.name]
            back = metric.outward(metric.inward(np.asarray(value)))
            assert float(back) == pytest.approx(value, rel=1e-12), (name, metric.name)
            seen.add(metric.name)
    assert seen == set(inside)


def test_conversions_by_hand() -> None:
    """Definitions: f² = η²/(1-η²); dz = d/√(2(1-ρ)); odds; ΔR²/(1-R²)."""
    cases = [
        ("anova", {}, "eta2", 0.2, 0.5),
        ("anova", {}, "omega2", 0.2, 0.5),
        ("paired", {"pair_correlation": 0.5}, "d", 0.4, 0.4),
        ("paired", {"pair_correlation": 0.875}, "d", 0.4, 0.8),
        ("two-groups", {}, "f", 0.25, 0.5),
        ("two-proportions", {"baseline": 0.5}, "odds-ratio", 3.0, 0.25),
        ("two-proportions", {"baseline": 0.4}, "risk-ratio", 1.5, 0.2),
        ("regression", {"other_r2": 0.3}, "r2", 0.2, 0.4),
        ("contingency", {"rows": 3, "columns": 5}, "v", 0.5, 0.5 * np.sqrt(2)),
        ("two-correlations", {"baseline": 0.5}, "r", 0.5, 0.0),
    ]
    for name, options, metric, value, own in cases:
        found = solve(name, effect=value, metric=metric, n=50, **options)
        assert float(found.own_effect) == pytest.approx(own, abs=1e-12), (name, metric)
        assert float(found.effect) == value
        assert any(f" {value:.4g} is " in s for s in found.assumptions())


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"power": 1.0}, "--power: 1 is out of range"),
        ({"power": float("nan")}, "--power: nan is not a finite number"),
        ({"power": "high"}, "--power: 'high' is not a number"),
        ({"effect": float("inf")}, "--effect: inf is not"),
        ({"effect": 1e300}, "--effect: 1e.300 is no standardized mean difference"),
        ({"effect": []}, "--effect: nothing given"),
        ({"n": 0}, "--n"),
        ({"n": 2.5}, "--n: 2.5 is not a whole number"),
        ({"n": 1}, "--n: too few for a test"),
        ({"at_most": 3}, "--at-most: too few"),
        ({"n": 5, "at_most": 20}, "--at-most: contradicts --n"),
        ({"half_width": 0.1, "power": 0.8}, "--power: name either"),
        ({"half_width": -0.1}, "--half-width"),
        ({"expected_power": 0.8}, "--expected-power: needs a distribution"),
        ({"assurance": 0.8}, "--assurance: needs a distribution"),
        ({"alpha": 0.0}, "--alpha"),
        ({"sides": 3}, "--sides: 3 is neither"),
        ({"tests": 0}, "--tests"),
        ({"loss": 1.0}, "--loss"),
        ({"ratio": -1.0}, "--ratio"),
        ({"cluster_correlation": 0.1}, "--cluster-correlation: give the participants per cluster"),
        ({"covariate_r2": 1.0}, "--covariate-r2"),
        ({"covariate_r2": 0.3, "spread_ratio": 2.0}, "--covariate-r2: .* takes no covariate"),
        ({"groups": 3}, "--groups: the design two-groups has no such option"),
        ({"metric": "w"}, "--metric: the design two-groups takes d, r, f, eta2"),
        ({"design": "three-groups"}, "--design: 'three-groups' is none of"),
        ({"design": "paired", "metric": "d"}, "give --pair-correlation"),
        ({"design": "equivalence"}, "--margin: the design equivalence needs it"),
        ({"design": "anova", "sides": 1}, "--sides: .* no direction"),
        ({"design": "anova", "effect": -0.1}, "--effect: -0.1 is no Cohen's f"),
        ({"design": "anova", "half_width": 0.1, "assurance": 0.9}, "--assurance"),
        ({"design": "contingency", "half_width": 0.1}, "--half-width: .* no interval"),
        ({"design": "factorial", "df1": 4, "cells": 4}, "--df1"),
        ({"design": "repeated", "tested": "both"}, "--tested"),
        ({"design": "repeated", "tested": "between"}, "--groups"),
        ({"design": "regression", "added_terms": 3, "all_terms": 2}, "--all-terms"),
        ({"design": "two-proportions", "test": "exact"}, "--test"),
        ({"design": "two-proportions", "effect": 0.6}, "--effect: 0.6 is no difference"),
        ({"design": "equivalence", "margin": 0.3, "comparison": "anova"}, "--comparison"),
        ({"design": "correlation", "effect": 1.0}, "--effect: 1 is no correlation"),
    ],
)
def test_wrong_settings_name_the_option(settings: dict[str, Any], message: str) -> None:
    with pytest.raises(SettingError, match=message):
        solve(**({"design": "two-groups", "effect": 0.5} | settings))


def test_a_distribution_needs_an_assurance() -> None:
    with pytest.raises(SettingError, match="--assurance: needed"):
        solve("two-groups", effect=normal_effects(mean=0.3, sd=0.1), power=0.8)
    with pytest.raises(SettingError, match="--assurance: expected power"):
        solve(
            "two-groups",
            effect=normal_effects(mean=0.3, sd=0.1),
            expected_power=0.8,
            assurance=0.5,
        )


def test_a_study_given_takes_no_more_settings() -> None:
    study = make_study("two-groups", ratio=2.0)
    assert solve(study, effect=0.5).n_total == solve("two-groups", effect=0.5, ratio=2.0).n_total
    with pytest.raises(SettingError, match="--alpha"):
        solve(study, effect=0.5, alpha=0.01)
    with pytest.raises(SettingError, match="--ratio: set it on the design"):
        power(study.design, effect=0.5, n=20, ratio=1.0)
