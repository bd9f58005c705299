"""Inequalities, directions, one-tailed papers and cut points become intervals and bands."""

from __future__ import annotations

import math

import pytest
from scipy import stats

from netsize.effect_sizes import effects
from netsize.errors import EvidenceError, SettingError
from netsize.reported.records import Printed

CRITICAL = stats.t.isf(0.025, 38)


@pytest.mark.parametrize(
    ("fields", "low", "high", "two_sided", "band"),
    [
        ({"p": Printed(0.05, ">")}, 0, CRITICAL, True, 1),
        ({"p": Printed(0.05, "<")}, CRITICAL, math.inf, False, 0),
        ({"p": Printed(0.05, "<"), "direction": -1}, -math.inf, -CRITICAL, False, 1),
        ({"p": Printed(0.10, "<")}, stats.t.isf(0.05, 38), math.inf, False, None),
        ({"p": Printed(0.05, ">"), "tails": 1}, -math.inf, stats.t.isf(0.05, 38), False, 1),
        ({"p": Printed(0.05, "<"), "tails": 1}, stats.t.isf(0.05, 38), math.inf, False, 0),
        ({"value": 1.0, "relation": "<"}, 0, 1, True, 1),
        ({"value": 3.0, "relation": ">"}, 3, math.inf, False, 0),
        ({"value": -3.0, "relation": ">"}, -math.inf, -3, False, 1),
    ],
)
def test_inequality_of_t(row, fields, low, high, two_sided, band):
    r = row("t", df=(38,), **fields)
    e = r.evidence
    assert (r.estimate, r.variance, r.p) == (None, None, None)
    assert (e.low, e.high) == pytest.approx((low, high))
    assert (e.two_sided, e.band) == (two_sided, band)


def test_small_f_of_one_numerator_df_has_no_direction(row):
    e = row("f", 1.0, relation="<", df=(1, 38)).evidence
    assert (e.low, e.high, e.two_sided) == (0, 1, True)


def test_inequality_without_a_direction(row):
    e = row("f", df=(2, 57), p=Printed(0.05, ">")).evidence
    assert (e.low, e.two_sided, e.band) == (0, False, 1)
    assert e.high == pytest.approx(stats.f.isf(0.05, 2, 57))


def test_directed_inequality_on_an_undirected_metric(row):
    e = row("t", df=(38,), p=Printed(0.05, "<"), settings={"metric": "cohen-f"}).evidence
    assert (e.low, e.high) == pytest.approx((CRITICAL**2, math.inf))
    assert e.cuts == pytest.approx((stats.f.isf(0.05, 1, 38),))


def test_direction_multiplies_the_printed_sign(row):
    assert row("t", -2.0, df=(38,)).estimate < 0
    assert row("t", -2.0, df=(38,), direction=-1).estimate > 0
    assert row("t", 2.0, df=(38,), direction=-1).estimate < 0


def test_mostly_negative_results_raise_the_question_of_direction(result):
    table = effects([result("t", -2.0, df=(38,)), result("t", -1.0, df=(38,), label="b")])
    assert any("[as predicted]" in note for note in table.notes)


def test_cut_points(row):
    e = row("t", 2.3, df=(38,), settings={"cut_points": (0.01, 0.05, 0.1)}).evidence
    assert e.cuts == pytest.approx(tuple(stats.t.isf(a / 2, 38) for a in (0.01, 0.05, 0.1)))
    assert e.band == 1


def test_the_papers_own_cut(row):
    assert row("t", 2.3, df=(38,), cut=0.01).evidence.cuts == pytest.approx(
        (stats.t.isf(0.005, 38),)
    )
    assert row("t", 2.3, df=(38,), cut=0.01).evidence.band == 1
    one_tailed = row("t", 1.8, df=(38,), tails=1).evidence
    assert one_tailed.cuts == pytest.approx((stats.t.isf(0.05, 38),))
    assert one_tailed.band == 0


def test_own_cut_above_the_next_is_left_out_with_the_reason(result):
    with pytest.raises(EvidenceError, match="its own cut point"):
        effects([result("t", 2.3, df=(38,), cut=0.2)], cut_points=(0.05, 0.1))


@pytest.mark.parametrize("family", ["r", "z", "chi2"])
def test_cuts_of_other_families_are_at_their_own_level(row, family):
    fields = {
        "r": {"value": 0.3, "n": (40,)},
        "z": {"value": 2.0, "n": (20, 20)},
        "chi2": {"value": 9.0, "df": (3,), "n": (60,)},
    }[family]
    r = row(family, **fields)
    (cut,) = r.evidence.cuts
    level = {
        "r": lambda: 2 * stats.t.sf(cut * math.sqrt(38 / (1 - cut * cut)), 38),
        "z": lambda: 2 * stats.norm.sf(cut),
        "chi2": lambda: stats.chi2.sf(cut, 3),
    }[family]()
    assert level == pytest.approx(0.05)


def test_critical_f_keeps_its_digits_at_small_levels(row):
    (cut,) = row("f", 4.0, df=(3, 40), settings={"alpha": 1e-12}).evidence.cuts
    assert stats.f.sf(cut, 3, 40) == pytest.approx(1e-12, rel=1e-9)


@pytest.mark.parametrize(
    ("settings", "named"),
    [
        ({"alpha": 0}, "--alpha"),
        ({"alpha": math.nan}, "--alpha"),
        ({"cut_points": (0.1, 0.05)}, "--cut-points"),
        ({"cut_points": ()}, "--cut-points"),
        ({"level": 95}, "--level"),
        ({"metric": "cohen-d"}, "--metric"),
        ({"variance": "best"}, "--variance"),
        ({"correlation": 1}, "--within-pair"),
    ],
)
def test_settings_outside_their_range_are_named(result, settings, named):
    with pytest.raises(SettingError) as caught:
        effects([result("t", 2.0, df=(38,))], **settings)
    assert caught.value.setting == named


@pytest.mark.parametrize(
    ("family", "value", "df", "p", "band"),
    [
        ("t", 2.02, (38,), Printed(0.05, "<"), 0),  # critical 2.0244
        ("t", 2.02, (38,), None, 1),
        ("t", 2.02, (38,), Printed(0.05, "="), 1),  # leaves it open
        ("t", 2.02, (38,), Printed(0.049, "="), 0),
        ("t", 2.03, (38,), Printed(0.05, ">"), 0),  # 2.025 is above the critical value
        ("t", 1.9, (38,), Printed(0.05, "<"), 1),  # beyond rounding: the statistic stands
        ("f", 4.10, (1, 38), Printed(0.05, "<"), 0),  # critical 4.0982
        ("f", 4.09, (1, 38), Printed(0.05, "<"), 1),  # at most 4.095
        ("r", 0.31, (38,), Printed(0.05, "<"), 0),  # critical .3120
        ("f", 3.16, (2, 57), Printed(0.05, ">"), 1),  # critical 3.1588
    ],
)
def test_printed_p_decides_where_rounding_leaves_two_bands(row, family, value, df, p, band):
    r = row(family, value, df=df, decimals=2, p=p)
    assert r.evidence.band == band
