"""The arithmetic check against scipy.stats (outside reference) and against papers' usual slips."""

import math

import pytest
from scipy import stats

from netsize.reported import read
from netsize.reported.check import check
from netsize.reported.implied import p_range, rounding_range
from netsize.reported.records import Printed

# the law of r on 48 df by its own definition, without t (see scipy.stats.pearsonr)
BETA_OF_R = stats.beta(24, 24, loc=-1, scale=2)


def findings(text):
    (result,) = read(text).results
    return check(result)


def only(text):
    (finding,) = findings(text)
    return finding


@pytest.mark.parametrize(
    ("text", "tail"),
    [
        ("t(38) = 2.31", lambda e: 2 * stats.t.sf(2.31 + e, 38)),
        ("t(33.2) = -2.31", lambda e: 2 * stats.t.sf(2.31 + e, 33.2)),
        ("t(38) = 2.31 [one-tailed]", lambda e: stats.t.sf(2.31 + e, 38)),
        ("F(1, 56) = 5.12", lambda e: stats.f.sf(5.12 + e, 1, 56)),
        ("F(2.4, 57.1) = 3.45", lambda e: stats.f.sf(3.45 + e, 2.4, 57.1)),
        ("χ²(3, N = 96) = 12.10", lambda e: stats.chi2.sf(12.10 + e, 3)),
        ("z = 2.31, n = 80", lambda e: 2 * stats.norm.sf(2.31 + e)),
        ("r(48) = .31", lambda e: 2 * BETA_OF_R.sf(0.31 + e)),
        ("b = 0.42, SE = 0.15, df = 96", lambda e: 2 * stats.t.sf((0.42 + e) / 0.15, 96)),
    ],
)
def test_p_range_against_scipy_stats(text, tail):
    (result,) = read(text).results
    low, high = p_range(result)
    assert low == pytest.approx(tail(0.005), rel=1e-10)
    assert high == pytest.approx(tail(-0.005), rel=1e-10)


def test_p_range_of_inequalities():
    (small,) = read("t(38) < 1").results
    assert p_range(small) == pytest.approx((2 * stats.t.sf(1, 38), 1.0))
    (large,) = read("F(1, 56) > 4.01").results
    assert p_range(large) == pytest.approx((0.0, stats.f.sf(4.01, 1, 56)))
    (across,) = read("t(38) = 0").results
    assert p_range(across)[1] == 1.0


def test_rounding_range():
    assert rounding_range(Printed(2.31, "=", 2)) == pytest.approx((2.305, 2.315))
    assert rounding_range(Printed(0.05, "<", 2)) == (-math.inf, 0.05)
    assert rounding_range(Printed(0.05, ">", 2)) == (0.05, math.inf)


@pytest.mark.parametrize(
    "text",
    [
        "t(38) = 2.31, p = .026",
        "t(38) = 2.31, p = .03",
        "t(38) = 2.31, p < .05",
        "t(38) = 2.3, p = .03",
        "t(38) = 1.2, n.s.",
        "t(38) = 5.31, p = .000",
        "t(38) = 2.31, p = .013 [one-tailed]",
        "t(38) = 2.31, p = .026, d = 0.73",
        "t(38) = 2.31, p = .026, d = 0.75",  # 2t/√df, as many papers compute it
        "t(38) = 2.31, d = 0.72",  # with the small-sample factor
        "t(19) = 2.31, d = 0.52 [paired]",
        "t(38) = 2.31, r = .35",
        "t(38) = 2.31, η²p = .12",
        "F(1, 56) = 5.12, p = .028, ηp² = .084",
        "F(2, 57) = 3.45, p = .039, ω²p = .08",
        "F(2, 57) = 3.45, ε² = .08",
        "F(2, 57) = 3.45, η² = .05",
        "t(40) = 2.31, n = 20, 22",
        "t(33.2) = 2.31, n = 20, 22",
        "t(19) = 2.31, n = 20 [paired]",
        "r(48) = .31, n = 50, p = .028",
        "χ²(1, N = 80) = 4.50, p = .034",
        "z = 2.31, n = 80, p = .021",
        "p = .03, n = 40",
        "M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20, t(38) = 2.20, p = .034",
        "12/40 vs 22/41, χ²(1, N = 81) = 4.65, p = .03",
    ],
)
def test_agreement_within_rounding(text):
    assert findings(text) == ()


@pytest.mark.parametrize(
    ("text", "changes", "would_agree"),
    [
        ("t(38) = 2.31, p = .013", False, "a one-tailed test would agree"),
        ("t(38) = 2.31, p = .026 [one-tailed]", False, "a two-tailed test would agree"),
        ("t(83) = 2.31, p = .026", False, "df = 38 instead would agree"),
        ("t(38) = 2.31, p = .26", True, "a slipped decimal point"),
        ("t(38) = 1.90, p = .04", True, "nothing simple"),
        ("t(38) = 2.31, p > .05", True, "nothing simple"),
        ("t(38) < 1, p = .03", True, "nothing simple"),
        ("F(56, 1) = 5.12, p = .028", True, "df = 1, 56 instead"),
        ("r(50) = .3100, p = .0285", False, "df = 48 instead"),
        ("t(38) = -2.31, p = .013 [one-tailed]", True, "the other direction"),
        ("t(38) = 2.31, p = .05", False, "p < 0.05 would agree"),
    ],
)
def test_p_that_does_not_follow(text, changes, would_agree):
    finding = only(text)
    assert finding.kind == "p"
    assert finding.changes_significance is changes
    assert would_agree in finding.message


def test_significance_is_judged_at_the_papers_own_level():
    assert not only("t(38) = 2.31, p = .008").changes_significance
    assert only("t(38) = 2.31, p = .008 [cut .01]").changes_significance


@pytest.mark.parametrize(
    ("text", "kind", "says"),
    [
        ("t(38) = 2.31, d = 0.93", "effect", "0.71 to 0.75 for two groups"),
        ("t(38) = 2.31, d = 0.37", "effect", "mark the line [paired]"),
        ("t(19) = 2.31, d = 1.06 [paired]", "effect", "fits two groups"),
        ("F(1, 56) = 5.12, ηp² = .12", "effect", "gives 0.08"),
        ("F(2, 57) = 3.45, η² = .20", "effect", "0.00 to 0.11"),
        ("t(38) = 2.31, n = 30, 30", "df", "df = 58"),
        ("t(33.2) = 2.31, n = 10, 12", "df", "9 to 20"),
        ("t(29) = 2.31, n = 30 [two-groups]", "df", "df = 28"),
        ("t(18) = 2.31, n = 20 [paired]", "df", "df = 19"),
        ("r(48) = .31, n = 60", "df", "df = 58"),
        ("F(2, 57) = 3.45, n = 40", "df", "1 to 39"),
        ("12/40 vs 22/41, χ²(1, N = 81) = 5.46", "counts", "give 4.65 or 3.73"),
        ("12/30 vs 5/30, OR = 3.93, 95% CI [0.99, 15.2]", "counts", "give 3.33 or 0.3"),
        (
            "M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20, F(1, 38) = 17.6",
            "means",
            "give F = 4.83",
        ),
        (
            "M = 5.2, SD = 1.1, n = 20 vs M = 4.4, SD = 1.2, n = 20, t(38) = 4.2",
            "means",
            "give t = 2.20",
        ),
    ],
)
def test_other_disagreements(text, kind, says):
    finding = only(text)
    assert finding.kind == kind
    assert says in finding.message
    assert not finding.changes_significance
