"""The exact selection model against a brute-force integration that shares no code with it."""

import numpy as np
import pytest
from scipy import stats
from scipy.integrate import simpson
from scipy.special import gammaln, hyp2f1

from netsize.effect_sizes.metrics import METRICS
from netsize.effect_sizes.records import Evidence
from netsize.synthesis.selection import Priors, dependence_weights, literatures, surface
from netsize.synthesis.selection_averaged import (
    fit_averaged,
    fit_averaged_many,
    log_evidence,
)
from netsize.synthesis.selection_profile import fit_profile

DIFFERENCE, CORRELATION, COHEN_F = (
    METRICS[name] for name in ("mean-difference", "fisher-z", "cohen-f")
)


def two_groups(t, n, cut_points=(0.05,)):
    df = 2 * n - 2
    cuts = tuple(float(stats.t.ppf(1 - p / 2, df)) for p in cut_points)
    band = sum(t <= c for c in cuts)
    return Evidence(kernel="t", df=(df,), scale=np.sqrt(n / 2), low=t, high=t, cuts=cuts, band=band)


def analysis_of_variance(f, df1, df2):
    cut = float(stats.f.ppf(0.95, df1, df2))
    return Evidence(
        kernel="f",
        df=(df1, df2),
        scale=np.sqrt(df1 + df2 + 1),
        low=f,
        high=f,
        cuts=(cut,),
        band=int(f <= cut),
    )


def correlation(r, n):
    t = stats.t.ppf(0.975, n - 2)
    cut = float(t / np.sqrt(n - 2 + t * t))
    return Evidence(
        kernel="r", df=(n - 2,), scale=1.0, low=r, high=r, cuts=(cut,), band=int(r <= cut)
    )


def literature_of(evidence):
    return literatures(
        [evidence],
        [np.ones(len(evidence))],
        mu_range=(-1.0, 2.0),
        margin=1.0,
        half_line=False,
        fineness=16.0,
    )[0]


LITERATURES = {
    "t": ([two_groups(2.4, 20), two_groups(2.9, 35), two_groups(1.1, 25)], DIFFERENCE),
    "F": ([analysis_of_variance(4.2, 2, 57), analysis_of_variance(3.5, 2, 87)], COHEN_F),
    "r": ([correlation(0.38, 40), correlation(0.30, 55)], CORRELATION),
}


def _density(e, theta):
    if e.kernel == "t":
        return stats.nct.pdf(e.low, e.df[0], theta * e.scale)
    if e.kernel == "f":
        return stats.ncf.pdf(e.low, *e.df, (theta * e.scale) ** 2)
    return _density_of_r(e.low, np.tanh(theta), e.df[0] + 2)


def _density_of_r(r, rho, n):
    """Hotelling (1953)."""
    log_constant = np.log(n - 2) + gammaln(n - 1) - 0.5 * np.log(2 * np.pi) - gammaln(n - 0.5)
    log_body = (
        (n - 1) / 2 * np.log1p(-(rho**2))
        + (n - 4) / 2 * np.log1p(-(r**2))
        - (n - 1.5) * np.log1p(-rho * r)
    )
    return np.exp(log_constant + log_body) * hyp2f1(0.5, 0.5, n - 0.5, (1 + rho * r) / 2)


def _significant(e, theta):
    if e.kernel == "t":
        return stats.nct.sf(e.cuts[0], e.df[0], theta * e.scale)
    if e.kernel == "f":
        # scipy's ncf.sf gives a negative value at noncentrality 0 exactly
        return stats.ncf.sf(e.cuts[0], *e.df, np.maximum((theta * e.scale) ** 2, 1e-9))
    r = np.linspace(e.cuts[0], 1 - 1e-9, 801)
    rho = np.tanh(theta)
    return simpson(_density_of_r(r, rho[:, None], e.df[0] + 2), x=r, axis=1)


