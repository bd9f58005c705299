import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.stats import norm

from netsize.numerics.grid import GridDistribution

POINTS = np.linspace(-6, 6, 2401)
NORMAL = GridDistribution.from_weights(POINTS, np.exp(-(POINTS**2) / 2))


def test_a_fine_grid_reproduces_the_normal():
    x = np.array([-2.0, -0.3, 0.0, 1.1, 2.5])
    np.testing.assert_allclose(NORMAL.cdf(x), norm.cdf(x), atol=2e-6)
    np.testing.assert_allclose(NORMAL.quantile(norm.cdf(x)), x, atol=1e-5)
    assert NORMAL.mean == pytest.approx(0, abs=1e-12)
    assert NORMAL.sd == pytest.approx(1, abs=1e-5)
    assert NORMAL.expectation(np.cos) == pytest.approx(np.exp(-0.5), abs=1e-6)


def test_restriction_is_the_truncated_normal():
    part = NORMAL.restrict(0.5, np.inf)
    x = np.array([0.4, 0.5, 0.9, 2.0])
    expected = np.clip((norm.cdf(x) - norm.cdf(0.5)) / norm.sf(0.5), 0, 1)
    np.testing.assert_allclose(part.cdf(x), expected, atol=3e-6)
    assert part.quantile(0.0) == pytest.approx(0.5, abs=0.01)


def test_restriction_without_probability_is_refused():
    with pytest.raises(ValueError, match="no probability"):
        NORMAL.restrict(7, 9)


def test_mixture_with_a_point_mass_jumps_there():
    mixed = GridDistribution.mixture([NORMAL, GridDistribution.at(0.0)], [3.0, 1.0])
    assert mixed.cdf(-1e-9) == pytest.approx(0.375, abs=1e-6)
    assert mixed.cdf(0.0) == pytest.approx(0.625, abs=1e-6)
    np.testing.assert_array_equal(mixed.quantile([0.4, 0.5, 0.6]), 0.0)
    assert mixed.expectation(lambda x: (x == 0.0).astype(float)) >= 0.25
    kept = mixed.restrict(-1, 1)
    assert kept.cdf(0.0) - kept.cdf(-1e-9) == pytest.approx(
        0.25 / (0.25 + 0.75 * (norm.cdf(1) - norm.cdf(-1))), abs=1e-4
    )


def test_escaping_mass_has_infinite_quantiles():
    levelled = GridDistribution.from_cdf(np.array([-1.0, 0.0, 1.0]), np.array([0.1, 0.5, 0.95]))
    np.testing.assert_array_equal(levelled.quantile([0.05, 0.3, 0.97]), [-np.inf, -0.5, np.inf])
    np.testing.assert_allclose(levelled.cdf([-np.inf, -2.0, 5.0, np.inf]), [0, 0.1, 0.95, 1])
    assert np.isnan(levelled.sd)
    assert levelled.restrict(-1, 1).quantile(0.0) == -1


def test_a_decreasing_cdf_is_levelled_not_negated():
    bumpy = GridDistribution.from_cdf(np.arange(4.0), np.array([0.0, 0.6, 0.5, 1.0]))
    np.testing.assert_allclose(bumpy.mass, [0.6, 0.0, 0.4])


def test_masses_that_do_not_sum_to_one_are_refused():
    with pytest.raises(ValueError, match="sum to 1"):
        GridDistribution(edges=np.array([0.0, 1.0]), mass=np.array([0.5]))


@given(
    st.lists(st.floats(0.01, 1), min_size=3, max_size=20),
    st.floats(0.001, 0.999),
)
def test_quantile_inverts_cdf(weights, p):
    d = GridDistribution.from_weights(np.arange(len(weights), dtype=float), np.array(weights))
    assert d.cdf(d.quantile(p)) == pytest.approx(p, abs=1e-9)


def test_mapping_by_an_increasing_function_moves_quantiles():
    mapped = NORMAL.mapped(np.tanh)
    np.testing.assert_allclose(
        mapped.quantile([0.2, 0.9]), np.tanh(norm.ppf([0.2, 0.9])), atol=1e-4
    )
