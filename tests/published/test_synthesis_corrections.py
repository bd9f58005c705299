"""Published corrections against published and recomputed figures and against statsmodels.

"Read": taken from the abstract named. "Recomputed": independent recomputation, nothing published.
"""

from __future__ import annotations

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import integrate, optimize, stats

from netsize.effect_sizes.records import Evidence
from netsize.synthesis.conditional import (
    conditional_likelihood,
    conditional_quantiles,
    irwin_hall,
    likelihood_maximum,
    search_domain,
)
from netsize.synthesis.limit import limit
from netsize.synthesis.small_study import peese, pet, pet_peese
from netsize.synthesis.step_function import fit_step_function
from netsize.synthesis.trim_and_fill import trim_and_fill, trim_and_fill_many
from netsize.synthesis.unrestricted import adequately_powered, unrestricted

_Z = stats.norm.ppf(0.975)


@pytest.mark.parametrize("asymmetry", ["L0", "R0"])
def test_trim_and_fill_of_passive_smoking(smoking, asymmetry):
    """Takagi et al. (2006), abstract, read: 7 filled in, relative risk 1.19 (1.08 to 1.31)."""
    result = trim_and_fill(
        *smoking, asymmetry=asymmetry, heterogeneity="dersimonian-laird", interval="wald"
    )
    assert result.reason == "7 filled in on the left"
    assert np.round(np.exp([result.estimate, result.low, result.high]), 2) == pytest.approx(
        [1.19, 1.08, 1.31]
    )
    p = 2 * stats.norm.sf(result.estimate / result.se)
    assert p == pytest.approx(0.0004, abs=5e-5)  # read


@pytest.mark.parametrize(("asymmetry", "filled"), [("L0", 3), ("R0", 2)])
def test_trim_and_fill_of_teacher_expectancy(teachers, asymmetry, filled):
    """Recomputed."""
    result = trim_and_fill_many(*teachers, asymmetry=asymmetry, heterogeneity="dersimonian-laird")
    assert int(result.number) == filled


def test_precision_effects_of_passive_smoking(smoking):
    """Recomputed."""
    first, second = pet(*smoking), peese(*smoking)
    assert (first.estimate, first.se) == pytest.approx((0.0050, 0.0859), abs=5.1e-5)
    assert (second.estimate, second.se) == pytest.approx((0.1201, 0.0519), abs=5.1e-5)


@pytest.mark.parametrize("name", ["bcg", "teachers", "smoking"])
def test_regressions_against_statsmodels(request, name):
    y, v = request.getfixturevalue(name)
    for power, ours in ((0.5, pet(y, v)), (1.0, peese(y, v))):
        fit = sm.WLS(y, sm.add_constant(v**power), weights=1 / v).fit()
        assert (ours.estimate, ours.se) == pytest.approx((fit.params[0], fit.bse[0]), rel=1e-9)
        assert (ours.low, ours.high) == pytest.approx(tuple(fit.conf_int()[0]), rel=1e-8)
    mean = sm.WLS(y, np.ones_like(y), weights=1 / v).fit()
    whole = unrestricted(y, v)
    assert (whole.estimate, whole.se) == pytest.approx((mean.params[0], mean.bse[0]), rel=1e-9)
    assert (whole.low, whole.high) == pytest.approx(tuple(mean.conf_int()[0]), rel=1e-8)


def test_conditional_rule(bcg, smoking):
    """PEESE when PET is above 0 at one-sided .05 (Stanley & Doucouliagos 2014), else PET."""
    assert pet_peese(*smoking).estimate == pet(*smoking).estimate
    y, v = -bcg[0], bcg[1]
    line = sm.WLS(y, sm.add_constant(np.sqrt(v)), weights=1 / v).fit()
    clear = stats.t.sf(line.tvalues[0], 11) < 0.05
    assert pet_peese(y, v).estimate == (peese(y, v) if clear else pet(y, v)).estimate
    shifted = smoking[0] + 1.0
    assert pet_peese(shifted, smoking[1]).estimate == peese(shifted, smoking[1]).estimate


def test_adequately_powered_subset(bcg):
    """Standard error at most |mean|/2.8 (Stanley, Doucouliagos & Ioannidis 2017), by hand."""
    y, v = bcg
    mean = np.average(y, weights=1 / v)
    subset = np.sqrt(v) <= abs(mean) / 2.8
    fit = sm.WLS(y[subset], np.ones(subset.sum()), weights=1 / v[subset]).fit()
    result = adequately_powered(y, v)
    assert result.used == subset.sum() >= 2
    assert (result.estimate, result.se) == pytest.approx((fit.params[0], fit.bse[0]), rel=1e-9)
    # a mean of .28: standard errors of .099 are adequate, those of .101 are not
    row = adequately_powered(
        [0.28] * 3 + [0.28] * 2, np.array([0.099, 0.099, 0.05, 0.101, 0.14]) ** 2
    )
    assert row.used == 3


