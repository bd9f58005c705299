"""Which metric: chosen where there is nothing to choose, asked for otherwise."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from netsize.effect_sizes import METRICS, effects
from netsize.errors import EvidenceError
from netsize.reported.records import Counts, ReportedResult


@pytest.fixture
def mixed(result):
    groups = [result("t", 2.0 + i / 10, df=(38,), label=f"g{i}") for i in range(6)]
    pairs = [result("t", 2.0, df=(19,), design="paired", label=f"p{i}") for i in range(2)]
    return [*groups, *pairs]


def test_choice_is_printed(result):
    assert effects([result("t", 2.0, df=(38,))]).notes == (
        "metric mean-difference: all results are comparisons of independent groups",
    )


def test_mixed_designs_end_in_one_question(mixed):
    with pytest.raises(EvidenceError) as caught:
        effects(mixed)
    question = str(caught.value)
    assert question.count("?") == 1
    for part in (
        "comparisons of independent groups (six) and paired comparisons (two)",
        "--metric mean-difference: 6 of 8, without the paired comparisons",
        "--metric difference-score: 2 of 8",
        "--within-pair .5",
        "[within-pair r .5]",
        "[leave out: REASON]",
    ):
        assert part in question


def test_question_answered_by_the_correlation(mixed):
    table = effects(mixed, correlation=0.5)
    assert (table.metric.name, len(table.rows)) == ("mean-difference", 8)
    assert any("within-pair correlation" in note for note in table.notes)


def test_question_answered_by_a_tag(mixed, result):
    tagged = [
        result("t", 2.0, df=(19,), design="paired", label=f"p{i}", correlation=0.5)
        for i in range(2)
    ]
    assert len(effects([*mixed[:6], *tagged]).rows) == 8


def test_question_answered_by_the_metric(mixed):
    table = effects(mixed, metric="mean-difference")
    assert len(table.rows) == 6
    assert [x.label for x in table.left_out] == ["p0", "p1"]
    assert all("within-pair correlation is missing" in x.reason for x in table.left_out)
    assert len(effects(mixed, metric="difference-score", correlation=0.5).rows) == 8


@pytest.mark.parametrize("metric", METRICS)
def test_nothing_that_can_go_on_the_metric(result, metric):
    three_groups = result("f", 4.0, df=(2, 57))
    if metric == "cohen-f":
        assert effects([three_groups], metric=metric).rows
    else:
        with pytest.raises(EvidenceError, match="no result can be used"):
            effects([three_groups], metric=metric)


@pytest.mark.parametrize("metric", ["mean-difference", "fisher-z", "cohen-f"])
def test_conversion_keeps_p_and_band(result, metric):
    for r in (
        result("t", 2.31, df=(38,)),
        result("r", 0.31, n=(50,)),
        result("f", 5.1, df=(1, 56)),
    ):
        home = effects([r]).rows[0]
        (row,) = effects([r], metric=metric).rows
        assert row.p == pytest.approx(home.p)
        assert row.evidence.band == home.evidence.band


def test_t_on_the_metric_f_is_half_of_d(result):
    t = result("t", 2.31, df=(38,))
    (on_f,), (on_d,) = effects([t], metric="cohen-f").rows, effects([t]).rows
    # printed f is √(η²/(1-η²)) = t/√df, d/2 but for df in the place of n
    assert on_f.printed == pytest.approx(on_d.printed / 2 * math.sqrt(40 / 38))
    assert on_f.evidence.scale == pytest.approx(2 * on_d.evidence.scale)


def test_table_of_counts_as_a_correlation_is_close_to_phi():
    counts = ReportedResult(label="a", family="counts", counts=(Counts(30, 60), Counts(20, 60)))
    (row,) = effects([counts], metric="fisher-z").rows
    # the logistic route through d, against φ itself
    assert row.printed == pytest.approx(dict(row.others)["phi"], abs=0.02)


@given(d=st.floats(-3, 3), n=st.integers(2, 200))
def test_round_trip_from_d_to_t_and_back(d, n):
    t = d * math.sqrt(n / 2)
    (row,) = effects([ReportedResult(label="a", family="t", value=t, df=(2 * n - 2,))]).rows
    assert row.printed == pytest.approx(d, abs=1e-12)
    again = ReportedResult(label="a", family="smd", value=row.printed, n=(n, n), metric="d")
    (back,) = effects([again]).rows
    assert back.evidence.low == pytest.approx(t, abs=1e-12)


@given(t=st.floats(0.01, 20), df=st.integers(2, 400))
def test_turning_the_sign_mirrors_the_row(t, df):
    (plus,) = effects([ReportedResult(label="a", family="t", value=t, df=(df,))]).rows
    (minus,) = effects([ReportedResult(label="a", family="t", value=-t, df=(df,))]).rows
    assert minus.estimate == -plus.estimate
    assert minus.variance == plus.variance
    assert (minus.low, minus.high) == pytest.approx((-plus.high, -plus.low), rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("metric", METRICS.values(), ids=METRICS)
def test_shown_and_pooled_invert_each_other(metric):
    x = np.array([0.0, 0.1, 0.9])
    assert metric.pooled(metric.shown(x)) == pytest.approx(x)


def test_order_of_results_does_not_matter(mixed):
    forward = effects(mixed, correlation=0.5).rows
    backward = effects(mixed[::-1], correlation=0.5).rows
    assert [r.to_dict() for r in forward] == [r.to_dict() for r in backward[::-1]]


def test_table_as_plain_types(mixed):
    table = effects(mixed, correlation=0.5)
    record = table.to_dict()
    assert record["metric"] == "mean-difference"
    assert sum(r["weight"] for r in record["rows"]) == pytest.approx(1)
    frame = table.table()
    assert list(frame["label"]) == [r.label for r in table.rows]
    assert frame["g"].tolist() == pytest.approx([r.estimate for r in table.rows])


def test_no_results():
    with pytest.raises(EvidenceError, match="no results"):
        effects([])