def _brute_force(evidence, metric):
    """Quantiles (0.2, 0.5) of μ and of a new θ, and P(negligible), by dense sums."""
    s, s_tau = 0.8 * metric.prior_scale, 0.25 * metric.prior_scale
    half_line = not metric.signed
    low = 0.0 if half_line else -4 * s
    theta = np.linspace(0.0 if half_line else -5 * s, 5 * s, 2401)
    mu = np.linspace(low, 4 * s, 161)
    tau = (np.arange(40) + 0.5) / 40 * 4 * s_tau
    log_omega = np.linspace(np.log(0.01), 0, 41)
    omega = np.exp(log_omega)
    curves = np.array([_density(e, theta) for e in evidence])
    chances = np.array([_significant(e, theta) for e in evidence])
    band = np.array([e.band for e in evidence])

    def likelihood(mixed, printed):  # (k, ...) each
        base = mixed[..., None] * np.where(band[:, None, None] > 0, omega, 1.0)
        return np.prod(base / (printed[..., None] * (1 - omega) + omega), axis=0)

    joint = np.empty((tau.size, mu.size, omega.size))
    cells = np.linspace(theta[0], theta[-1], 1201)
    of_new = np.empty((tau.size, mu.size, cells.size))
    for i, width in enumerate(tau):
        weights = stats.norm.pdf(theta, mu[:, None], width)
        total = simpson(weights, x=theta, axis=1)
        mixed = simpson(curves[:, None, :] * weights, x=theta, axis=2) / total
        printed = simpson(chances[:, None, :] * weights, x=theta, axis=2) / total
        joint[i] = likelihood(mixed, printed)
        new = stats.norm.cdf(cells, mu[:, None], width)
        if half_line:
            start = stats.norm.cdf(0, mu[:, None], width)
            new = (new - start) / (1 - start)
        of_new[i] = new
    joint *= np.exp(-((tau / s_tau) ** 2) / 2)[:, None, None]
    joint *= np.exp(-((mu / s) ** 2) / 2)[:, None]
    prior = np.exp(-((tau / s_tau) ** 2) / 2).sum() * simpson(np.exp(-((mu / s) ** 2) / 2), x=mu)
    given_omega = simpson(joint, x=log_omega, axis=2) / -np.log(0.01)
    effect = simpson(given_omega, x=mu, axis=1).sum() / prior
    zero = int(np.abs(theta).argmin())
    at_null = likelihood(curves[:, zero, None], chances[:, zero, None])[0]
    null = simpson(at_null, x=log_omega) / -np.log(0.01)

    density = given_omega.sum(axis=0)
    steps = (density[1:] + density[:-1]) / 2
    cdf = np.concatenate([[0], np.cumsum(steps)]) / steps.sum()
    end = np.ones(mu.size)
    end[[0, -1]] = 0.5
    mass = given_omega * end
    new_cdf = np.tensordot(mass / mass.sum(), of_new, axes=2)
    return (
        np.interp([0.2, 0.5], cdf, mu),
        np.interp([0.2, 0.5], new_cdf / new_cdf[-1], cells),
        null / (null + effect),
    )


@pytest.mark.parametrize("name", LITERATURES)
def test_posterior_agrees_with_brute_force(name):
    evidence, metric = LITERATURES[name]
    mean, new, negligible = _brute_force(evidence, metric)
    fit = fit_averaged(evidence, weights=np.ones(len(evidence)), metric=metric)
    np.testing.assert_allclose(fit.mean.quantile([0.2, 0.5]), mean, atol=0.003)
    np.testing.assert_allclose(fit.new_study.quantile([0.2, 0.5]), new, atol=0.003)
    assert fit.probability_negligible == pytest.approx(negligible, abs=0.003)
    assert fit.rested


def test_without_selection_or_heterogeneity_it_is_the_exact_common_effect_likelihood():
    evidence = LITERATURES["t"][0]
    literature = literature_of(evidence)
    mu = np.linspace(-0.5, 1.5, 41)
    log_l = surface(literature, mu=mu, tau=np.array([0.0]), log_weights=np.zeros((1, 2)))
    expected = sum(stats.nct.logpdf(e.low, e.df[0], mu * e.scale) for e in evidence)
    np.testing.assert_allclose(log_l[0, :, 0], expected, atol=1e-4)


