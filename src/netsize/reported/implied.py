"""What a printed statistic implies for the numbers beside it, over all values that round to it."""

from __future__ import annotations

import math
from typing import TypeAlias

from scipy.special import chdtrc, fdtrc, ndtr, stdtr

from netsize.reported.records import Printed, ReportedResult

__all__ = ["Range", "df_of", "effect_candidates", "p_range", "rounding_range"]

Range: TypeAlias = tuple[float, float]

_TINY = 1e-12


def rounding_range(number: Printed) -> Range:
    """All values that round to the printed one, ends included; an inequality is open-ended."""
    if number.relation == "<":
        return -math.inf, number.value
    if number.relation == ">":
        return number.value, math.inf
    half = 0.5 * 10.0 ** -(number.decimals or 0) if number.decimals is not None else 0.0
    return number.value - half, number.value + half


def p_range(result: ReportedResult, df: tuple[float, ...] | None = None) -> Range | None:
    """The p-values that the printed statistic allows, by the result's tails; None without one.

    t: 2 P(T_df ≥ |t|); r through t = r √(df / (1 - r²)); F, χ²: upper tail; z: 2 P(Z ≥ |z|).
    One-tailed t, r and z: the tail on the predicted side. `df` replaces the printed one.
    """
    if result.value is None or result.family not in ("t", "f", "r", "z", "chi2", "coefficient"):
        return None
    df = df if df is not None else df_of(result)
    if df is None:
        return None
    ends = _statistic_range(result)
    values = [_tail(result, end, df) for end in ends]
    if ends[0] < 0 < ends[1] and result.family not in ("f", "chi2") and result.tails == 2:
        values.append(1.0)
    return min(values), max(values)


def df_of(result: ReportedResult) -> tuple[float, ...] | None:
    if result.family == "z":
        return ()
    if result.df:
        return result.df
    if result.family == "r" and result.n and sum(result.n) > 2:
        return (sum(result.n) - 2.0,)
    return None


def _statistic_range(result: ReportedResult) -> Range:
    assert result.value is not None
    printed = Printed(result.value, result.relation, result.decimals)
    if result.family == "coefficient":
        beside = dict(result.also).get("t")
        if beside is not None:
            printed = beside
        elif result.standard_error:
            low, high = (end / result.standard_error for end in rounding_range(printed))
            return low, high
    low, high = rounding_range(printed)
    if result.family in ("f", "chi2"):
        return max(low, 0.0), max(high, 0.0)
    if result.family == "r":
        return max(low, -1 + _TINY), min(high, 1 - _TINY)
    if result.relation == "<" and result.value > 0:
        low = 0.0 if result.tails == 2 else low  # "t < 1" speaks of the size of t
    return low, high


def _tail(result: ReportedResult, value: float, df: tuple[float, ...]) -> float:
    family = result.family
    if math.isinf(value) and family not in ("f", "chi2"):
        toward = value * result.direction > 0
        return 0.0 if result.tails == 2 or toward else 1.0
    if family == "f":
        upper = float(fdtrc(df[0], df[1], value)) if math.isfinite(value) else 0.0
        return upper if result.tails == 2 else upper / 2
    if family == "chi2":
        upper = float(chdtrc(df[0], value)) if math.isfinite(value) else 0.0
        return upper if result.tails == 2 or df[0] != 1 else upper / 2
    if family == "r":
        value = value * math.sqrt(df[0] / (1 - value * value))
    size = abs(value) if result.tails == 2 else result.direction * value
    upper = float(ndtr(-size)) if family == "z" else float(stdtr(df[0], -size))
    return 2 * upper if result.tails == 2 else upper


def effect_candidates(result: ReportedResult, name: str) -> list[tuple[str, float, float]]:
    """(design in words, low, high): sizes of the effect that the rounded statistic allows."""
    assert result.value is not None
    low, high = rounding_range(Printed(abs(result.value), "=", result.decimals))
    low = max(low, 0.0)
    error = result.df[-1]
    if result.family == "f":
        if result.df[0] != 1:
            return _variance_shares(name, low, high, result.df[0], error)
        shares = _variance_shares(name, low, high, 1.0, error)
        if shares:
            return shares
        low, high = math.sqrt(low), math.sqrt(high)
    elif name.startswith(("partial-", "eta2", "epsilon2", "omega2")):
        return _variance_shares(name, low * low, high * high, 1.0, error)
    if name in ("d", "g"):
        return _mean_differences(result, low, high, error)
    if name == "dz":
        return [
            ("a paired or one-sample test", low / math.sqrt(error + 1), high / math.sqrt(error + 1))
        ]
    if name in ("r", "phi") and result.family == "t":
        return [("", low / math.sqrt(low * low + error), high / math.sqrt(high * high + error))]
    return []


def _mean_differences(
    result: ReportedResult, low: float, high: float, error: float
) -> list[tuple[str, float, float]]:
    """d from t: t √(1/n₁ + 1/n₂), with equal groups 2t/√N or 2t/√df; t/√n for pairs.

    Papers do not say whether their d carries the small-sample factor (about 1 - 3/(4 df - 1)), so
    either passes.
    """
    shrunk = 1 - 3 / (4 * error - 1) if error > 1 else 0.5
    if len(result.n) == 2:
        scale = math.sqrt(1 / result.n[0] + 1 / result.n[1])
        two = (low * scale * shrunk, high * scale)
    else:
        scale = 2 / math.sqrt(error + 2)
        two = (low * scale * shrunk, high * 2 / math.sqrt(error))
        if error != int(error):  # Welch's df may lie far below n - 2, down to the smaller n - 1
            two = (low / math.sqrt(error + 1) * shrunk, two[1])
    n = error + 1
    pairs = (low / math.sqrt(n) * shrunk, high / math.sqrt(error))
    return [("two groups", *two), ("a paired or one-sample test", *pairs)]


def _variance_shares(
    name: str, low: float, high: float, df1: float, df2: float
) -> list[tuple[str, float, float]]:
    """Partial η² = df₁F/(df₁F+df₂); ε² and ω² with F - 1 above; plain η² is at most the partial."""

    def share(f: float, extra: float, less: float) -> float:
        return df1 * (f - less) / (df1 * f + df2 + extra)

    if name == "partial-eta2":
        return [("", share(low, 0, 0), share(high, 0, 0))]
    if name in ("eta2", "generalized-eta2"):
        return [("", 0.0, share(high, 0, 0))]
    if name == "partial-omega2":
        return [("", share(low, 1, 1), share(high, 1, 1))]
    if name in ("epsilon2", "partial-epsilon2"):
        return [("", share(low, 0, 1), share(high, 0, 1))]
    return []
