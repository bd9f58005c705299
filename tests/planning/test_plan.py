import json
import math

import numpy as np
import pytest

import netsize
from netsize.errors import EvidenceError, InputError, ReadingError, SettingError
from netsize.planning import leave_one_out, sensitivity

STRONG = """
A: t(38) = 3.1
B: t(58) = 2.8
C: t(98) = 4.1
D: t(78) = 1.4
E: t(118) = 3.3
"""
WEAK = "t(38) = 2.3"


@pytest.fixture(scope="module")
def strong():
    return netsize.plan(STRONG)


@pytest.fixture(scope="module")
def weak():
    return netsize.plan(WEAK)


def test_rows_come_in_the_promised_order_with_the_promised_fields(strong):
    rows = strong.to_dict()["rows"]
    assert [r["key"] for r in rows] == [
        "as-printed",
        "largest-printed",
        "pooled",
        "exact-profile",
        "planning-median",
        "planning-value",
    ]
    promised = {"label", "effect", "low", "high", "n_per_group", "n_total", "power_of_naive_n"}
    assert all(promised <= set(r) for r in rows)


def test_the_record_is_plain_json(strong, weak):
    for plan in (strong, weak):
        assert json.loads(json.dumps(plan.to_dict(), allow_nan=False))["rows"]
    record = strong.to_dict()
    assert {"results", "samples", "participants", "significant", "metric"} <= set(
        record["evidence"]
    )
    assert record["evidence"]["results"] == 5
    assert record["evidence"]["participants"] == 40 + 60 + 100 + 80 + 120
    assert record["evidence"]["significant"] == 4
    assert {
        "probability_negligible",
        "value",
        "median",
        "assurance",
        "chance_significant",
        "ceiling",
    } <= set(record["planning"])
    assert record["version"] == netsize.__version__


def test_the_table_agrees_with_the_record(strong):
    table = strong.table()
    for row in strong.to_dict()["rows"]:
        assert table.loc[row["key"], "n_total"] == row["n_total"]
        assert table.loc[row["key"], "effect"] == row["effect"]


def test_as_printed_is_the_plain_mean_of_the_printed_effects(strong):
    d = [t * math.sqrt(4 / n) for t, n in [(3.1, 40), (2.8, 60), (4.1, 100), (1.4, 80), (3.3, 120)]]
    assert strong.row("as-printed").effect == pytest.approx(np.mean(d))
    assert strong.row("largest-printed").effect == pytest.approx(max(d))


def test_every_size_reaches_the_power_at_its_effect_and_one_less_does_not(strong):
    for row in strong.rows:
        n = row.sized.n_per_group[0]
        at, below = (float(strong.study.power(units, row.effect)) for units in (n, n - 1))
        assert at >= 0.8 > below
        assert row.power == pytest.approx(at)


def test_the_planning_value_is_the_cautious_quantile_and_sizes_are_ordered(strong):
    answer = strong.answer
    assert answer.distribution.cdf(answer.value) == pytest.approx(0.2, abs=1e-6)
    assert answer.value < answer.median < strong.row("as-printed").effect
    assert strong.row("as-printed").sized.n_total < strong.row("planning-value").sized.n_total
    assert answer.chance_significant < answer.ceiling < 1


def test_more_assurance_needs_more_participants(strong):
    sizes = [netsize.plan(STRONG, assurance=a).answer.sized.n_total for a in (0.5, 0.6, 0.7, 0.8)]
    assert sizes == sorted(sizes)
    assert len(set(sizes)) == 4


def test_no_finite_size_is_an_answer_with_ways_out(weak):
    answer = weak.answer
    assert not answer.finite
    assert weak.row("planning-value").to_dict()["n_total"] is None
    assert answer.value < 0 < answer.highest_assurance < 0.8
    assert answer.chance_significant is None
    whats = [a.what for a in answer.alternatives]
    assert whats[-1] == "assurance 0.80 given the predicted direction"
    assert all(a.sized.n_total for a in answer.alternatives)
    assert all(a.assurance < answer.highest_assurance for a in answer.alternatives[:-1])