def test_one_significant_result_with_vanishing_omega_is_conditional_on_significance():
    evidence = [two_groups(2.5, 20)]
    literature = literature_of(evidence)
    mu = np.linspace(-0.5, 1.5, 41)
    weights = np.array([[0.0, np.log(1e-12)]])
    log_l = surface(literature, mu=mu, tau=np.array([0.0]), log_weights=weights)[0, :, 0]
    e = evidence[0]
    expected = stats.nct.logpdf(e.low, e.df[0], mu * e.scale) - stats.nct.logsf(
        e.cuts[0], e.df[0], mu * e.scale
    )
    np.testing.assert_allclose(log_l, expected, atol=1e-4)


def test_large_samples_without_selection_give_the_normal_random_effects_likelihood():
    evidence = [two_groups(t, n) for t, n in [(9.0, 2000), (12.5, 3000), (3.0, 2500)]]
    literature = literature_of(evidence)
    mu, tau = np.linspace(0.0, 0.5, 21), np.array([0.0, 0.02, 0.1, 0.2])
    log_l = surface(literature, mu=mu, tau=tau, log_weights=np.zeros((1, 2)))[:, :, 0]
    d = np.array([e.low / e.scale for e in evidence])
    v = np.array([e.scale**-2 for e in evidence]) * (1 + d**2 / 8)
    normal = stats.norm.logpdf(d, mu[:, None], np.sqrt(v + tau[:, None, None] ** 2)).sum(axis=2)
    near = normal > normal.max() - 6
    difference = (log_l - normal)[near]
    assert np.ptp(difference) < 0.1


def test_bands_may_be_more_than_two():
    evidence = [two_groups(t, n, (0.05, 0.2, 1.0)) for t, n in [(2.4, 20), (1.5, 30), (0.4, 25)]]
    assert [e.band for e in evidence] == [0, 1, 2]
    fit = fit_averaged(evidence, weights=np.ones(3), metric=DIFFERENCE)
    assert len(fit.printing) == 3
    assert fit.rested
    literature = literature_of(evidence)
    log_w = np.log(np.array([[1.0, 0.5, 0.2, 0.1]]))
    mu = np.array([0.3])
    got = surface(literature, mu=mu, tau=np.array([0.0]), log_weights=log_w)[0, 0, 0]
    expected = 0.0
    for e in evidence:
        above = [0.0, *(stats.nct.sf(c, e.df[0], 0.3 * e.scale) for c in e.cuts), 1.0]
        printed = np.diff(above) @ np.exp(log_w[0])
        expected += (
            log_w[0, e.band] + stats.nct.logpdf(e.low, e.df[0], 0.3 * e.scale) - np.log(printed)
        )
    assert got == pytest.approx(expected, abs=1e-4)


def test_an_inequality_across_the_cut_counts_each_part_with_its_own_chance():
    df, scale = 38.0, np.sqrt(10)
    cut = float(stats.t.ppf(0.975, df))
    whole = Evidence(
        kernel="t", df=(df,), scale=scale, low=1.0, high=np.inf, cuts=(cut,), band=None
    )
    literature = literature_of([whole])
    mu = np.array([0.3])
    got = surface(literature, mu=mu, tau=np.array([0.0]), log_weights=np.log([[1.0, 0.25]]))[
        0, 0, 0
    ]
    above_one, above_cut = (stats.nct.sf(x, df, 0.3 * scale) for x in (1.0, cut))
    expected = (above_cut + 0.25 * (above_one - above_cut)) / (above_cut + 0.25 * (1 - above_cut))
    assert got == pytest.approx(np.log(expected), abs=1e-4)


