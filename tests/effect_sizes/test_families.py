"""Each family becomes the statistic, sizes and effect that a careful reader would take it for."""

from __future__ import annotations

import math

import pytest
from scipy import stats

from netsize.effect_sizes import effects
from netsize.effect_sizes.estimators import small_sample_factor
from netsize.errors import EvidenceError
from netsize.reported.records import Counts, Group, Interval, Printed


def refusal(result) -> str:
    with pytest.raises(EvidenceError) as caught:
        effects([result])
    return str(caught.value)


def test_t_of_independent_groups(row):
    r = row("t", 2.31, df=(38,))
    assert (r.n, r.groups, r.design) == (40, (20, 20), "two-groups")
    assert r.printed == pytest.approx(2.31 * math.sqrt(2 / 20))
    assert r.estimate == pytest.approx(float(small_sample_factor(38)) * r.printed)
    assert r.null_variance == pytest.approx(0.1)
    assert r.p == pytest.approx(2 * stats.t.sf(2.31, 38))
    assert any("equal groups of 20 assumed from df 38" in a for a in r.assumptions)


def test_odd_total_differs_by_one(row):
    assert row("t", 2.0, df=(37,)).groups == (20, 19)


def test_sizes_given_are_not_assumed(row):
    r = row("t", 2.31, df=(38,), n=(18, 22), direction_origin="tag")
    assert r.groups == (18, 22)
    assert r.printed == pytest.approx(2.31 * math.sqrt(1 / 18 + 1 / 22))
    assert r.assumptions == ()


def test_welch_needs_the_sizes(row, result):
    assert "[n 18, 22]" in refusal(result("t", 2.1, df=(31.4,)))
    r = row("t", 2.1, df=(31.4,), n=(18, 22))
    assert r.evidence.df == (31.4,)
    assert any("Welch" in a for a in r.assumptions)


@pytest.mark.parametrize("design", ["paired", "one-sample"])
def test_t_of_differences(row, design):
    r = row("t", 3.0, df=(24,), design=design)
    assert (r.metric.name, r.n, r.groups) == ("difference-score", 25, (25,))
    assert r.printed == pytest.approx(0.6)
    assert r.null_variance == pytest.approx(1 / 25)


def test_n_of_df_plus_one_is_paired(row):
    r = row("t", 3.0, df=(24,), n=(25,))
    assert r.metric.name == "difference-score"
    assert any("n is df + 1" in a for a in r.assumptions)


def test_paired_on_the_metric_of_groups(row):
    r = row(
        "t",
        3.0,
        df=(24,),
        design="paired",
        settings={"metric": "mean-difference", "correlation": 0.7},
    )
    own = row(
        "t", 3.0, df=(24,), design="paired", correlation=0.7, settings={"metric": "mean-difference"}
    )
    assert r.printed == own.printed == pytest.approx(0.6 * math.sqrt(2 * 0.3))
    assert r.variance == pytest.approx(own.variance)


def test_f_with_one_numerator_df_is_t(row):
    f = row("f", 5.12, df=(1, 56))
    t = row("t", math.sqrt(5.12), df=(56,))
    assert f.estimate == pytest.approx(t.estimate)
    assert (f.low, f.high) == pytest.approx((t.low, t.high))
    assert dict(f.others)["eta2"] == pytest.approx(5.12 / (5.12 + 56))
    assert row("f", 5.12, df=(1, 56), direction=-1).estimate == pytest.approx(-t.estimate)


def test_f_with_several_numerator_df(row):
    r = row("f", 5.0, df=(2, 57))
    others = dict(r.others)
    assert (r.metric.name, r.n, r.groups) == ("cohen-f", 60, (20, 20, 20))
    assert r.printed == pytest.approx(math.sqrt(2 * 5 / 57))
    assert r.printed**2 == pytest.approx(others["eta2"] / (1 - others["eta2"]))
    assert others["f2"] == pytest.approx((2 * 5 * 55 / 57 - 2) / 60)
    assert r.estimate == pytest.approx(math.sqrt(others["f2"]))


