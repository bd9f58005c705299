"""Weighted straight lines through many literatures at once."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from netsize.numerics.arrays import Array

__all__ = ["Line", "squared_residuals", "weighted_line"]


class Line(NamedTuple):
    """y = intercept + slope · x by weighted least squares, shape (...).

    intercept_se, slope_se : with the residual variance `scale` estimated on df = k - 2; 1 is
        expected of `scale` where the weights are inverse variances.
    intercept_unit, slope_unit, covariance_unit : entries of (X'WX)⁻¹, for weights that are known
        inverse variances.
    All nan where k < 3 or every x is the same.
    """

    intercept: Array
    slope: Array
    intercept_se: Array
    slope_se: Array
    df: Array
    scale: Array
    intercept_unit: Array
    slope_unit: Array
    covariance_unit: Array


def weighted_line(x: Array, y: Array, weights: Array) -> Line:
    """Fit each row of (..., k) arrays; a weight of 0 marks padding."""
    with np.errstate(all="ignore"):
        k = (weights > 0).sum(axis=-1).astype(float)
        total = weights.sum(axis=-1)
        x_mean = (weights * x).sum(axis=-1) / total
        y_mean = (weights * y).sum(axis=-1) / total
        dx, dy = x - x_mean[..., None], y - y_mean[..., None]
        sxx = (weights * dx * dx).sum(axis=-1)
        # equal x leave rounding errors, not zeros
        flat = sxx <= 1e-14 * (weights * x * x).sum(axis=-1)
        sxx = np.where(flat | (k < 3), np.nan, sxx)
        slope = (weights * dx * dy).sum(axis=-1) / sxx
        intercept = y_mean - slope * x_mean
        df = np.where(k >= 3, k - 2, np.nan)
        residual = dy - slope[..., None] * dx
        scale = squared_residuals(residual, y, weights) / df
        intercept_unit = 1 / total + x_mean**2 / sxx
        return Line(
            intercept,
            slope,
            np.sqrt(scale * intercept_unit),
            np.sqrt(scale / sxx),
            df,
            scale,
            intercept_unit,
            1 / sxx,
            -x_mean / sxx,
        )


def squared_residuals(residual: Array, y: Array, weights: Array) -> Array:
    """Σw·residual² over the last axis; 0 where it is rounding error next to Σwy²."""
    rest = (weights * residual**2).sum(axis=-1)
    return np.where(rest <= 1e-24 * (weights * y * y).sum(axis=-1), 0.0, rest)