def test_a_smallest_effect_of_interest_gives_a_finite_size(weak):
    plan = netsize.plan(WEAK, smallest_effect=0.3)
    assert plan.answer.from_smallest
    assert plan.answer.value == 0.3
    assert plan.answer.sized.n_per_group == (176, 176)
    larger = netsize.plan(STRONG, smallest_effect=0.01)
    assert not larger.answer.from_smallest


def test_rules_differ_as_they_should():
    values = {
        rule: netsize.plan(STRONG, rule=rule).answer.value
        for rule in ("averaged", "profile", "pooled-limit", "single-study")
    }
    assert values["averaged"] < values["pooled-limit"]
    assert values["profile"] < values["pooled-limit"]
    fixed = netsize.plan(STRONG, rule="fixed", planning_effect=0.4)
    assert fixed.answer.value == 0.4
    assert fixed.row("planning-median").effect == 0.4


def test_target_mean_is_less_spread_than_a_new_study(strong):
    mean = netsize.plan(STRONG, target="mean").answer
    assert strong.answer.low < mean.low
    assert mean.high < strong.answer.high


def test_goals(strong):
    cautious = netsize.plan(STRONG, goal="assurance")
    assert cautious.row("as-printed").sized.n_total > strong.row("as-printed").sized.n_total
    assert cautious.answer.sized == strong.answer.sized
    precise = netsize.plan(STRONG, goal="precision", half_width=0.25)
    for row in precise.rows:
        assert row.half_width <= 0.25
    budget = netsize.plan(STRONG, goal="budget", at_most=5000, cost_per=40, fixed_cost=1000)
    assert {row.sized.n_total for row in budget.rows} == {100}
    assert budget.answer.detectable == pytest.approx(0.566, abs=0.001)
    with pytest.raises(SettingError, match="at-most"):
        netsize.plan(STRONG, goal="budget", at_most=2)


def test_modifiers_show_in_the_sizes():
    plan = netsize.plan(STRONG, loss=0.2, ratio=2)
    sized = plan.row("as-printed").sized
    assert sized.n_per_group[1] == 2 * sized.n_per_group[0]
    assert sized.recruited == sum(math.ceil(n / 0.8) for n in sized.n_per_group)


@pytest.mark.parametrize(
    ("text", "metric", "design"),
    [
        ("r(48) = .41\nr(60) = .35", "fisher-z", "correlation"),
        ("F(2, 57) = 5.0\nF(2, 87) = 4.1", "cohen-f", "anova"),
        ("t(20) = 2.9 [paired]\nt(30) = 3.1 [paired]", "difference-score", "paired"),
        ("t(20) = 2.9 [one-sample]", "difference-score", "one-sample"),
        ("χ2(2, N = 80) = 8.5\nχ2(2, N = 100) = 9.1", "cohen-f", "contingency"),
    ],
)
def test_the_design_follows_the_evidence(text, metric, design):
    plan = netsize.plan(text)
    assert plan.metric.name == metric
    assert plan.study.design.name == design
    assert plan.answer.median < plan.row("as-printed").effect
    assert any("design taken from" in note for note in plan.assumptions)


def test_a_correlation_is_planned_and_shown_as_r():
    plan = netsize.plan("r(48) = .41\nr(60) = .35\nr(80) = .30")
    assert plan.row("as-printed").effect == pytest.approx((0.41 + 0.35 + 0.30) / 3)
    assert -1 < plan.answer.low < plan.answer.high < 1


def test_inequalities_are_evidence_but_have_no_printed_effect():
    without = netsize.plan("A: t(38) = 2.9\nB: t(60) = 3.3")
    with_null = netsize.plan("A: t(38) = 2.9\nB: t(60) = 3.3\nC: F(1, 50) < 1\nD: F(1, 80) < 1")
    assert with_null.to_dict()["evidence"]["results"] == 4
    assert with_null.row("as-printed").effect == without.row("as-printed").effect
    assert with_null.answer.median < without.answer.median