def test_factorial_n_enters_omega_squared_and_f(row):
    r = row("f", 5.0, df=(2, 84), n=(90,))
    assert dict(r.others)["omega2"] == pytest.approx(2 * 4 / (2 * 4 + 90))
    assert r.evidence.scale == pytest.approx(math.sqrt(90))


def test_f_below_one_keeps_its_negative_estimate(row):
    r = row("f", 0.3, df=(3, 40))
    assert r.estimate < 0
    assert dict(r.others)["epsilon2"] < 0
    assert r.low == 0


def test_sphericity_correction_keeps_the_participants(row):
    r = row("f", 4.2, df=(1.6, 30.4), design="paired")
    assert r.n == 20
    assert r.evidence.df == (1.6, 30.4)


@pytest.mark.parametrize(("df2", "variance"), [(5, True), (4, False), (2, False), (1, False)])
def test_f_with_few_error_df_has_no_variance(row, df2, variance):
    r = row("f", 9.0, df=(2, df2))
    assert (r.variance is not None) == variance
    assert math.isfinite(r.high)


@pytest.mark.parametrize("df", [1, 2, 3])
def test_t_with_few_df(row, df):
    r = row("t", 4.0, df=(df,))
    assert (r.estimate is None) == (df == 1)
    assert r.low < r.printed < r.high


def test_correlations(row):
    r = row("r", 0.31, df=(48,))
    assert r.n == 50
    assert r.estimate == pytest.approx(math.atanh(0.31))
    assert r.variance == pytest.approx(1 / 47)
    assert dict(r.others)["r_unbiased"] > 0.31
    assert row("r", 0.31, n=(50,)).low == r.low
    assert r.p == pytest.approx(2 * stats.t.sf(0.31 * math.sqrt(48 / (1 - 0.31**2)), 48))


def test_partial_correlation_counts_its_df(row):
    r = row("r", 0.31, df=(45,), n=(50,))
    assert r.variance == pytest.approx(1 / 44)
    assert any("3 variables held constant" in a for a in r.assumptions)


def test_three_pairs_carry_evidence_only(row):
    r = row("r", 0.9, n=(3,))
    assert r.estimate is None
    assert -1 < math.tanh(r.low) < 0.9 < math.tanh(r.high) < 1


def test_regression_coefficient(row):
    r = row("coefficient", 0.42, standard_error=0.15, df=(96,))
    t = 0.42 / 0.15
    assert r.printed == pytest.approx(t / math.sqrt(t * t + 96))
    assert r.evidence.df == (96,)


def test_chi_square_of_a_two_by_two_table_is_phi(row):
    r = row("chi2", 6.2, df=(1,), n=(80,))
    assert r.metric.name == "fisher-z"
    assert r.printed == pytest.approx(math.sqrt(6.2 / 80))
    assert r.p == pytest.approx(stats.chi2.sf(6.2, 1))


def test_larger_table_is_w(row):
    r = row("chi2", 8.0, df=(3,), n=(120,))
    assert (r.metric.name, r.evidence.kernel) == ("cohen-f", "chi2")
    assert r.printed == pytest.approx(math.sqrt(8 / 120))
    assert dict(r.others)["w2"] == pytest.approx((8 - 3) / 120)


def test_z_follows_the_other_results(result, row):
    z = result("z", 2.0, n=(50,))
    alone = row("z", 2.0, n=(50,))
    assert alone.metric.name == "fisher-z"
    assert alone.printed == pytest.approx(2 / math.sqrt(50))
    table = effects([z, result("t", 2.0, df=(38,), label="b")])
    assert table.metric.name == "mean-difference"
    assert table.rows[0].printed == pytest.approx(2 * math.sqrt(2 / 25))
    assert table.rows[0].evidence.kernel == "z"


def test_p_alone_is_turned_back(row):
    r = row("p", 0.03, p=Printed(0.03), n=(40,))
    assert r.evidence.low == pytest.approx(stats.t.isf(0.015, 38))
    assert r.p == pytest.approx(0.03)
    assert any("recomputed from p = 0.03" in a for a in r.assumptions)