def test_limit_meta_analysis_without_heterogeneity_is_a_regression(smoking):
    """At τ = 0 the limit is PET's intercept, with a standard error from known weights."""
    v = smoking[1]
    agreeing = 0.2 + 0.3 * np.sqrt(v)
    result = limit(agreeing, v)
    assert result.tau2 == 0
    assert result.estimate == pytest.approx(0.2, abs=1e-12)
    fit = sm.WLS(agreeing, sm.add_constant(np.sqrt(v)), weights=1 / v)
    assert result.se == pytest.approx(np.sqrt(fit.fit().normalized_cov_params[0, 0]), rel=1e-9)


def test_limit_meta_analysis_from_its_model(bcg):
    """β + ατ of y ~ N(β + α√(v+τ²), v+τ²), maximised directly (Rücker et al. 2011)."""
    y, v = bcg
    result = limit(y, v)
    total = v + result.tau2

    def deviance(x):
        return (((y - x[0] - x[1] * np.sqrt(total)) ** 2) / total).sum()

    best = optimize.minimize(deviance, [0.0, 0.0], method="Nelder-Mead",
                             options={"xatol": 1e-12, "fatol": 1e-14, "maxiter": 4000})  # fmt: skip
    expected = best.x[0] + best.x[1] * np.sqrt(result.tau2)
    assert result.estimate == pytest.approx(expected, abs=1e-6)
    # least squares with known weights: statsmodels' unscaled covariance, by the delta method
    fit = sm.WLS(y, sm.add_constant(np.sqrt(total)), weights=1 / total).fit()
    direction = np.array([1.0, np.sqrt(result.tau2)])
    variance = direction @ fit.normalized_cov_params @ direction
    assert result.se == pytest.approx(np.sqrt(variance), rel=1e-9)


# Recomputed: likelihood re-evaluated by quadrature, optimum verified.
STEPS = [
    ((0.025,), True, 0.1944, 0.01662, [0.7644], -10.0901, 0.117),
    ((0.025, 0.5), True, 0.0766, 0.01523, [0.4599, 0.1495], -8.1479, 4.001),
    ((0.025,), False, 0.1379, 0.0, [0.3855], None, 2.378),
]


@pytest.mark.parametrize(("cuts", "random", "mean", "tau2", "weights", "log_l", "ratio"), STEPS)
def test_step_function_of_passive_smoking(smoking, cuts, random, mean, tau2, weights, log_l, ratio):
    fit = fit_step_function(*smoking, cuts=cuts, heterogeneous=random)
    assert fit.converged
    assert fit.mean == pytest.approx(mean, abs=5.1e-5)
    assert fit.tau2 == pytest.approx(tau2, abs=5.1e-6)
    assert fit.weights[1:] == pytest.approx(weights, abs=5.1e-5)
    assert fit.ratio == pytest.approx(ratio, abs=5.1e-4)
    if log_l is not None:
        assert fit.log_likelihood == pytest.approx(log_l, abs=5.1e-5)


def test_step_function_within_the_range_of_copas_and_shi(smoking):
    """Copas & Shi (2000, BMJ 320:417), abstract, read: selection takes the excess risk of 24 % to
    15 % if 60 % of studies are included. Their model is another one: a range test only."""
    fit = fit_step_function(*smoking, cuts=(0.025, 0.5))
    assert 0.0 < np.expm1(fit.mean) < 0.24


def _z(value):
    return Evidence(kernel="z", df=(), scale=1.0, low=value, high=value, cuts=(_Z,), band=0)


def _t(n, t):
    critical = float(stats.t.ppf(0.975, 2 * n - 2))
    return Evidence(
        kernel="t", df=(2.0 * n - 2,), scale=float(np.sqrt(n / 2)), low=t, high=t,
        cuts=(critical,), band=0,
    )  # fmt: skip


ONE = np.ones(1)


@pytest.mark.parametrize(
    ("z", "mean"),
    [(2.0, 0.50387), (2.2, 0.63696), (2.5, 1.13792), (2.8, 2.07276), (3.0, 2.52243),
     (3.5, 3.32914), (4.0, 3.94277), (5.0, 4.99602)],
)  # fmt: skip
def test_conditional_likelihood_of_z(z, mean):
    """Selection |z| > 1.96 (Hedges 1984); recomputed by score equation and quadrature."""
    domain = search_domain(np.array([z]), ONE, signed=True, sides="either")
    top, _ = likelihood_maximum([_z(z)], ONE, domain, sides="either")
    assert top == pytest.approx(mean, abs=6e-6)