def test_only_inequalities_still_make_a_plan():
    plan = netsize.plan("A: F(1, 50) < 1\nB: F(1, 80) < 1")
    assert plan.row("as-printed").effect is None
    assert plan.row("pooled").effect is None
    assert plan.consequences == ()


def test_results_of_one_sample_are_counted_once():
    plan = netsize.plan("A: t(38) = 2.5 [sample S]\nB: t(38) = 2.6 [sample S]\nC: t(60) = 2.9")
    evidence = plan.to_dict()["evidence"]
    assert (evidence["results"], evidence["samples"], evidence["participants"]) == (3, 2, 102)


def test_an_arithmetic_disagreement_that_matters_is_a_warning():
    plan = netsize.plan(STRONG + "G: t(38) = 1.50, p = .03\n")
    assert any(w.startswith("G:") for w in plan.warnings)


def test_effects_far_outside_the_prior_are_a_warning(strong):
    plan = netsize.plan("t(38) = 50")
    assert any("prior standard deviations" in w for w in plan.warnings)
    assert not any("prior standard deviations" in w for w in strong.warnings)


def test_unread_statistics_stop_a_plan_unless_skipped():
    text = STRONG + "G: t(-3) = 2.2\n"
    with pytest.raises(ReadingError) as caught:
        netsize.plan(text)
    assert len(caught.value.places) == 1
    plan = netsize.plan(text, skip_unread=True)
    assert len(plan.literature.left_out) == 1


def test_sensitivity_starts_from_the_plan_and_moves(strong):
    variations = sensitivity(strong)
    assert variations[0].value == strong.answer.value
    by_label = {v.label: v for v in variations}
    assert (
        by_label["prior SD of the mean effect 0.4"].value
        < by_label["prior SD of the mean effect 2"].value
    )
    low = by_label["prior probability of a negligible effect 0.2"].probability_negligible
    high = by_label["prior probability of a negligible effect 0.8"].probability_negligible
    assert low < strong.answer.probability_negligible < high
    without = leave_one_out(strong)
    assert [v.label for v in without] == [f"without {x}" for x in "ABCDE"]
    assert leave_one_out(netsize.plan(WEAK)) == ()


def test_the_chance_of_significance_is_the_mean_power_over_everything_believed(strong):
    answer, study = strong.answer, strong.study
    effects = answer.distribution.quantile((np.arange(4000) + 0.5) / 4000)
    given = study.predicted(answer.sized.units, effects).mean()
    negligible = answer.probability_negligible
    expected = negligible * 0.025 + (1 - negligible) * given
    assert answer.chance_significant == pytest.approx(expected, abs=1e-3)


def test_rules_that_are_not_conditional_on_an_effect_do_not_count_none_twice():
    fixed = netsize.plan(WEAK, rule="fixed", planning_effect=0.5)
    assert fixed.answer.chance_significant == pytest.approx(0.8, abs=0.01)
    assert fixed.answer.ceiling == 1.0
    assert fixed.answer.probability_negligible > 0.5
    profile = netsize.plan("r(18) = .95", rule="profile")
    assert profile.answer.chance_significant > 0.8


def test_the_level_reaches_every_interval():
    wide, narrow = netsize.plan(STRONG, level=0.95), netsize.plan(STRONG, level=0.8)
    for row in wide.rows:
        if row.low is not None:
            other = narrow.row(row.key)
            assert row.low < other.low < other.high < row.high


def test_intervals_stay_on_their_scale():
    r = netsize.plan("r(18) = .95\nr(20) = .97").row("as-printed")
    assert r.low < r.effect < r.high < 1
    f = netsize.plan("F(2, 30) = 3.4\nF(2, 40) = 1.1\nF(2, 50) = 8.0")
    assert all(row.low is None or row.low >= 0 for row in f.rows)
    same = netsize.plan("A: t(38) = 2.3\nB: t(38) = 2.3").row("as-printed")
    assert same.low is None


def test_several_bands_through_a_plan():
    plan = netsize.plan(STRONG, cut_points=(0.05, 0.2, 0.5))
    assert len(plan.literature.averaged.printing) == 3
    assert plan.answer.value == pytest.approx(netsize.plan(STRONG).answer.value, abs=0.1)


