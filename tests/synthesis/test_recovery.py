"""Each correction where its own assumption holds exactly: the bias vanishes as results multiply."""

from __future__ import annotations

import numpy as np
import pytest

from netsize.effect_sizes.records import Evidence
from netsize.synthesis.conditional import (
    conditional_likelihood,
    conditional_quantiles,
    search_domain,
)
from netsize.synthesis.limit import limit_many
from netsize.synthesis.random_effects import pool_many
from netsize.synthesis.small_study import pet_peese_many
from netsize.synthesis.step_function import fit_step_function
from netsize.synthesis.trim_and_fill import trim_and_fill_many
from netsize.synthesis.unrestricted import adequately_powered_many, unrestricted_many

pytestmark = pytest.mark.slow

MEAN = 0.2
CUT = 1.959964


def _within_noise(values, truth, smallest=0.0):
    """Mean within four Monte Carlo standard errors, or `smallest`, of the truth."""
    noise = 4 * np.std(values) / np.sqrt(len(values))
    return abs(np.mean(values) - truth) < max(noise, smallest)


def _selected(rng, k, *, weight, tau2, variances):
    """k results of which those with one-sided p above .025 were printed with chance `weight`."""
    ys, vs = np.empty(0), np.empty(0)
    while ys.size < k:
        v = rng.uniform(*variances, 4 * k)
        y = rng.normal(MEAN, np.sqrt(v + tau2))
        kept = (y / np.sqrt(v) > CUT) | (rng.random(y.size) < weight)
        ys, vs = np.append(ys, y[kept]), np.append(vs, v[kept])
    return ys[:k], vs[:k]


def test_step_function():
    rng = np.random.default_rng(1)
    errors = {}
    for k in (40, 600):
        drawn = [
            _selected(rng, k, weight=0.25, tau2=0.02, variances=(0.01, 0.1)) for _ in range(60)
        ]
        fits = [fit_step_function(y, v) for y, v in drawn]
        assert all(f.converged for f in fits)
        means = np.array([f.mean for f in fits])
        errors[k] = np.sqrt(np.mean((means - MEAN) ** 2))
        naive = np.mean([np.average(y, weights=1 / v) for y, v in drawn])
        assert naive > MEAN + 0.08
        assert _within_noise(means, MEAN, 0.01)
    assert errors[600] < 0.4 * errors[40]
    weights = np.array([f.weights[1] for f in fits])
    assert _within_noise(weights, 0.25, 0.01)
    covered = np.mean([abs(f.mean - MEAN) < 1.96 * f.se for f in fits])
    assert covered == pytest.approx(0.95, abs=0.09)


def _significant(rng, k, scale):
    z = np.empty(0)
    while z.size < k:
        drawn = rng.normal(MEAN * scale, 1, 40 * k)
        z = np.append(z, drawn[drawn > CUT])
    return [
        Evidence(kernel="z", df=(), scale=scale, low=x, high=x, cuts=(CUT,), band=0) for x in z[:k]
    ]


def test_conditional_estimates():
    rng = np.random.default_rng(2)
    scale = 8.0  # expected z of 1.6, power .36
    for k, repeats, allowed in ((5, 60, 0.08), (150, 30, 0.02)):
        likelihood, quantiles = [], []
        for _ in range(repeats):
            evidence = _significant(rng, k, scale)
            y = np.array([e.low for e in evidence]) / scale
            domain = search_domain(y, np.full(k, scale**-2), signed=True)
            likelihood.append(
                conditional_likelihood(evidence, np.ones(k), domain, sides="predicted").estimate
            )
            quantiles.append(conditional_quantiles(evidence, domain).estimate)
            assert y.mean() > MEAN + 0.06
        assert _within_noise(likelihood, MEAN, allowed)
        assert _within_noise(quantiles, MEAN, allowed)


def test_lines_when_bias_is_a_line():
    """y = β + slope · σ (PET) or slope · σ² (PEESE): the intercepts have no bias at any k."""
    rng = np.random.default_rng(3)
    spread = []
    for k in (10, 200):
        v = rng.uniform(0.01, 0.2, (2000, k))
        noise = rng.normal(size=v.shape) * np.sqrt(v)
        linear = pet_peese_many(MEAN + 1.2 * np.sqrt(v) + noise, v).pet.intercept
        square = pet_peese_many(MEAN + 2.0 * v + noise, v).peese.intercept
        assert _within_noise(linear, MEAN)
        assert _within_noise(square, MEAN)
        spread.append(linear.std())
    assert spread[1] < 0.4 * spread[0]


def test_limit_meta_analysis_under_its_model():
    rng = np.random.default_rng(4)
    alpha, tau2 = 0.8, 0.04
    limit_mean = MEAN + alpha * np.sqrt(tau2)
    biases = []
    for k in (10, 300):
        v = rng.uniform(0.005, 0.3, (1500, k))
        total = np.sqrt(v + tau2)
        y = MEAN + total * (alpha + rng.normal(size=v.shape))
        fit = limit_many(y, v)
        biases.append(abs(fit.estimate.mean() - limit_mean))
    assert biases[1] < 0.02
    assert abs(pool_many(y, v).mean.mean() - limit_mean) > 0.1


def test_trim_and_fill_when_the_leftmost_are_missing():
    """A fifth of the results, the smallest, suppressed. R₀ finds them all in the end; L₀ needs
    precise studies to hold the centre in place, and then leaves a few thousandths."""
    rng = np.random.default_rng(5)
    biases = []
    for k in (20, 600):
        n = int(1.25 * k)
        y = np.sort(rng.normal(MEAN, 0.2, (200, n)), axis=-1)[:, n - k :]
        v = np.full(y.shape, 0.04)
        filled = trim_and_fill_many(y, v, asymmetry="R0", heterogeneity="dersimonian-laird")
        biases.append(filled.pooled.mean.mean() - MEAN)
        assert y.mean() > MEAN + 0.06
    assert biases[0] < 0.05
    assert abs(biases[1]) < 0.003
    assert filled.number.mean() == pytest.approx(150, rel=0.05)
    v = np.exp(rng.uniform(np.log(0.001), np.log(0.3), (200, 250)))
    y = rng.normal(MEAN, np.sqrt(v))
    order = np.argsort(y, axis=-1)[:, 50:]
    y, v = np.take_along_axis(y, order, -1), np.take_along_axis(v, order, -1)
    settings = {"heterogeneity": "dersimonian-laird"}
    naive = pool_many(y, v, **settings).mean.mean() - MEAN
    left = trim_and_fill_many(y, v, asymmetry="L0", **settings).pooled.mean.mean() - MEAN
    assert abs(left) < 0.006 < naive


def test_adequately_powered_when_only_weak_studies_are_selected():
    rng = np.random.default_rng(6)
    v = np.where(rng.random((1500, 100)) < 0.1, 0.003, 0.04)
    y = rng.normal(MEAN, np.sqrt(v))
    printed = (v < 0.01) | (y / np.sqrt(v) > CUT)
    powered = adequately_powered_many(y, v, printed).fit.mean
    everything = unrestricted_many(y, v, printed).mean
    assert _within_noise(powered, MEAN, 0.002)
    assert everything.mean() > MEAN + 0.02