def test_results_of_one_sample_count_as_one_when_perfectly_correlated():
    once = [two_groups(2.5, 30)]
    thrice = once * 3
    weights = dependence_weights(["a", "a", "a"], correlation=1.0)
    np.testing.assert_allclose(weights, 1 / 3)
    single = fit_averaged(once, weights=np.ones(1), metric=DIFFERENCE)
    tripled = fit_averaged(thrice, weights=weights, metric=DIFFERENCE)
    np.testing.assert_allclose(
        tripled.mean.quantile([0.2, 0.5]), single.mean.quantile([0.2, 0.5]), atol=1e-9
    )
    np.testing.assert_allclose(
        dependence_weights(["a", "b", "a"], correlation=0.5), [2 / 3, 1, 2 / 3]
    )


def test_order_of_results_does_not_matter():
    evidence, metric = LITERATURES["t"]
    there = fit_averaged(evidence, weights=np.ones(3), metric=metric)
    back = fit_averaged(evidence[::-1], weights=np.ones(3), metric=metric)
    assert there.probability_negligible == pytest.approx(back.probability_negligible, rel=1e-9)
    assert there.mean.quantile(0.2) == pytest.approx(float(back.mean.quantile(0.2)), abs=1e-9)


def test_many_literatures_at_once_agree_with_one_at_a_time():
    groups = [LITERATURES["t"][0], [two_groups(3.0, 50)], [two_groups(1.0, 15)] * 4]
    many = fit_averaged_many(groups, weights=[np.ones(len(g)) for g in groups], metric=DIFFERENCE)
    for group, brief in zip(groups, many, strict=True):
        single = fit_averaged(group, weights=np.ones(len(group)), metric=DIFFERENCE)
        np.testing.assert_allclose(
            brief.mean.quantile([0.2, 0.5]), single.mean.quantile([0.2, 0.5]), atol=0.003
        )
        assert brief.probability_negligible == pytest.approx(
            single.probability_negligible, abs=0.003
        )


@pytest.mark.parametrize("k", [50, 200])
def test_a_narrow_posterior_is_resolved(k):
    """Many large studies without selection: μ follows the normal theory closely."""
    rng = np.random.default_rng(7)
    n = 400
    d = rng.normal(rng.normal(0.3, 0.1, k), np.sqrt(2 / n))
    evidence = [two_groups(float(x * np.sqrt(n / 2)), n) for x in d]
    priors = Priors(effect_scale=0.8, heterogeneity_scale=0.25, printing_floor=0.999)
    fit = fit_averaged(evidence, weights=np.ones(k), metric=DIFFERENCE, priors=priors)
    low, high = fit.mean.quantile([0.16, 0.84])
    assert (low + high) / 2 == pytest.approx(d.mean(), abs=0.004)
    assert (high - low) / 2 == pytest.approx(d.std(ddof=1) / np.sqrt(k), rel=0.06)
    assert fit.rested


def test_evidence_for_selection_is_strong_when_all_results_barely_pass():
    barely = [two_groups(2.2, 20)] * 6
    spread = [two_groups(t, 40) for t in (0.4, 1.3, 2.2, 3.0, 1.8, 2.6)]
    for evidence, favours_selection in ((barely, True), (spread, False)):
        settings = {"weights": np.ones(len(evidence)), "metric": DIFFERENCE}
        log_factor = log_evidence(evidence, **settings) - log_evidence(
            evidence, selection=False, **settings
        )
        assert (log_factor > 0) == favours_selection


