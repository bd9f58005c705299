"""The common records of the synthesis: one for every estimator, one for every diagnostic."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Literal, TypeAlias

from netsize.numerics.grid import GridDistribution

__all__ = ["Diagnostic", "Estimate", "Status", "number_of_results", "plain"]

Status: TypeAlias = Literal[
    "fine", "at a boundary", "too few results", "did not converge", "does not apply"
]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Estimate:
    """What one estimator says about the mean effect, everything on the pooling metric.

    Attributes
    ----------
    key : kebab-case name used by options and JSON. label : how tables call it.
    estimate, se : the value and its standard error; None where there is none.
    low, high, level : interval at confidence `level`; ±inf where a side has no finite end, None
        where there is no interval.
    tau2 : between-study variance, None for estimators without one.
    used : number of results behind the value (composites of one sample count as one).
    status, reason : how it went, and why or with what caveat, in words.
    distribution : confidence distribution of the mean effect for planning, None without one. It
        does not contain τ²; the effect of a new study is wider by that.
    """

    key: str
    label: str
    estimate: float | None
    se: float | None = None
    low: float | None = None
    high: float | None = None
    level: float
    tau2: float | None = None
    used: int
    status: Status = "fine"
    reason: str = ""
    distribution: GridDistribution | None = None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types; infinite and missing numbers are None."""
        return {
            "key": self.key,
            "label": self.label,
            "estimate": plain(self.estimate),
            "se": plain(self.se),
            "low": plain(self.low),
            "high": plain(self.high),
            "tau2": plain(self.tau2),
            "used": self.used,
            "status": self.status,
            "reason": self.reason,
        }


@dataclass(frozen=True, slots=True, kw_only=True)
class Diagnostic:
    """One test for signs of selective publication.

    Attributes
    ----------
    key, label : as in `Estimate`. used : number of results behind it.
    statistic, symbol : the test statistic and what it is called; None where it cannot be computed.
    p : its p-value.
    status, reason : how it went, and why, in words.
    finding : what came out, in a sentence. limits : what a test of this kind can and cannot show
        at this number of results.
    """

    key: str
    label: str
    used: int
    statistic: float | None = None
    symbol: str = ""
    p: float | None = None
    status: Status = "fine"
    reason: str = ""
    finding: str = ""
    limits: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {
            "key": self.key,
            "label": self.label,
            "used": self.used,
            "statistic": plain(self.statistic),
            "symbol": self.symbol,
            "p": plain(self.p),
            "status": self.status,
            "reason": self.reason,
            "finding": self.finding,
            "limits": self.limits,
        }


def plain(value: float | None) -> float | None:
    """The number for JSON: None for a missing, infinite or undefined one."""
    return float(value) if value is not None and math.isfinite(value) else None


def number_of_results(number: int, kind: str = "") -> str:
    """In words: "1 result", "5 significant results", "no result"."""
    amount = "no" if number == 0 else str(number)
    noun = "result" if number <= 1 else "results"
    return " ".join(part for part in (amount, kind, noun) if part)
