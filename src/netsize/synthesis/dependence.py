"""Several results from one sample: composites under an assumed correlation, or clustered errors."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal, NamedTuple, TypeAlias, get_args

import numpy as np

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, IntArray

__all__ = [
    "DEPENDENCE",
    "ClusteredLine",
    "Dependence",
    "clustered_line",
    "composite_variances",
    "composites",
    "sample_codes",
]

Dependence: TypeAlias = Literal["composites", "clustered"]
DEPENDENCE: tuple[str, ...] = get_args(Dependence)


class ClusteredLine(NamedTuple):
    """Weighted regression with errors clustered by sample; one entry a coefficient.

    df : number of clusters - 1.
    """

    coefficients: Array
    se: Array
    df: float


def sample_codes(samples: Sequence[str]) -> IntArray:
    """0, 1, ... for each sample in order of first appearance, shape (k,)."""
    codes: dict[str, int] = {}
    return np.array([codes.setdefault(s, len(codes)) for s in samples], dtype=np.int64)


def composites(
    estimates: Array, variances: Array, codes: IntArray, *, correlation: float
) -> tuple[Array, Array]:
    """Mean and variance of the results of each sample, in the order of `codes`.

    The mean of m results whose errors correlate ρ has variance
    [(1-ρ)Σv + ρ(Σ√v)²]/m² (Borenstein, Hedges, Higgins & Rothstein 2009, ch. 24).
    """
    number = np.bincount(codes)
    mean = np.bincount(codes, weights=estimates) / number
    return mean, composite_variances(variances, codes, correlation=correlation)


def composite_variances(variances: Array, codes: IntArray, *, correlation: float) -> Array:
    """Variance of the mean of each sample's results; `correlation` ρ in [0, 1]."""
    if not 0 <= correlation <= 1:
        raise SettingError(
            "--within-sample-correlation", f"{correlation:g} is not between 0 and 1; try 0.5"
        )
    number = np.bincount(codes)
    apart = np.bincount(codes, weights=variances)
    together = np.bincount(codes, weights=np.sqrt(variances)) ** 2
    return np.asarray(((1 - correlation) * apart + correlation * together) / number**2)


def clustered_line(
    columns: Sequence[Array], estimates: Array, weights: Array, codes: IntArray
) -> ClusteredLine:
    """Weighted least squares on `columns` with covariance clustered by sample (Liang & Zeger 1986).

    The covariance carries the small-sample factor G/(G-1) · (k-1)/(k-p) for G clusters, k results
    and p columns, and tests use t on G - 1 degrees of freedom. Needs G > p.
    """
    import statsmodels.api as sm

    design = np.column_stack(columns)
    fit = sm.WLS(estimates, design, weights=weights).fit(
        cov_type="cluster", cov_kwds={"groups": codes, "use_correction": True}, use_t=True
    )
    return ClusteredLine(np.asarray(fit.params), np.asarray(fit.bse), float(codes.max()))
