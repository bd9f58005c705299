"""Evidence curves: they are the laws they say, and they integrate to one."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from netsize.effect_sizes import curves, effects
from netsize.numerics.arrays import Array
from netsize.reported.records import Interval, Printed, ReportedResult

RESULTS = {
    "t": ReportedResult(label="a", family="t", value=2.3, df=(38,)),
    "paired": ReportedResult(label="a", family="t", value=2.3, df=(2,), design="paired"),
    "f": ReportedResult(label="a", family="f", value=4.0, df=(2, 57)),
    "f-few": ReportedResult(label="a", family="f", value=0.4, df=(3, 3)),
    "chi2": ReportedResult(label="a", family="chi2", value=4.0, df=(2,), n=(60,)),
    "r": ReportedResult(label="a", family="r", value=0.4, n=(30,)),
    "r-few": ReportedResult(label="a", family="r", value=0.4, n=(4,)),
    "z": ReportedResult(label="a", family="z", value=2.0, n=(30, 30)),
    "odds": ReportedResult(label="a", family="odds-ratio", value=2.0, interval=Interval(1, 4)),
}


def grid(row) -> Array:
    return np.linspace(0 if not row.metric.signed else -2.0, 2.0, 81)


@pytest.fixture(params=RESULTS)
def evidence(request):
    (row,) = effects([RESULTS[request.param]], cut_points=(0.01, 0.05, 0.2)).rows
    return row.evidence, grid(row)


def test_bands_sum_to_one(evidence):
    e, theta = evidence
    bands = curves.band_probabilities([e], theta)
    assert bands.shape == (1, 4, theta.size)
    assert np.all(bands >= 0)
    assert bands.sum(axis=1) == pytest.approx(1, abs=2e-12)


def test_density_integrates_to_its_bands(evidence, panels):
    """The likelihood, as a density of the statistic, gives the probability of each band."""
    e, theta = evidence
    theta = theta[::20]
    lowest = {"f": 0.0, "chi2": 0.0, "r": -1.0}.get(e.kernel, -np.inf)
    highest = 1.0 if e.kernel == "r" else np.inf
    edges = [highest, *e.cuts, lowest]
    bands = curves.band_probabilities([e], theta)[0]
    for j, (top, bottom) in enumerate(itertools.pairwise(edges)):
        x, weights = stretch(panels, e.kernel, bottom, top)
        rows = [replace(e, low=float(v), high=float(v), band=j) for v in x]
        density = np.exp(curves.log_likelihood(rows, theta))
        assert weights @ density == pytest.approx(bands[j], abs=1e-7)


def stretch(panels, kernel: str, bottom: float, top: float):
    """Nodes over (bottom, top), with the ends where densities are singular or unbounded tamed."""
    if kernel in ("f", "chi2"):  # x = e^v
        low = -40.0 if bottom <= 0 else math.log(bottom)
        high = (25.0 if kernel == "f" else 8.0) if np.isinf(top) else math.log(top)
        v, w = panels([low, high], 8)
        return np.exp(v), w * np.exp(v)
    if kernel == "r":
        v, w = panels([math.atanh(max(bottom, -1 + 1e-15)), math.atanh(min(top, 1 - 1e-15))], 8)
        return np.tanh(v), w / np.cosh(v) ** 2
    v, w = panels([np.arcsinh(max(bottom, -1e9)), np.arcsinh(min(top, 1e9))], 8)
    return np.sinh(v), w * np.cosh(v)


@pytest.mark.parametrize(
    ("name", "law"),
    [
        ("t", lambda x, theta: stats.nct.logpdf(x, 38, theta * math.sqrt(10))),
        ("paired", lambda x, theta: stats.nct.logpdf(x, 2, theta * math.sqrt(3))),
        ("f", lambda x, theta: stats.ncf.logpdf(x, 2, 57, 60 * theta**2)),
        ("chi2", lambda x, theta: stats.ncx2.logpdf(x, 2, 60 * theta**2)),
        ("z", lambda x, theta: stats.norm.logpdf(x, theta * math.sqrt(15))),
    ],
)
def test_likelihood_is_the_law_at_the_effect(name, law):
    settings = {"metric": "mean-difference"} if name == "z" else {}
    (row,) = effects([RESULTS[name]], **settings).rows
    theta = np.array([0.05, 0.3, 0.8])
    ours = curves.log_likelihood([row.evidence], theta)[0]
    assert ours == pytest.approx(law(row.evidence.low, theta), rel=1e-8)


def test_interval_likelihood_is_the_probability_of_the_interval():
    result = ReportedResult(label="a", family="t", df=(38,), p=Printed(0.05, ">"))
    (row,) = effects([result]).rows
    theta = np.array([-0.5, 0.0, 0.6])
    c, delta = stats.t.isf(0.025, 38), theta * math.sqrt(10)
    expected = stats.nct.cdf(c, 38, delta) - stats.nct.cdf(-c, 38, delta)
    assert np.exp(curves.log_likelihood([row.evidence], theta)[0]) == pytest.approx(expected)


def test_far_interval_keeps_its_digits():
    # |t| < 1 with δ = 15: both upper tails are 1 to double precision
    result = ReportedResult(label="a", family="z", value=1.0, relation="<", n=(50, 50))
    (row,) = effects([result], metric="mean-difference").rows
    value = curves.log_likelihood([row.evidence], np.array([3.0]))[0, 0]
    expected = stats.norm.logcdf(1 - 15)  # the lower end adds nothing
    assert value == pytest.approx(expected, abs=1e-6)


def test_many_results_at_once_are_each_alone():
    rows = [row.evidence for r in RESULTS.values() for row in effects([r]).rows]
    theta = np.linspace(0.0, 1.5, 7)
    together = curves.log_likelihood(rows, theta)
    alone = np.concatenate([curves.log_likelihood([e], theta) for e in rows])
    assert together == pytest.approx(alone, rel=1e-12)
    assert curves.band_probabilities(rows, theta) == pytest.approx(
        np.concatenate([curves.band_probabilities([e], theta) for e in rows]), rel=1e-12
    )


def test_duplicate_result_has_the_same_curve():
    (row,) = effects([RESULTS["t"]]).rows
    twice = curves.log_likelihood([row.evidence] * 2, np.linspace(-1, 1, 9))
    assert twice[0] == pytest.approx(twice[1], rel=1e-13)
