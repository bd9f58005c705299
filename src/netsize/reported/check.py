"""The arithmetic check: do the printed numbers of one result agree with each other?

Every printed number stands for the range that rounds to it. p is recomputed over that range of the
statistic and compared with the range of the printed p; a difference that rounding explains is none.
Nothing is repaired: a finding says what disagrees and what would agree (Bakker & Wicherts 2011).
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from netsize.reported.implied import Range, df_of, effect_candidates, p_range, rounding_range
from netsize.reported.records import Printed, ReportedResult
from netsize.reported.summaries import counts_chi_squares, counts_ratio, means_t

__all__ = ["Finding", "FindingKind", "check"]

FindingKind: TypeAlias = Literal["p", "effect", "df", "means", "counts"]

_USUAL_CUT = 0.05
_TINY = 1e-12


@dataclass(frozen=True, slots=True)
class Finding:
    """One disagreement.

    Attributes
    ----------
    kind : "p" (p against its statistic), "effect" (printed effect size against the statistic),
        "df" (degrees of freedom against numbers of participants), "means" (means and SDs against
        the statistic), "counts" (a printed ratio or chi-square against the counts).
    message : what disagrees and what would agree, in words.
    changes_significance : True where printed and recomputed p lie on opposite sides of the
        paper's significance level.
    """

    kind: FindingKind
    message: str
    changes_significance: bool = False

    def to_dict(self) -> dict[str, object]:
        """Plain JSON types under the field names."""
        return {
            "kind": self.kind,
            "message": self.message,
            "changes_significance": self.changes_significance,
        }


def check(result: ReportedResult) -> tuple[Finding, ...]:
    """Every disagreement among the printed numbers of `result`; () where all agree."""
    return tuple(
        finding
        for part in (_check_p, _check_effects, _check_df, _check_means, _check_counts)
        for finding in part(result)
    )


# --- p against the statistic ---------------------------------------------------------------------


def _check_p(result: ReportedResult) -> Iterator[Finding]:
    if result.p is None or result.family == "p":
        return
    implied = p_range(result)
    if implied is None or _agree(implied, result.p):
        return
    cut = result.cut or _USUAL_CUT
    printed = rounding_range(result.p)
    changes = _side(implied, cut) * _side(printed, cut) < 0
    statistic = _statistic_text(result)
    message = (
        f"p is printed as {_number(result.p)}, but {statistic} gives p {_range(implied)}"
        f"{' (one-tailed)' if result.tails == 1 else ''}; {_what_would_agree(result, implied, cut)}"
    )
    if changes:
        message += f". The two lie on opposite sides of {_plain(cut)}"
    yield Finding("p", message, changes)


def _agree(implied: Range, printed: Printed) -> bool:
    low, high = rounding_range(printed)
    slack = 1e-9 + (5e-13 if printed.relation == "=" else 0.0)
    if printed.relation == "=" and printed.value == 0:
        low = -math.inf
    return implied[0] <= high + slack and implied[1] >= low - slack


def _side(ends: Range, cut: float) -> int:
    """1 where the whole range is significant, -1 where none is, 0 across the level."""
    return 1 if ends[1] <= cut + _TINY else -1 if ends[0] >= cut - _TINY else 0


def _what_would_agree(result: ReportedResult, implied: Range, cut: float) -> str:
    assert result.p is not None
    found: list[str] = []
    slipped = Printed(result.p.value / 10, result.p.relation, (result.p.decimals or 0) + 1)
    exact = result.p.relation == "="
    if exact and result.p.value > 0 and _agree(implied, slipped):
        found.append(f"p {_number(slipped, sign=True)}, a slipped decimal point,")
    flipped = p_range(replace(result, direction=-result.direction))
    if result.tails == 1 and flipped is not None and _agree(flipped, result.p):
        found.append("the other direction")
    other = _with_tails(result, 1 if result.tails == 2 else 2)
    if other is not None and _agree(other, result.p):
        found.append("a one-tailed test" if result.tails == 2 else "a two-tailed test")
    for df in _df_typos(result) if exact else ():
        with_df = p_range(result, df)
        if with_df is not None and _agree(with_df, result.p):
            found.append(f"df = {', '.join(_plain(d) for d in df)} instead")
            break
    if result.p.relation == "=" and result.p.value == cut:
        found.append(f"p < {_plain(cut)}" if _side(implied, cut) > 0 else "")
    found = [f for f in found if f]
    return f"{' or '.join(found)} would agree" if found else "nothing simple would make them agree"


def _with_tails(result: ReportedResult, tails: Literal[1, 2]) -> Range | None:
    if result.family == "chi2" and result.df != (1.0,):
        return None
    if result.family == "f" and result.df[:1] != (1.0,):
        return None
    return p_range(replace(result, tails=tails))


def _df_typos(result: ReportedResult) -> Iterator[tuple[float, ...]]:
    """Slips of one key in the df: n for df, a lost, doubled, extra or swapped digit."""
    df = df_of(result)
    if not df:
        return
    if result.family == "r":
        yield (df[0] - 2,) if df[0] > 2 else df
    if len(df) == 2:
        yield df[1], df[0]
    last = df[-1]
    if last != int(last):
        return
    digits = str(int(last))
    slips = [digits[:i] + digits[i + 1 :] for i in range(len(digits))]
    slips += [
        digits[:i] + digits[i + 1] + digits[i] + digits[i + 2 :] for i in range(len(digits) - 1)
    ]
    slips += [digits[:i] + d + digits[i:] for i in range(len(digits) + 1) for d in "0123456789"]
    for slip in slips:
        if slip and slip[0] != "0" and slip != digits:
            yield (*df[:-1], float(slip))


# --- printed effect sizes against the statistic --------------------------------------------------


def _check_effects(result: ReportedResult) -> Iterator[Finding]:
    if result.family not in ("t", "f") or result.value is None or result.relation != "=":
        return
    if not result.df:
        return
    for name, printed in result.also:
        candidates = effect_candidates(result, name)
        if not candidates or printed.relation != "=":
            continue
        slack = 0.5 * 10.0 ** -(printed.decimals if printed.decimals is not None else 2)
        matches = [
            what for what, low, high in candidates
            if low - slack - 1e-9 <= abs(printed.value) <= high + slack + 1e-9
        ]  # fmt: skip
        expected = _expected_design(result)
        if any(expected is None or expected in what or what == "" for what in matches):
            if expected is None and matches and all("paired" in what for what in matches):
                yield Finding(
                    "effect",
                    f"{name} = {_plain(printed.value)} fits {matches[0]}; if that is the design, "
                    "mark the line [paired] or [one-sample]",
                )
            continue
        options = "; ".join(
            f"{_between(low, high)}{f' for {what}' if what else ''}"
            for what, low, high in candidates
        )
        message = (
            f"{name} is printed as {_plain(printed.value)}, but {_statistic_text(result)} "
            f"gives {options}"
        )
        if matches:
            message += f"; the printed one fits {matches[0]}"
        yield Finding("effect", message)


def _expected_design(result: ReportedResult) -> str | None:
    if result.design in ("paired", "one-sample"):
        return "paired"
    return "two groups" if result.design == "two-groups" else None


# --- df against n, means against the statistic ---------------------------------------------------


def _check_df(result: ReportedResult) -> Iterator[Finding]:
    if not result.df or not result.n:
        return
    total, df = sum(result.n), result.df[-1]
    sizes = " + ".join(str(n) for n in result.n)
    wanted = _expected_df(result, total)
    if wanted is None:
        return
    low, high, words = wanted
    if low - 1e-9 <= df <= high + 1e-9:
        return
    shown = _plain(low) if low == high else f"{_plain(low)} to {_plain(high)}"
    yield Finding("df", f"df = {_plain(df)} does not fit n = {sizes}: {words} has df = {shown}")


def _expected_df(result: ReportedResult, total: int) -> tuple[float, float, str] | None:
    if result.family == "r":
        if result.metric == "partial-r":
            return 1.0, total - 2.0, "a partial correlation"
        return total - 2.0, total - 2.0, "a correlation"
    if result.family not in ("t", "f") or (result.family == "f" and result.df[0] != 1):
        if result.family == "f":
            return (
                1.0,
                math.inf if result.design == "paired" else total - 1.0,
                "a test of that size",
            )
        return None
    if result.design in ("paired", "one-sample"):
        return total - 1.0, total - 1.0, f"a {result.design} test"
    if result.design == "correlation":
        return 1.0, total - 2.0, "a regression coefficient"
    if result.design == "two-groups" and len(result.n) == 1 and result.family == "t":
        low = total - 2.0 if result.df[-1] == int(result.df[-1]) else 1.0
        return low, total - 2.0, "a test of two groups"
    if len(result.n) == 2 and result.family == "t":
        if result.df[-1] != int(result.df[-1]):
            return min(result.n) - 1.0, total - 2.0, "Welch's test"
        return total - 2.0, total - 2.0, "a test of two groups"
    if result.df[-1] != int(result.df[-1]):
        return 1.0, total - 1.0, "a test of that size"
    # room for a few covariates beside a t, and for the cells of a factorial design behind an F
    room = 5.0 if result.family == "t" else 12.0
    return max(1.0, total - room), total - 1.0, "a test of that size"


def _check_means(result: ReportedResult) -> Iterator[Finding]:
    if result.family not in ("t", "f") or len(result.groups) != 2 or result.value is None:
        return
    if result.relation != "=" or result.design not in (None, "two-groups"):
        return
    if result.family == "f" and result.df[:1] != (1.0,):
        return
    expected = means_t(*result.groups)
    printed = math.sqrt(result.value) if result.family == "f" else abs(result.value)
    # means and SDs are rounded too: a tenth of t and a tenth of its unit covers two decimals
    slack = 0.1 * expected[0] + 0.1
    if min(abs(printed - t) for t in expected) > slack:
        symbol, shown = ("F", expected[0] ** 2) if result.family == "f" else ("t", expected[0])
        yield Finding(
            "means",
            f"{symbol} is printed as {_plain(result.value)}, "
            f"but the means and SDs give {symbol} = {shown:.2f}",
        )


def _check_counts(result: ReportedResult) -> Iterator[Finding]:
    """A ratio or chi-square printed beside counts, against what the counts give."""
    if result.family != "counts":
        return
    for name, printed in result.also:
        if printed.relation != "=":
            continue
        low, high = rounding_range(printed)
        expected: tuple[float, ...] = ()
        if name == "chi2":
            expected = counts_chi_squares(*result.counts)
        elif ratio := counts_ratio(name, *result.counts):
            expected = (ratio, 1 / ratio)
        if expected and not any(low - 1e-9 <= e <= high + 1e-9 for e in expected):
            shown = " or ".join(f"{e:.3g}" for e in expected)
            symbol = "χ²" if name == "chi2" else name
            yield Finding(
                "counts",
                f"{symbol} is printed as {_plain(printed.value)}, but the counts give {shown}",
            )


# --- words ---------------------------------------------------------------------------------------


def _statistic_text(result: ReportedResult) -> str:
    symbol = {"f": "F", "chi2": "χ²", "coefficient": "b"}.get(result.family, result.family)
    df = f"({', '.join(_plain(d) for d in result.df)})" if result.df else ""
    return f"{symbol}{df} {result.relation} {_plain(result.value or 0.0)}"


def _number(number: Printed, *, sign: bool = False) -> str:
    plain = number.decimals and (number.value == 0 or number.value >= 1e-5)
    digits = f"{number.value:.{number.decimals}f}" if plain else f"{number.value:g}"
    digits = digits.removeprefix("0") if 0 < number.value < 1 else digits
    return digits if number.relation == "=" and not sign else f"{number.relation} {digits}"


def _range(ends: Range) -> str:
    if ends[1] < 0.0005:
        low, high = (f"{end:.1e}" for end in ends)
    else:
        low, high = (f"{end:.3f}".removeprefix("0") for end in ends)
    return f"= {low}" if low == high else f"= {low} to {high}"


def _between(low: float, high: float) -> str:
    first, last = f"{low:.2f}", f"{high:.2f}"
    return first if first == last else f"{first} to {last}"


def _plain(value: float) -> str:
    return f"{value:g}"
