"""What was seen of a statistic: an exact value, or the interval that an inequality leaves."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import dataclass, replace

from scipy.special import betaincinv, chdtrc, chdtri, fdtrc, ndtr, ndtri, stdtr, stdtrit

from netsize.effect_sizes.rounding import band_from_printed_p
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["NullLaw", "Observed", "chi2_law", "f_law", "observe", "t_law", "z_law"]


@dataclass(frozen=True, slots=True)
class NullLaw:
    """The law of a statistic where there is no effect.

    `signed` statistics are symmetric about 0. `upper(x)` is P(X > x), `quantile(a)` the x with
    P(X > x) = a.
    """

    signed: bool
    upper: Callable[[float], float]
    quantile: Callable[[float], float]

    def p_value(self, x: float) -> float:
        """Two-sided p of a signed statistic, upper-tail p of an unsigned one."""
        return 2 * self.upper(abs(x)) if self.signed else self.upper(x)

    def critical(self, level: float, *, tails: int = 2) -> float:
        """Threshold of significance at `level` in the predicted direction."""
        return self.quantile(level / 2 if self.signed and tails == 2 else level)


def t_law(df: float) -> NullLaw:
    """Student's t on `df` degrees of freedom."""
    return NullLaw(True, lambda x: float(stdtr(df, -x)), lambda a: -float(stdtrit(df, a)))


def z_law() -> NullLaw:
    """The standard normal."""
    return NullLaw(True, lambda x: float(ndtr(-x)), lambda a: -float(ndtri(a)))


def f_law(df1: float, df2: float) -> NullLaw:
    """Central F on (`df1`, `df2`)."""

    def quantile(a: float) -> float:
        # through the beta law of df₂/(df₂ + df₁F): the library's own inverse takes the lower
        # tail and so loses a small upper one
        x = float(betaincinv(df2 / 2, df1 / 2, a))
        return df2 * (1 - x) / (df1 * x) if x > 0 else math.inf

    return NullLaw(False, lambda x: float(fdtrc(df1, df2, x)), quantile)


def chi2_law(df: float) -> NullLaw:
    """Central chi-square on `df` degrees of freedom."""
    return NullLaw(False, lambda x: float(chdtrc(df, x)), lambda a: float(chdtri(df, a)))


@dataclass(frozen=True, slots=True)
class Observed:
    """An observation of a statistic X, signed so that positive is the predicted direction.

    Attributes
    ----------
    low, high : equal for an exact value, else X is known to lie in (low, high).
    two_sided : True where low < |X| < high is known.
    cuts : thresholds of the p-bands, decreasing. p : two-sided p of an exact value, else None.
    assumptions : what reading it took for granted.
    named_band : the band that a printed p names where the rounded value leaves two.
    """

    low: float
    high: float
    two_sided: bool
    cuts: tuple[float, ...]
    p: float | None
    assumptions: tuple[str, ...]
    named_band: int | None = None

    @property
    def exact(self) -> bool:
        """Whether the statistic itself is known."""
        return self.low == self.high

    def mapped(self, function: Callable[[float], float]) -> Observed:
        """The same observation of an increasing function of X (odd, where X is signed)."""
        return replace(
            self,
            low=function(self.low),
            high=function(self.high),
            cuts=tuple(function(c) for c in self.cuts),
        )

    def squared(self) -> Observed:
        """The same observation of X², which has lost the sign."""
        if self.low < 0 < self.high:
            raise EvidenceError("a one-tailed inequality says nothing about an undirected effect")
        low, high = sorted((self.low**2, self.high**2))
        return replace(
            self, low=low, high=high, two_sided=False, cuts=tuple(c * abs(c) for c in self.cuts)
        )

    @property
    def band(self) -> int | None:
        """The p-band that holds all of it, None where it straddles a cut."""
        if self.named_band is not None:
            return self.named_band
        edges = (math.inf, *self.cuts, -math.inf)
        low = -self.high if self.two_sided else self.low
        for j, (top, bottom) in enumerate(itertools.pairwise(edges)):
            if self.exact and bottom < self.low <= top:
                return j
            if not self.exact and bottom <= low and self.high <= top:
                return j
        return None


def observe(
    result: ReportedResult, law: NullLaw, settings: Settings, value: float | None
) -> Observed:
    """Read `value` (of X, as printed) or, failing that, the p-value as an observation of X.

    An inequality and "n.s." become intervals; a p-value alone is turned back into the statistic.
    """
    levels = settings.cuts_of(result)
    cuts = tuple(law.critical(c, tails=result.tails) for c in levels)
    notes: list[str] = []
    sign = _sign(result, value) if law.signed else 1
    p = result.p
    if value is not None:
        _require_finite(value, law)
        size = abs(value)
        low, high, two_sided = {
            "=": (size, size, False),
            "<": (0.0, size, law.signed),
            ">": (size, math.inf, False),
        }[result.relation]
    elif p is not None:
        low, high, two_sided = _from_p(result, law, notes)
    else:
        raise EvidenceError("neither a value nor a p-value is given")
    if law.signed and result.direction_origin == "assumed" and not two_sided and sign > 0:
        notes.append("predicted direction assumed; [against] turns it round")
    if result.tails == 1:
        notes.append("one-tailed test: significant where its one-tailed p is below the cut")
    if sign < 0 and not two_sided:
        low, high = -high, -low
    if low < high:
        return Observed(low, high, two_sided, cuts, None, tuple(notes))
    seen = Observed(low, high, False, cuts, law.p_value(low), ())
    named = band_from_printed_p(result, low, levels, cuts) if low > 0 else None
    if named is not None and named != seen.band:
        notes.append("rounded at the edge of significance: the printed p decides its p-band")
    return replace(seen, assumptions=tuple(notes), named_band=named)


def _from_p(result: ReportedResult, law: NullLaw, notes: list[str]) -> tuple[float, float, bool]:
    p = result.p
    assert p is not None
    relation, value = p.relation, p.value
    if not 0 <= value <= 1:
        raise EvidenceError(f"p = {value:g} is not a probability")
    if value == 0:  # "p = .000": below half of the last printed digit
        relation, value = "<", 0.5 * 10.0 ** -(p.decimals or 3)
    if value == 1 and relation != "<":
        raise EvidenceError("p = 1 says nothing about the size of the effect")
    edge = law.critical(value, tails=result.tails)
    if relation == "=":
        notes.append(f"statistic recomputed from p = {value:g}, so no more precise than that")
        return edge, edge, False
    if relation == "<":
        return edge, math.inf, False
    if law.signed and result.tails == 1:
        return -math.inf, edge, False
    return 0.0, edge, law.signed


def _sign(result: ReportedResult, value: float | None) -> int:
    return -result.direction if value is not None and value < 0 else result.direction


def _require_finite(value: float, law: NullLaw) -> None:
    if not math.isfinite(value):
        raise EvidenceError(f"the statistic {value:g} is not a finite number")
    if value < 0 and not law.signed:
        raise EvidenceError(f"the statistic {value:g} cannot be negative")