def test_p_of_zero_is_an_inequality(row):
    r = row("p", None, p=Printed(0.0, decimals=3), n=(40,))
    assert r.estimate is None
    assert r.evidence.low == pytest.approx(stats.t.isf(0.00025, 38))


def test_means(row):
    r = row("means", groups=(Group(5.2, 1.1, 20), Group(4.4, 1.2, 24)))
    pooled = math.sqrt((19 * 1.1**2 + 23 * 1.2**2) / 42)
    assert r.printed == pytest.approx(0.8 / pooled)
    assert r.evidence.low == pytest.approx(
        stats.ttest_ind_from_stats(5.2, 1.1, 20, 4.4, 1.2, 24).statistic
    )


def test_means_of_several_groups_are_an_f(row):
    r = row("means", groups=(Group(1, 2, 10), Group(2, 2, 12), Group(4, 3, 9)))
    # between 45.02.. over 2 df against the pooled variance on 28 df
    assert r.evidence.df == (2, 28)
    grand = (10 + 24 + 36) / 31
    between = (10 * (1 - grand) ** 2 + 12 * (2 - grand) ** 2 + 9 * (4 - grand) ** 2) / 2
    within = (9 * 4 + 11 * 4 + 8 * 9) / 28
    assert r.evidence.low == pytest.approx(between / within)


def test_paired_means_need_the_correlation(row, result):
    groups = (Group(5.2, 1.1, 20), Group(4.4, 1.2, 20))
    assert "within-pair" in refusal(result("means", groups=groups, design="paired"))
    r = row("means", groups=groups, design="paired", correlation=0.6)
    sd = math.sqrt(1.1**2 + 1.2**2 - 2 * 0.6 * 1.1 * 1.2)
    assert r.printed == pytest.approx(0.8 / sd)


@pytest.mark.parametrize(
    ("name", "factor"), [("d", 1.0), ("g", 1 / float(small_sample_factor(40)))]
)
def test_printed_difference(row, name, factor):
    r = row("smd", 0.5, n=(20, 22), metric=name)
    assert r.printed == pytest.approx(0.5 * factor)


def test_printed_paired_differences(row):
    assert row("smd", 0.5, n=(25,), design="paired", metric="dz").printed == pytest.approx(0.5)
    dav = row("smd", 0.5, n=(25,), design="paired", metric="dav", correlation=0.5)
    assert dav.printed == pytest.approx(0.5)  # √(2(1-ρ)) = 1


@pytest.mark.parametrize("kind", ["partial-eta2", "omega2", "epsilon2", "R2-change"])
def test_printed_share_of_variance_gives_back_its_f(row, kind):
    r = row("eta2", 0.1, n=(60,), df=(2, 57), metric=kind)
    key = {"omega2": "omega2", "epsilon2": "epsilon2"}.get(kind, "eta2")
    assert dict(r.others)[key] == pytest.approx(0.1)


def test_printed_share_alone_is_one_df(row):
    r = row("eta2", 0.08, n=(58,), metric="eta2")
    assert r.metric.name == "mean-difference"
    assert r.evidence.low == pytest.approx(math.sqrt(0.08 / 0.92 * 56))


def test_counts_and_odds_ratio(row):
    counts = row("counts", counts=(Counts(12, 40), Counts(5, 40)))
    table = [[12, 28], [5, 35]]
    odds = stats.contingency.odds_ratio(table, kind="sample").statistic
    assert counts.estimate == pytest.approx(math.log(odds))
    ratio = row("odds-ratio", 1.85, interval=Interval(1.1, 3.1))
    assert ratio.estimate == pytest.approx(math.log(1.85))
    assert math.sqrt(ratio.variance) == pytest.approx(math.log(3.1 / 1.1) / 2 / 1.959964, rel=1e-6)
    as_d = row(
        "odds-ratio", 1.85, interval=Interval(1.1, 3.1), settings={"metric": "mean-difference"}
    )
    assert as_d.estimate == pytest.approx(math.log(1.85) * math.sqrt(3) / math.pi)


