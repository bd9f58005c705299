"""Powers against general-purpose references: mpmath from the definitions, and statsmodels."""

from __future__ import annotations

import csv
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.polynomial.legendre import leggauss
from scipy import stats
from statsmodels.stats.power import (
    FTestAnovaPower,
    FTestPowerF2,
    GofChisquarePower,
    NormalIndPower,
    TTestIndPower,
    TTestPower,
)

from netsize.sizing import power, solve

_POINTS = 2000

_DESIGNS: dict[str, dict[str, Any]] = {
    "two-groups": {"design": "two-groups"},
    "two-groups one-sided": {"design": "two-groups", "sides": 1},
    "paired": {"design": "paired"},
    "anova 4": {"design": "anova", "groups": 4},
    "contingency 3": {"design": "contingency", "df1": 3},
    "correlation": {"design": "correlation"},
    "equivalence .5": {"design": "equivalence", "margin": 0.5},
}


def _references() -> list[dict[str, str]]:
    path = Path(__file__).with_name("sizing_references.csv")
    with path.open(encoding="utf-8") as lines:
        return list(csv.DictReader(line for line in lines if not line.startswith("#")))


@pytest.mark.parametrize("row", _references(), ids=lambda r: "-".join(list(r.values())[:4]))
def test_smallest_sizes_from_the_definitions(row: dict[str, str]) -> None:
    """Integers identical to mpmath's, powers at n and n-1 to 1e-9 (generator beside this file)."""
    settings = _DESIGNS[row["design"]] | {"alpha": float(row["alpha"])}
    effect, target, n = float(row["effect"]), float(row["target"]), int(row["n"])
    found = solve(effect=effect, power=target, **settings)
    assert int(found.n_per_group[0]) == n
    assert float(found.power) == pytest.approx(float(row["power"]), abs=1e-9)
    if row["power_before"]:
        before = float(power(effect=effect, n=n - 1, **settings))
        assert before == pytest.approx(float(row["power_before"]), abs=1e-9)
        assert before < target <= float(found.power)


@pytest.fixture
def points() -> dict[str, np.ndarray]:
    """Effects, sizes and noncentralities of 2,000 random studies of moderate power."""
    rng = np.random.default_rng(20260101)
    n = np.round(np.exp(rng.uniform(np.log(3), np.log(3000), _POINTS)))
    strength = rng.uniform(0.05, 5.0, _POINTS)  # of the noncentrality
    return {"n": n, "strength": strength}


@pytest.mark.parametrize("alpha", [0.05, 0.005])
@pytest.mark.parametrize(("sides", "alternative"), [(2, "two-sided"), (1, "larger")])
@pytest.mark.parametrize("ratio", [1.0, 3.0])
def test_two_groups(
    points: dict[str, np.ndarray], alpha: float, sides: int, alternative: str, ratio: float
) -> None:
    n, d = points["n"], points["strength"] * np.sqrt((1 + 1 / ratio) / points["n"])
    theirs = TTestIndPower().power(d, n, alpha, ratio=ratio, alternative=alternative)
    ours = power("two-groups", effect=d, n=n, alpha=alpha, sides=sides, ratio=ratio)
    known = np.isfinite(theirs)  # scipy's far tail is nan for large noncentralities
    assert known.mean() > 0.9
    np.testing.assert_allclose(ours[known], theirs[known], atol=1e-6)
    assert np.isfinite(ours).all()


@pytest.mark.parametrize("design", ["paired", "one-sample"])
def test_one_mean(points: dict[str, np.ndarray], design: str) -> None:
    n, d = points["n"], points["strength"] / np.sqrt(points["n"])
    theirs = TTestPower().power(d, n, 0.05)
    known = np.isfinite(theirs)
    assert known.mean() > 0.9
    np.testing.assert_allclose(power(design, effect=d, n=n)[known], theirs[known], atol=1e-6)


@pytest.mark.parametrize("groups", [2, 3, 5, 12])
def test_anova(points: dict[str, np.ndarray], groups: int) -> None:
    n, f = points["n"], points["strength"] / np.sqrt(points["n"] * groups)
    theirs = FTestAnovaPower().power(f, n * groups, 0.05, k_groups=groups)
    np.testing.assert_allclose(power("anova", effect=f, n=n, groups=groups), theirs, atol=1e-6)