def test_profile_peaks_where_a_direct_search_does():
    from scipy.optimize import minimize

    evidence = [two_groups(t, n) for t, n in [(3.1, 30), (2.8, 45), (4.5, 60), (1.5, 40)]]
    fit = fit_profile(evidence, weights=np.ones(4), metric=DIFFERENCE)
    theta = np.linspace(-3, 4, 2801)
    curves = [stats.nct.pdf(e.low, e.df[0], theta * e.scale) for e in evidence]
    chances = [_significant(e, theta) for e in evidence]

    def loss(x):
        mu, tau, omega = x[0], abs(x[1]) + 0.006, np.exp(-abs(x[2]))
        weights = stats.norm.pdf(theta, mu, tau)
        total = 0.0
        for e, curve, chance in zip(evidence, curves, chances, strict=True):
            m, a = np.trapezoid(curve * weights, theta), np.trapezoid(chance * weights, theta)
            total += np.log(m * (omega if e.band else 1)) - np.log(a + omega * (1 - a))
        return -total

    best = min(
        (
            minimize(loss, [start, 0.1, 0.7], method="Nelder-Mead", options={"maxiter": 150})
            for start in (0.4, 0.6)
        ),
        key=lambda r: r.fun,
    )
    assert fit.estimate == pytest.approx(best.x[0], abs=0.02)
    assert fit.log_likelihood == pytest.approx(-best.fun, abs=0.01)


def test_profile_confidence_is_the_signed_root():
    evidence = [two_groups(4.0, 40)]
    priors = Priors(effect_scale=0.8, heterogeneity_scale=1e-4, printing_floor=1 - 1e-9)
    fit = fit_profile(evidence, weights=np.ones(1), metric=DIFFERENCE, priors=priors)
    e = evidence[0]
    mu = np.linspace(0.3, 1.6, 9)
    height = stats.nct.logpdf(e.low, e.df[0], mu * e.scale)
    grid = np.linspace(0.5, 1.3, 8001)
    top = stats.nct.logpdf(e.low, e.df[0], grid * e.scale)
    sign = np.sign(mu - grid[top.argmax()])
    expected = stats.norm.cdf(sign * np.sqrt(2 * (top.max() - height)))
    np.testing.assert_allclose(fit.mean.cdf(mu), expected, atol=2e-3)


def test_a_lone_barely_significant_result_leaves_no_finite_lower_limit():
    fit = fit_profile([two_groups(2.03, 20)], weights=np.ones(1), metric=DIFFERENCE)
    assert fit.mean.quantile(0.2) < 0


def test_shrunken_effects_lie_between_the_study_and_the_mean():
    evidence = [two_groups(t, 60) for t in (2.2, 3.0, 5.5, 2.9, 3.4)]
    fit = fit_averaged(evidence, weights=np.ones(5), metric=DIFFERENCE)
    own = 5.5 / evidence[2].scale
    assert float(fit.mean.quantile(0.5)) < float(fit.shrunken[2].quantile(0.5)) < own


def test_large_samples_reach_the_normal_step_function_model(monkeypatch):
    """Same maximum as the normal-theory model (Vevea & Hedges 1995), which shares no code."""
    from netsize.synthesis import precise
    from netsize.synthesis.step_function import fit_step_function

    monkeypatch.setattr(precise, "_PRECISE", np.inf)  # the exact curves are meant
    rng = np.random.default_rng(21)
    n = rng.integers(3000, 9000, 60)
    d = rng.normal(rng.normal(0.035, 0.02, 60), np.sqrt(2 / n))
    printed = (d * np.sqrt(n / 2) > 1.96) | (rng.random(60) < 0.4)
    n, d = n[printed], d[printed]
    evidence = [two_groups(float(x * np.sqrt(m / 2)), int(m)) for x, m in zip(d, n, strict=True)]
    k = len(evidence)
    priors = Priors(effect_scale=0.05, heterogeneity_scale=0.025)
    exact = fit_profile(evidence, weights=np.ones(k), metric=DIFFERENCE, priors=priors)
    normal = fit_step_function(d, 2 / n)
    assert 0.05 < normal.weights[1] < 0.95
    assert exact.estimate == pytest.approx(normal.mean, abs=1e-3)
    assert exact.heterogeneity == pytest.approx(np.sqrt(normal.tau2), abs=1e-3)
    assert exact.printing[0] == pytest.approx(normal.weights[1], abs=0.02)
    of_d = exact.log_likelihood + 0.5 * np.log(n / 2).sum()  # density of d, not of t
    assert of_d == pytest.approx(normal.log_likelihood, abs=2e-3)