def test_empty_cell_is_mended_and_said(row):
    r = row("counts", counts=(Counts(0, 20), Counts(5, 20)))
    assert r.estimate == pytest.approx(math.log(0.5 * 15.5 / (20.5 * 5.5)))
    assert any("½ added" in a for a in r.assumptions)


def test_ready_made_estimate(row):
    r = row("estimate", 0.4, metric="mean-difference", standard_error=0.2)
    assert (r.estimate, r.n) == (0.4, 0)
    assert r.variance == pytest.approx(0.04)
    assert (r.low, r.high) == pytest.approx((0.4 - 0.392, 0.4 + 0.392), abs=1e-4)
    assert row("estimate", 0.4, metric="mean-difference", interval=Interval(0.1, 0.5)).assumptions


@pytest.mark.parametrize(
    ("family", "value", "fields", "reason"),
    [
        ("t", 2.0, {"df": (38,), "n": (30,)}, "at least 40 participants"),
        ("t", 2.0, {"df": (38,), "n": (10,), "design": "paired"}, "at least 39"),
        ("t", 2.0, {"df": (-3,)}, "more than 0"),
        ("t", math.nan, {"df": (38,)}, "finite"),
        ("t", None, {"df": (38,)}, "neither a value nor a p-value"),
        ("t", None, {"df": (38,), "p": Printed(1.0)}, "p = 1"),
        ("f", -1.0, {"df": (1, 30)}, "negative"),
        ("f", 4.0, {"df": (3,)}, "two degrees of freedom"),
        ("f", 4.0, {"df": (2, 57), "n": (30,)}, "at least 60"),
        ("r", 1.0, {"n": (30,)}, "between -1 and 1"),
        ("r", 0.3, {"n": (2,)}, "3 pairs"),
        ("r", 0.3, {"n": (20,), "df": (48,)}, "at most n - 2"),
        ("z", 2.0, {}, "number of participants"),
        ("z", 9.0, {"n": (40,), "design": "correlation"}, "too large"),
        ("chi2", 4.0, {"df": (1,)}, "number of participants"),
        ("coefficient", 0.3, {"df": (40,)}, "standard error"),
        ("counts", None, {"counts": (Counts(0, 20), Counts(0, 20))}, "same outcome"),
        ("counts", None, {"counts": (Counts(30, 20), Counts(1, 20))}, "impossible"),
        ("odds-ratio", -2.0, {"interval": Interval(1, 2)}, "above 0"),
        ("odds-ratio", 2.0, {"interval": Interval(0, 3)}, "cannot reach"),
        ("estimate", 0.3, {"standard_error": 0.1}, "needs its metric"),
        ("estimate", 0.3, {"metric": "fisher-z"}, "neither an interval nor"),
        ("eta2", 0.3, {"n": (40,), "metric": "generalized-eta2"}, "generalized"),
        ("means", None, {"groups": (Group(1, 0, 10), Group(2, 1, 10))}, "positive standard"),
    ],
)
def test_what_cannot_be_used_says_why(result, family, value, fields, reason):
    assert reason in refusal(result(family, value, **fields))


def test_one_bad_result_does_not_take_the_others_down(result):
    table = effects([result("t", 2.0, df=(38,)), result("t", 2.0, df=(31.4,), label="b")])
    assert [r.label for r in table.rows] == ["a"]
    assert [x.label for x in table.left_out] == ["b"]


def test_left_out_by_the_user(result):
    table = effects(
        [result("t", 2.0, df=(38,)), result("t", 9.0, df=(38,), label="b", left_out="retracted")]
    )
    assert [(x.label, x.reason) for x in table.left_out] == [("b", "retracted")]


def test_notes_of_the_reader_come_first(row):
    assert (
        row("t", 2.0, df=(38,), notes=("read from a footnote",)).assumptions[0]
        == "read from a footnote"
    )


def test_samples_are_carried_through(row):
    assert row("t", 2.0, df=(38,)).sample == "a"
    assert row("t", 2.0, df=(38,), sample="S1").sample == "S1"
