"""The whole weighing: its JSON, its table, its paragraph."""

from __future__ import annotations

import json

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import netsize
from netsize.errors import EvidenceError
from netsize.presentation.weighing import paragraph
from netsize.synthesis.corrections import CORRECTIONS

SIX = """A: t(38) = 2.3
B: t(58) = 2.5
C: t(78) = 2.9
D: t(48) = 2.2
E: t(68) = 2.6
F: t(158) = 1.1"""
POOLED = [
    "method", "mean", "se", "low", "high", "tau2", "q", "i2", "prediction_low", "prediction_high",
]  # fmt: skip
ROW = [
    "key", "label", "estimate", "se", "low", "high", "tau2", "used", "status", "reason",
]  # fmt: skip


@pytest.fixture(scope="module")
def weighing():
    return netsize.weigh(SIX)


def test_json(weighing):
    record = json.loads(json.dumps(weighing.to_dict(), allow_nan=False))
    assert list(record["pooled"]) == POOLED
    assert [list(e) for e in record["estimators"]] == [ROW] * len(record["estimators"])
    assert [e["key"] for e in record["estimators"]][:2] == ["as-printed", "random-effects"]
    assert record["pooled"]["mean"] == record["estimators"][1]["estimate"]
    assert {d["key"] for d in record["diagnostics"]} == {
        "regression-asymmetry", "rank-asymmetry", "excess-significance", "right-skew", "flatness",
        "selection-ratio",
    }  # fmt: skip
    assert len(record["leave_one_out"]) == 6
    low, high = record["heterogeneity"]["tau2_low"], record["heterogeneity"]["tau2_high"]
    assert low <= record["pooled"]["tau2"] <= high


def test_infinite_limits_are_null():
    record = netsize.weigh("A: t(38) = 2.3").to_dict()
    row = next(e for e in record["estimators"] if e["key"] == "conditional-likelihood")
    assert row["low"] is None
    json.dumps(record, allow_nan=False)


def test_table_has_a_row_an_estimator(weighing):
    frame = weighing.table()
    assert frame["key"].tolist() == [e.key for e in weighing.estimators]
    assert frame.loc[1, "shown"] == pytest.approx(weighing.pooled.mean)


def test_same_from_text_reading_results_and_effects(weighing):
    reading = netsize.read(SIX)
    for source in (reading, reading.results, netsize.effects(SIX)):
        assert netsize.weigh(source).to_dict() == weighing.to_dict()


def test_correlations_are_pooled_on_z_and_shown_as_r():
    weighing = netsize.weigh("A: r(48) = .31\nB: r(38) = .41\nC: r(98) = .22")
    record = weighing.to_dict()
    assert record["shown_as"] == "r"
    z = np.arctanh([0.31, 0.41, 0.22])
    n = np.array([50, 40, 100])
    assert record["pooled"]["mean"] == pytest.approx(np.average(z, weights=n - 3), abs=1e-6)
    assert record["shown"][1]["estimate"] == pytest.approx(np.tanh(record["pooled"]["mean"]))
    assert weighing.as_printed == pytest.approx(np.mean([0.31, 0.41, 0.22]))


def test_deflation(weighing):
    pooled = weighing.estimators[1]
    expected = 1 - pooled.estimate / weighing.as_printed
    assert weighing.deflation(pooled) == pytest.approx(expected)
    assert weighing.deflation(weighing.estimators[0]) == pytest.approx(0)
    negative = netsize.weigh("A: t(38) = -2.3\nB: t(58) = -2.5\nC: t(78) = -2.9")
    assert negative.deflation(negative.estimators[1]) is None


def test_leave_one_out_is_pooling_without(weighing):
    lines = SIX.split("\n")
    without_first = netsize.weigh("\n".join(lines[1:]))
    first = weighing.leave_one_out[0]
    assert first.label == "A"
    assert first.mean == pytest.approx(without_first.pooled.mean, abs=1e-9)
    assert first.shift == pytest.approx(
        (weighing.pooled.mean - without_first.pooled.mean) / without_first.pooled.se, abs=1e-8
    )
    assert sum(w.share for w in weighing.leave_one_out) == pytest.approx(1)
    assert [w.label for w in weighing.leave_one_out if w.influential] == ["F"]