@pytest.mark.parametrize(("df1", "cells"), [(1, 4), (2, 6), (6, 12)])
def test_factorial(points: dict[str, np.ndarray], df1: int, cells: int) -> None:
    n, f = points["n"], points["strength"] / np.sqrt(points["n"] * cells)
    df2 = cells * (n - 1)
    theirs = FTestPowerF2().power(f**2, df1, df2, 0.05, ncc=cells * n - df1 - df2)
    ours = power("factorial", effect=f, n=n, df1=df1, cells=cells)
    np.testing.assert_allclose(ours, theirs, atol=1e-6)


@pytest.mark.parametrize(("tested", "predictors"), [(1, 1), (3, 3), (2, 9)])
def test_regression(points: dict[str, np.ndarray], tested: int, predictors: int) -> None:
    n = points["n"] + predictors
    f2 = points["strength"] ** 2 / n
    df2 = n - predictors - 1
    theirs = FTestPowerF2().power(f2, tested, df2, 0.05, ncc=n - tested - df2)
    ours = power("regression", effect=f2, n=n, added_terms=tested, all_terms=predictors)
    np.testing.assert_allclose(ours, theirs, atol=1e-6)


@pytest.mark.parametrize("df", [1, 4, 20])
def test_contingency(points: dict[str, np.ndarray], df: int) -> None:
    n, w = points["n"], points["strength"] / np.sqrt(points["n"])
    theirs = GofChisquarePower().power(w, n, 0.05, n_bins=df + 1)
    np.testing.assert_allclose(power("contingency", effect=w, n=n, df1=df), theirs, atol=1e-6)


@pytest.mark.parametrize("ratio", [1.0, 2.0])
def test_two_correlations_and_arcsine(points: dict[str, np.ndarray], ratio: float) -> None:
    n = points["n"] + 3
    q = points["strength"] * np.sqrt(2 / n)
    theirs = NormalIndPower(ddof=3).power(q, n, 0.05, ratio=ratio)
    ours = power("two-correlations", effect=q, n=n, ratio=ratio)
    np.testing.assert_allclose(ours, theirs, atol=1e-6)
    h = np.minimum(q, 1.5)
    theirs = NormalIndPower().power(h, n, 0.05, ratio=ratio)
    ours = power("two-proportions", test="arcsine", effect=h, metric="h", n=n, ratio=ratio)
    np.testing.assert_allclose(ours, theirs, atol=1e-6)


def test_two_proportions(points: dict[str, np.ndarray]) -> None:
    from statsmodels.stats.proportion import power_proportions_2indep

    p1 = np.linspace(0.02, 0.6, _POINTS)
    gap = 0.35 * np.sin(np.arange(_POINTS)) ** 2
    theirs = np.array(
        [
            power_proportions_2indep(g, p, m, alternative="two-sided", return_results=False)
            for g, p, m in zip(gap, p1, points["n"], strict=True)
        ]
    )
    ours = np.array(
        [
            float(power("two-proportions", baseline=p, effect=g, n=m))
            for g, p, m in zip(gap, p1, points["n"], strict=True)
        ]
    )
    np.testing.assert_allclose(ours, theirs, atol=1e-6)


def test_non_inferiority_is_a_shifted_t_test(points: dict[str, np.ndarray]) -> None:
    n, d = points["n"], points["strength"] * np.sqrt(2 / points["n"])
    theirs = TTestIndPower().power(d, n, 0.025, alternative="larger")
    ours = power("non-inferiority", margin=0.3, effect=d - 0.3, n=n, alpha=0.025)
    np.testing.assert_allclose(ours, theirs, atol=1e-6)


def test_correlation_as_a_mixture_of_t_tests(points: dict[str, np.ndarray]) -> None:
    """Given x, the test is a noncentral t with δ = ρ/√(1-ρ²) √(Σ(x-x̄)²/σ²): scipy and a

    quadrature over the chi-square of Σ(x-x̄)² know nothing of the density of r.
    """
    n = points["n"][points["n"] >= 5][:300]
    rho = np.tanh(points["strength"][: n.size] / np.sqrt(n))
    nodes, weights = leggauss(200)
    low, high = stats.chi2.ppf(1e-13, n - 1), stats.chi2.isf(1e-13, n - 1)
    u = (low + high)[:, None] / 2 + (high - low)[:, None] / 2 * nodes
    c = stats.t.isf(0.025, n - 2)[:, None]
    ncp = (rho / np.sqrt(1 - rho**2))[:, None] * np.sqrt(u)
    far = np.nan_to_num(stats.nct.cdf(-c, (n - 2)[:, None], ncp))  # nan where it is 0
    chance = stats.nct.sf(c, (n - 2)[:, None], ncp) + far
    theirs = (high - low) / 2 * ((chance * stats.chi2.pdf(u, (n - 1)[:, None])) @ weights)
    np.testing.assert_allclose(power("correlation", effect=rho, n=n), theirs, atol=1e-6)


