"""Published conversions of an estimate and its variance from one metric to another."""

from __future__ import annotations

import math

__all__ = ["convert", "d_from_log_odds", "d_from_z", "z_from_d"]


def d_from_log_odds(log_odds: float, variance: float) -> tuple[float, float]:
    """d = ln OR √3/π and its variance, for an outcome that is a dichotomized logistic variable.

    The standard logistic law has standard deviation π/√3 (Hasselblad & Hedges 1995; Chinn 2000).
    """
    factor = math.sqrt(3) / math.pi
    return log_odds * factor, variance * factor**2


def d_from_z(z: float, variance: float) -> tuple[float, float]:
    """d = 2r/√(1-r²) = 2 sinh z from Fisher's z, variance by the delta method.

    Two equal groups made by cutting one variable of the pair (Borenstein et al. 2009, eq. 7.5);
    with V_r = (1-r²)² V_z the variance is theirs, 4 V_r/(1-r²)³ (eq. 7.6).
    """
    return 2 * math.sinh(z), 4 * math.cosh(z) ** 2 * variance


def z_from_d(d: float, variance: float) -> tuple[float, float]:
    """Fisher's z of r = d/√(d²+4), two equal groups; the inverse of `d_from_z`."""
    return math.asinh(d / 2), variance / (d * d + 4)


def convert(
    value: float, variance: float, *, source: str, target: str, logistic: bool
) -> tuple[float, float, str] | None:
    """(value, variance, what it assumes) on `target`; None where no conversion is published.

    `logistic` says that a log ratio is a log odds ratio: only that has a conversion.
    """
    if source == "log-ratio":
        if not logistic:
            return None
        d, v = d_from_log_odds(value, variance)
        note = "odds ratio converted by the logistic law (Hasselblad & Hedges 1995)"
        if target == "mean-difference":
            return d, v, note
        if target == "fisher-z":
            return *z_from_d(d, v), f"{note}, then d to r for equal groups (Borenstein 2009)"
    if source == "mean-difference" and target == "fisher-z":
        return *z_from_d(value, variance), "d converted to r for equal groups (Borenstein 2009)"
    if source == "fisher-z" and target == "mean-difference":
        return *d_from_z(value, variance), "r converted to d of equal groups (Borenstein 2009)"
    return None
