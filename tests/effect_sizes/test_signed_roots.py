from __future__ import annotations

import numpy as np
import pytest

from netsize.effect_sizes import estimators
from netsize.effect_sizes.signed_roots import signed_root, variance_from_chi2, variance_from_f


def test_signed_root():
    assert (signed_root(0.09), signed_root(-0.09), signed_root(0.0)) == (0.3, -0.3, 0.0)


@pytest.mark.parametrize("ncp", [1e4, 1e6])
def test_large_effects_follow_the_delta_method(ncp):
    df1, df2, scale = 3, 1e5, 10.0
    of_ncp = float(estimators.unbiased_noncentrality_variance(ncp, df1, df2))
    expected = of_ncp / (4 * ncp * scale**2)
    assert variance_from_f(ncp, df1=df1, df2=df2, scale=scale) == pytest.approx(expected, rel=1e-3)
    assert variance_from_chi2(ncp, df=3, scale=scale) == pytest.approx(
        2 * (3 + 2 * ncp) / (4 * ncp * scale**2), rel=1e-3
    )


@pytest.mark.slow
@pytest.mark.parametrize(("df1", "df2"), [(1, 5), (2, 57), (5, 200), (300, 400)])
@pytest.mark.parametrize("ncp", [0.0, 8.0, 700.0])
def test_against_simulated_f(df1, df2, ncp):
    rng = np.random.default_rng(31)
    numerator = rng.noncentral_chisquare(df1, max(ncp, 1e-12), 200_000) / df1
    f = numerator / (rng.chisquare(df2, 200_000) / df2)
    square = estimators.unbiased_noncentrality(f, df1, df2)
    roots = np.copysign(np.sqrt(np.abs(square)), square)
    ours = variance_from_f(ncp, df1=df1, df2=df2, scale=1.0)
    assert ours == pytest.approx(roots.var(), rel=0.05 if df2 == 5 else 0.02)


@pytest.mark.slow
@pytest.mark.parametrize("ncp", [0.0, 8.0, 700.0])
def test_against_simulated_chi_square(ncp):
    x = np.random.default_rng(32).noncentral_chisquare(4, max(ncp, 1e-12), 200_000) - 4
    roots = np.copysign(np.sqrt(np.abs(x)), x)
    assert variance_from_chi2(ncp, df=4, scale=1.0) == pytest.approx(roots.var(), rel=0.02)