def test_very_precise_results_are_taken_as_normal_without_moving_the_answer(monkeypatch):
    from netsize.synthesis import precise

    evidence = [two_groups(t, n) for t, n in [(2.9, 25), (2.2, 2500), (7.0, 3000), (1.0, 2100)]]
    settings = {"weights": np.ones(4), "metric": DIFFERENCE}
    quick = fit_averaged(evidence, **settings)
    monkeypatch.setattr(precise, "_PRECISE", np.inf)
    exact = fit_averaged(evidence, **settings)
    for a, b in ((quick.mean, exact.mean), (quick.new_study, exact.new_study)):
        np.testing.assert_allclose(
            a.quantile([0.05, 0.2, 0.5]), b.quantile([0.05, 0.2, 0.5]), atol=2e-3
        )
    assert quick.probability_negligible == pytest.approx(exact.probability_negligible, abs=1e-3)


@pytest.mark.parametrize("n", [10**4, 10**6, 10**8])
def test_one_enormous_study_is_placed_right_by_the_profile(n):
    d = 0.3
    fit = fit_profile([two_groups(d * np.sqrt(n / 2), n)], weights=np.ones(1), metric=DIFFERENCE)
    assert fit.estimate == pytest.approx(d, abs=2e-4)


@pytest.mark.parametrize(
    ("evidence", "metric"),
    [
        ([correlation(0.95, 20)], CORRELATION),
        ([correlation(0.95, 20), correlation(0.93, 20)], CORRELATION),
        ([analysis_of_variance(60.0, 2, 27)], COHEN_F),
        ([two_groups(14.0, 20)], DIFFERENCE),
    ],
)
def test_the_profile_has_an_upper_end(evidence, metric):
    fit = fit_profile(evidence, weights=np.ones(len(evidence)), metric=metric)
    assert fit.mean.above < 1e-4
    assert np.isfinite(fit.mean.quantile([0.5, 0.975])).all()


def test_the_profile_does_not_depend_on_the_prior_of_the_effect():
    evidence = [two_groups(t, n) for t, n in [(3.1, 20), (2.8, 30), (4.1, 50), (1.4, 40)]]
    values = [
        fit_profile(
            evidence,
            weights=np.ones(4),
            metric=DIFFERENCE,
            priors=Priors(effect_scale=s, heterogeneity_scale=0.25),
        ).mean.quantile([0.025, 0.2, 0.5])
        for s in (0.05, 0.8, 50.0)
    ]
    np.testing.assert_array_equal(values[0], values[1])
    np.testing.assert_array_equal(values[2], values[1])


# Three cases worked beforehand on a coarse grid of the same model, so a check on the statement of
# the model rather than an outside source: [20th percentile, median] of a new study's θ, and
# P(negligible), whose coarse integration over ω was off by up to 0.02 either way (the brute force
# above sides with the fine grid).
WORKED = [
    ([2.3, 2.5, 2.9, 2.2, 2.6], [20] * 5, 0.13, 0.37, 0.32),
    (
        [3.1, 2.8, 4.5, 3.9, 2.2, 5.1, 3.3, 1.5, 4.4, 3.7],
        [30, 45, 60, 80, 25, 100, 50, 40, 70, 66],
        0.53,
        0.63,
        0.00,
    ),
    ([2.3], [20], -0.02, 0.34, 0.54),
]


@pytest.mark.parametrize(("t", "n", "low", "median", "negligible"), WORKED)
def test_cases_worked_beforehand_on_a_coarse_grid(t, n, low, median, negligible):
    evidence = [two_groups(*pair) for pair in zip(t, n, strict=True)]
    fit = fit_averaged(evidence, weights=np.ones(len(t)), metric=DIFFERENCE)
    np.testing.assert_allclose(fit.new_study.quantile([0.2, 0.5]), [low, median], atol=0.015)
    assert fit.probability_negligible == pytest.approx(negligible, abs=0.021)
