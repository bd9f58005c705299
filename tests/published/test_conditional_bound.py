"""Truncated-likelihood planning.

Method: Taylor & Muller (1996), Communications in Statistics 25, 1595; Anderson, Kelley & Maxwell
(2017), Psychological Science 28, 1547. Their worked examples were not available: the expected
noncentralities are an independent recomputation of their principle by two quadratures.
"""

import numpy as np
import pytest
from scipy.stats import f as central_f
from scipy.stats import t as student

from netsize.effect_sizes.records import Evidence
from netsize.synthesis.selection_single import conditional_bound

# n a group, t, assurance, λ without truncation, λ given p < .05
ROWS = [
    (20, 2.5, 0.5, 6.1662, 1.3796),
    (20, 2.5, 0.8, 2.5857, 0.0),
    (20, 3.0, 0.5, 8.8782, 6.7257),
    (20, 3.0, 0.8, 4.3697, 1.2211),
    (30, 2.8, 0.5, 7.7713, 5.0175),
    (30, 2.8, 0.8, 3.6802, 0.4176),
    (50, 3.5, 0.5, 12.1864, 11.4564),
    (50, 3.5, 0.8, 6.8831, 5.3271),
    (50, 3.5, 0.95, 3.2257, 1.1189),
    (15, 4.0, 0.8, 9.0620, 7.9249),
]


def _two_groups(n, t):
    df = 2 * n - 2
    cut = float(student.ppf(0.975, df))
    return Evidence(kernel="t", df=(df,), scale=np.sqrt(n / 2), low=t, high=t, cuts=(cut,), band=0)


@pytest.mark.parametrize(("n", "t", "assurance", "plain", "truncated"), ROWS)
def test_noncentralities(n, t, assurance, plain, truncated):
    evidence = _two_groups(n, t)
    for only_significant, expected in ((False, plain), (True, truncated)):
        theta = conditional_bound(evidence, assurance=assurance, only_significant=only_significant)
        assert (theta * evidence.scale) ** 2 == pytest.approx(expected, abs=6e-5)


def test_the_sign_of_the_statistic_does_not_matter():
    there, back = _two_groups(20, 3.0), _two_groups(20, -3.0)
    assert conditional_bound(there, assurance=0.5) == conditional_bound(back, assurance=0.5)


@pytest.mark.parametrize(("n", "t"), [(25, 2.2), (20, 2.1)])
def test_barely_significant_results_leave_nothing(n, t):
    assert conditional_bound(_two_groups(n, t), assurance=0.5) == 0.0


@pytest.mark.parametrize(
    ("assurance", "plain", "truncated"), [(0.5, 7.8947, 2.4892), (0.8, 3.5885, 0.0)]
)
def test_analysis_of_variance(assurance, plain, truncated):
    cut = float(central_f.ppf(0.95, 2, 57))
    evidence = Evidence(
        kernel="f", df=(2, 57), scale=np.sqrt(60), low=4.5, high=4.5, cuts=(cut,), band=0
    )
    for only_significant, expected in ((False, plain), (True, truncated)):
        theta = conditional_bound(evidence, assurance=assurance, only_significant=only_significant)
        assert (theta * evidence.scale) ** 2 == pytest.approx(expected, abs=6e-5)


def test_results_it_does_not_apply_to_are_refused():
    with pytest.raises(ValueError, match="not significant"):
        conditional_bound(_two_groups(20, 1.0), assurance=0.5)
