"""2×2 tables of counts and odds ratios."""

from __future__ import annotations

import math

from netsize.effect_sizes.families.ready import error_from_interval
from netsize.effect_sizes.forms.normal import EstimateForm
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_counts", "from_odds_ratio"]

_KIND = "2×2 tables and odds ratios"


def from_counts(result: ReportedResult, settings: Settings) -> EstimateForm:
    """Events of n in each of two groups: log odds ratio, variance by Woolf (1955)."""
    del settings
    if len(result.counts) != 2:
        raise EvidenceError(f"two groups of counts are expected, and {len(result.counts)} given")
    cells: list[float] = []
    for group in result.counts:
        if not (group.n > 0 and 0 <= group.events <= group.n):
            raise EvidenceError(f"{group.events} events of {group.n} participants are impossible")
        cells += [group.events, group.n - group.events]
    notes = [f"odds of the first group over the second{_sign_note(result)}"]
    a, b, c, d = cells
    if a + c == 0 or b + d == 0:
        raise EvidenceError("all participants have the same outcome: there is no odds ratio")
    if min(cells) == 0:
        a, b, c, d = (x + 0.5 for x in cells)
        notes.append("½ added to every cell because one is 0 (Haldane 1956)")
    first, second = (g.n for g in result.counts)
    risk = _sign(result) * math.log((a / (a + b)) / (c / (c + d)))
    return EstimateForm(
        result=result,
        value=_sign(result) * math.log(a * d / (b * c)),
        standard_error=math.sqrt(1 / a + 1 / b + 1 / c + 1 / d),
        home="log-ratio",
        kind=_KIND,
        n=first + second,
        groups=(first, second),
        logistic=True,
        others=(("log_risk_ratio", risk), ("phi", _sign(result) * _phi(*cells))),
        assumptions=tuple(notes),
    )


def from_odds_ratio(result: ReportedResult, settings: Settings) -> EstimateForm:
    """An odds ratio with an interval, or with the standard error of its logarithm."""
    del settings
    if result.value is None or result.relation != "=" or not result.value > 0:
        raise EvidenceError("an odds ratio must be a number above 0")
    log_odds = math.log(result.value)
    error, notes = error_from_interval(result, log_odds, logarithmic=True)
    n = sum(result.n)
    return EstimateForm(
        result=result,
        value=_sign(result) * log_odds,
        standard_error=error,
        home="log-ratio",
        kind=_KIND,
        n=n,
        groups=result.n if len(result.n) == 2 else (n,) if n else (),
        logistic=True,
        others=(("odds_ratio", result.value),),
        assumptions=(*notes, f"odds ratio above 1 is the predicted direction{_sign_note(result)}"),
    )


def _sign(result: ReportedResult) -> int:
    return result.direction


def _sign_note(result: ReportedResult) -> str:
    return "" if result.direction_origin == "tag" else "; [against] turns it round"


def _phi(a: float, b: float, c: float, d: float) -> float:
    return (a * d - b * c) / math.sqrt((a + b) * (c + d) * (a + c) * (b + d))