@pytest.mark.parametrize(("n1", "n2", "spread_ratio"), [(5, 5, 3.0), (8, 16, 0.5), (60, 30, 2.0)])
def test_welch_by_two_dimensional_quadrature(n1: int, n2: int, spread_ratio: float) -> None:
    """Over both sample variances, given which Welch's test is a normal probability."""
    effect = 0.9
    nodes, weights = leggauss(300)

    def variance(n: int, scale: float) -> tuple[np.ndarray, np.ndarray]:
        low, high = stats.chi2.ppf(1e-14, n - 1), stats.chi2.isf(1e-14, n - 1)
        v = (low + high) / 2 + (high - low) / 2 * nodes
        return scale * v / (n - 1), (high - low) / 2 * weights * stats.chi2.pdf(v, n - 1)

    first = 2 / (1 + spread_ratio**2)  # the mean variance is 1
    second = 2 - first
    (s1, w1), (s2, w2) = variance(n1, first), variance(n2, second)
    a, b = s1[:, None] / n1, s2 / n2
    df = (a + b) ** 2 / (a**2 / (n1 - 1) + b**2 / (n2 - 1))
    true = np.sqrt(first / n1 + second / n2)
    limit = stats.t.isf(0.025, df) * np.sqrt(a + b) / true
    chance = stats.norm.sf(limit - effect / true) + stats.norm.cdf(-limit - effect / true)
    theirs = w1 @ chance @ w2
    ours = power(
        "two-groups", effect=effect, n=min(n1, n2), ratio=n2 / n1, spread_ratio=spread_ratio
    )
    assert float(ours) == pytest.approx(theirs, abs=1e-9)


def test_two_measurements_are_pairs() -> None:
    """F(1, n-1) = t² with f = d/2 and dz = d/√(2(1-ρ)), against statsmodels' paired test."""
    d, rho, n = np.array([0.2, 0.5, 0.9]), 0.7, np.array([10, 30, 90])
    theirs = TTestPower().power(d / np.sqrt(2 * (1 - rho)), n, 0.05)
    ours = power("repeated", effect=d / 2, n=n, occasions=2, pair_correlation=rho)
    np.testing.assert_allclose(ours, theirs, atol=1e-8)


@pytest.mark.slow
@pytest.mark.parametrize(
    ("tested", "f"), [("within", 0.18), ("between", 0.4), ("interaction", 0.2)]
)
def test_repeated_measures_simulated(tested: str, f: float) -> None:
    """20,000 simulated data sets analysed by the sums of squares of the textbook."""
    groups, k, n, rho, runs = 2, 4, 14, 0.4, 20_000
    rng = np.random.default_rng(7)
    shape = {
        "within": np.tile([1.0, -1.0, 1.0, -1.0], (groups, 1)),
        "between": np.array([[1.0] * k, [-1.0] * k]),
        "interaction": np.array([[1.0, -1.0, 1.0, -1.0], [-1.0, 1.0, -1.0, 1.0]]),
    }[tested]
    person = np.sqrt(rho) * rng.standard_normal((runs, groups, n, 1))
    y = (
        f * shape[:, None, :]
        + person
        + np.sqrt(1 - rho) * rng.standard_normal((runs, groups, n, k))
    )
    grand = y.mean(axis=(1, 2, 3), keepdims=True)
    group, time = y.mean(axis=(2, 3), keepdims=True), y.mean(axis=(1, 2), keepdims=True)
    subject, cell = y.mean(axis=3, keepdims=True), y.mean(axis=2, keepdims=True)

    def ss(part: np.ndarray) -> np.ndarray:
        return (np.broadcast_to(part, y.shape) ** 2).sum(axis=(1, 2, 3))

    within_error, df_error = ss(y - subject - cell + group), groups * (n - 1) * (k - 1)
    effect, df1, error, df2 = {
        "within": (ss(time - grand), k - 1, within_error, df_error),
        "between": (ss(group - grand), groups - 1, ss(subject - group), groups * (n - 1)),
        "interaction": (
            ss(cell - group - time + grand),
            (groups - 1) * (k - 1),
            within_error,
            df_error,
        ),
    }[tested]
    simulated = np.mean(stats.f.sf(effect / df1 / (error / df2), df1, df2) < 0.05)
    ours = power(
        "repeated",
        effect=f,
        n=n,
        groups=groups,
        occasions=k,
        pair_correlation=rho,
        tested=tested,
    )
    assert float(ours) == pytest.approx(simulated, abs=0.012)  # 3.5 standard errors