def test_sensitivity_passes_over_what_leaves_nothing():
    plan = netsize.plan("A: t(38) = 3.1\nB: t(58) = 1.2\nC: t(98) = 1.1", rule="single-study")
    assert [v.label for v in leave_one_out(plan)] == ["without B", "without C"]
    assert sensitivity(plan)[0].group == "as planned"


@pytest.mark.parametrize(
    ("settings", "named"),
    [
        ({"cut_points": (0.05, 0.1, 0.2, 0.5)}, "--cut-points"),
        ({"cut_points": (0.1, 0.05)}, "--cut-points"),
        ({"corrections": ("magic",)}, "--corrections"),
        ({"half_width": 0.2}, "--half-width"),
        ({"at_most": 100}, "--at-most"),
        ({"goal": "budget", "at_most": 1200, "fixed_cost": 1000}, "--fixed-cost"),
        ({"rule": "fixed", "planning_effect": 1e-7}, "--planning-effect"),
        ({"alpha": 0.0}, "--alpha"),
        ({"alpha": float("nan")}, "--alpha"),
        ({"power": 1.0}, "--power"),
        ({"power": 0.04}, "--power"),
        ({"assurance": 1.2}, "--assurance"),
        ({"sides": 3}, "--sides"),
        ({"ratio": -1}, "--ratio"),
        ({"smallest_effect": -0.2}, "--smallest-effect"),
        ({"smallest_effect": float("inf")}, "--smallest-effect"),
        ({"rule": "hope"}, "--rule"),
        ({"target": "moon"}, "--target"),
        ({"rule": "fixed"}, "--planning-effect"),
        ({"planning_effect": 0.2}, "--planning-effect"),
        ({"goal": "precision"}, "--half-width"),
        ({"goal": "budget"}, "--at-most"),
        ({"design": "cross"}, "--design"),
        ({"design": "two-proportions"}, "--design"),
        ({"nonsense": 1}, "--nonsense"),
        ({"groups": 3}, "--groups"),
    ],
)
def test_settings_out_of_range_name_the_option(settings, named):
    with pytest.raises(SettingError) as caught:
        netsize.plan(STRONG, **settings)
    assert caught.value.setting == named


@pytest.mark.parametrize(
    "text", ["", "nothing to see here", "t(38) = 2.3\nr(40) = .3", "F(2, 30) = 3.4\nF(3, 40) = 5.2"]
)
def test_evidence_that_cannot_be_planned_from_is_refused_in_words(text):
    with pytest.raises(InputError) as caught:
        netsize.plan(text)
    assert len(str(caught.value)) > 40


def test_an_effect_beyond_its_scale_is_refused():
    with pytest.raises(SettingError, match="no correlation"):
        netsize.plan("r(57) = .5", smallest_effect=1.2)


def test_the_rule_single_study_needs_a_significant_result():
    with pytest.raises(EvidenceError, match="significant"):
        netsize.plan("t(38) = 1.1", rule="single-study")


def test_an_absurd_entry_is_refused_by_name():
    with pytest.raises(EvidenceError, match="check the entry"):
        netsize.plan("Lab A: t(38) = 99999, p < .001")


@pytest.mark.parametrize(
    ("text", "design", "expected"),
    [
        ("χ2(2, N = 80) = 8.5\nχ2(2, N = 100) = 9.1", "contingency", {"df1": 2}),
        ("F(3, 60) = 4.0\nF(3, 80) = 3.9", "anova", {"groups": 4}),
    ],
)
def test_a_design_asked_for_takes_its_shape_from_the_evidence(text, design, expected):
    study = netsize.plan(text, design=design).study
    assert {name: getattr(study.design, name) for name in expected} == expected


@pytest.mark.parametrize("design", ["factorial", "contingency"])
def test_a_shape_that_the_evidence_does_not_settle_is_asked_for(design):
    with pytest.raises(SettingError) as caught:
        netsize.plan("F(2, 57) = 5.0\nF(2, 87) = 4.1", design=design)
    assert caught.value.setting == "--design"