@pytest.mark.parametrize(
    ("n", "t", "delta"),
    [(20, 2.5, 0.29717), (20, 3.0, 0.75475), (30, 2.8, 0.50092), (50, 3.5, 0.66313)],
)
def test_conditional_likelihood_of_t(n, t, delta):
    """Selection |t| beyond its critical value, n a group; recomputed."""
    domain = search_domain(np.array([t * np.sqrt(2 / n)]), np.array([2 / n]), signed=True)
    row = conditional_likelihood([_t(n, t)], ONE, domain, sides="either")
    assert row.estimate == pytest.approx(delta, abs=6e-6)


@pytest.mark.parametrize(
    ("z", "median"),
    [(2.5, 1.54145), (2.8, 2.34725), (3.0, 2.71337), (3.5, 3.40723), (4.0, 3.97231),
     (5.0, 4.99851)],
)  # fmt: skip
def test_median_unbiased_under_one_sided_selection(z, median):
    """P(Z > z | Z > 1.96) = ½ (van Assen et al. 2015, one result); recomputed."""
    domain = search_domain(np.array([z]), ONE, signed=True)
    assert conditional_quantiles([_z(z)], domain).estimate == pytest.approx(median, abs=6e-6)


@pytest.mark.parametrize(
    ("z", "low", "high"), [(3.0, -0.8013, 4.9362), (3.5, 0.7117, 5.4560), (4.0, 1.6545, 5.9594)]
)
def test_exact_interval_under_one_sided_selection(z, low, high):
    """Recomputed."""
    row = conditional_quantiles([_z(z)], search_domain(np.array([z]), ONE, signed=True))
    assert (row.low, row.high) == pytest.approx((low, high), abs=6e-5)


def test_runaway_just_above_the_cut_is_shown_as_zero():
    """z = 2.0 under one-sided selection has its maximum at -22.9 (recomputed), no estimate."""
    domain = search_domain(np.array([2.0]), ONE, signed=True)
    for row in (
        conditional_likelihood([_z(2.0)], ONE, domain, sides="predicted"),
        conditional_quantiles([_z(2.0)], domain),
    ):
        assert row.estimate == 0
        assert row.status == "at a boundary"
        assert "shown as 0" in row.reason
        assert row.low == -np.inf


def test_several_results_maximise_the_product_of_truncated_densities():
    """Normal theory by quadrature: maximum of Σ log φ(z-θ)/P(Z > 1.96; θ)."""
    values = [2.4, 3.1, 4.2, 2.9]
    domain = search_domain(np.array(values), np.ones(4), signed=True)
    row = conditional_likelihood([_z(z) for z in values], np.ones(4), domain, sides="predicted")

    def loss(theta):
        tail = integrate.quad(lambda x: stats.norm.pdf(x - theta), _Z, np.inf)[0]
        return -sum(np.log(stats.norm.pdf(z - theta) / tail) for z in values)

    best = optimize.minimize_scalar(loss, bounds=(0, 5), method="bounded",
                                    options={"xatol": 1e-9})  # fmt: skip
    assert row.estimate == pytest.approx(best.x, abs=1e-5)
    step = 1e-3
    curvature = (loss(best.x + step) - 2 * best.fun + loss(best.x - step)) / step**2
    assert row.se == pytest.approx(1 / np.sqrt(curvature), rel=1e-3)
    limit_ = stats.chi2.ppf(0.95, 1)
    for end in (row.low, row.high):
        assert 2 * (loss(end) - best.fun) == pytest.approx(limit_, abs=1e-4)


@pytest.mark.parametrize("terms", [1, 2, 3, 7, 16])
def test_irwin_hall_against_convolution(terms):
    """The density of a sum of uniforms by repeated integration on a fine grid."""
    points = np.linspace(0, terms, 9)
    ours = irwin_hall(points, terms=terms)
    steps = 400
    law = np.ones(1)
    for _ in range(terms):  # sums of midpoints of a fine grid
        law = np.convolve(law, np.full(steps, 1 / steps))
    sums = (np.arange(law.size) + terms / 2) / steps
    reference = [law[sums <= x].sum() for x in points]
    assert ours == pytest.approx(reference, abs=4e-3)
    assert ours[0] == 0
    assert ours[-1] == 1