def test_ready_made_estimates_with_variances():
    text = "label,effect,metric,variance\n" + "\n".join(
        f"T{i},{y},log-ratio,{v}"
        for i, (y, v) in enumerate([(0.2, 0.02), (0.5, 0.09), (0.1, 0.01), (0.9, 0.2)])
    )
    weighing = netsize.weigh(text)
    assert weighing.metric.name == "log-ratio"
    assert weighing.results == 4
    rows = {e.key: e for e in weighing.corrections}
    assert rows["conditional-either-sign"].used == 1  # .9/√.2 alone is beyond 1.96
    assert rows["pet"].estimate < weighing.pooled.mean


def test_inequalities_are_listed_as_left_out():
    weighing = netsize.weigh("A: t(38) = 2.3\nB: t(58) = 2.5\nC: p < .05, n = 40")
    assert [x.label for x in weighing.left_out] == ["C"]
    assert "inequality" in weighing.left_out[0].reason
    with pytest.raises(EvidenceError, match="point estimate"):
        netsize.weigh("A: p < .05, n = 40")


def test_paragraph_says_what_the_numbers_say(weighing):
    text = paragraph(weighing)
    runs = [e for e in weighing.corrections if e.status in ("fine", "at a boundary")]
    assert f"The {len(runs)} corrections that run" in text
    assert "6 results are few" in text
    assert "much hangs on F" in text
    assert "regression test of asymmetry" in text
    assert "non-significant" not in text  # F is not significant
    assert "The plan uses none of these estimates" in text


def test_paragraph_of_one_result():
    text = paragraph(netsize.weigh("A: t(38) = 2.3"))
    assert "(1 result)" in text
    assert "no printed result is non-significant" in text
    assert "pooled" not in text


def test_paragraph_of_effects_against_the_prediction():
    text = paragraph(netsize.weigh("A: t(38) = -3.3\nB: t(58) = -3.5\nC: t(78) = -3.9"))
    assert "against the prediction" in text


def test_paragraph_of_heterogeneous_literature():
    text = paragraph(netsize.weigh("A: t(98) = 6\nB: t(98) = 0.1\nC: t(98) = 5\nD: t(98) = -1"))
    assert "differ between studies (I² = " in text


def test_diagnostics_speak_to_their_size():
    few = {d.key: d for d in netsize.weigh(SIX).diagnostics}
    many_text = "\n".join(f"S{i}: t({38 + 2 * i}) = {1.5 + 0.1 * (i % 9)}" for i in range(24))
    many = {d.key: d for d in netsize.weigh(many_text).diagnostics}
    for key in ("regression-asymmetry", "rank-asymmetry", "excess-significance"):
        assert "6 results" in few[key].limits
        assert few[key].limits != many[key].limits
    assert all(d.limits for d in few.values())


@given(
    results=st.lists(
        st.tuples(st.integers(3, 400), st.floats(-8, 8), st.sampled_from(["", " [sample s]"])),
        min_size=1,
        max_size=6,
    ),
    dependence=st.sampled_from(["composites", "clustered"]),
)
@settings(deadline=None, max_examples=15)
def test_any_literature_gives_whole_tables(results, dependence):
    lines = [f"S{i}: t({df}) = {t:.2f}{tag}" for i, (df, t, tag) in enumerate(results)]
    weighing = netsize.weigh("\n".join(lines), dependence=dependence)
    json.dumps(weighing.to_dict(), allow_nan=False)
    assert len(weighing.corrections) == len(CORRECTIONS)
    assert paragraph(weighing).endswith(".")
    for e in weighing.estimators:
        if e.estimate is not None and e.low is not None:
            assert e.low - 1e-9 <= e.estimate <= e.high + 1e-9
