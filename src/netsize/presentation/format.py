"""Numbers as people read them: the one place where values become text.

Prose, tables, figures and pages all call these, so one number never appears in two shapes.
"""

from __future__ import annotations

import math

__all__ = [
    "MISSING",
    "bayes_factor",
    "count",
    "counts",
    "effect",
    "factor",
    "interval",
    "number",
    "ordinal",
    "p_limit",
    "p_value",
    "percent",
    "probability",
    "stated",
    "tick",
]

MISSING = "-"


def effect(value: float | None) -> str:
    """An effect size or a bound of one: two decimals, three below 0.1 in size; ±∞ as words."""
    if value is None or math.isnan(value):
        return MISSING
    if math.isinf(value):
        return "-inf" if value < 0 else "inf"
    digits = 2 if abs(value) >= 0.0995 or value == 0 else 3
    return _signless_zero(f"{value:.{digits}f}")


def interval(low: float | None, high: float | None) -> str:
    """Two bounds in brackets; a bound that does not exist is a dash."""
    if low is None and high is None:
        return MISSING
    return f"[{effect(low)}, {effect(high)}]"


def probability(value: float | None) -> str:
    """A probability to two decimals; never a rounded 0 or 1."""
    if value is None or math.isnan(value):
        return MISSING
    if 0 < value < 0.005:
        return "<.01"
    if 0.995 <= value < 1:
        return ">.99"
    return f"{value:.2f}".removeprefix("0") if value < 1 else "1"


def stated(value: float | None) -> str:
    """A probability with its relation, to stand after a name: "= .13", "< .01"."""
    text = probability(value)
    return f"{text[0]} {text[1:]}" if text[0] in "<>" else f"= {text}"


def percent(value: float) -> str:
    """A probability as whole per cent, for sentences."""
    if 0 < value < 0.005:
        return "less than 1%"
    if 0.995 <= value < 1:
        return "more than 99%"
    return f"{value:.0%}"


def p_value(value: float | None) -> str:
    """A p-value to three decimals, "<.001" below."""
    if value is None or math.isnan(value):
        return MISSING
    if value < 0.0005:
        return "<.001"
    return f"{value:.3f}".removeprefix("0") if value < 0.9995 else "1"


def count(value: int | None) -> str:
    """A number of participants with thousands parted by commas."""
    return MISSING if value is None else f"{value:,}"


def counts(values: list[int] | tuple[int, ...] | None) -> str:
    """Group sizes: one number where they are equal, else joined by "+"."""
    if values is None:
        return MISSING
    if len(set(values)) == 1:
        return count(values[0])
    return " + ".join(count(v) for v in values)


def factor(value: float | None) -> str:
    """How many times as large: one decimal."""
    return MISSING if value is None or not math.isfinite(value) else f"{value:,.1f}"


def bayes_factor(log_value: float) -> str:
    """A Bayes factor from its natural logarithm: two figures, bounded at a million either way."""
    if log_value > math.log(1e6):
        return "over 1,000,000"
    if log_value < -math.log(1e6):
        return "under 1/1,000,000"
    value = math.exp(log_value)
    return f"{value:,.0f}" if value >= 99.5 else f"{value:.2g}"


def ordinal(value: float) -> str:
    """20 → "20th"; fractions keep their digits: 2.5 → "2.5th"."""
    number = round(value, 6)
    text = f"{number:g}"
    endings = {1: "st", 2: "nd", 3: "rd"}
    whole = int(number)
    plain = number != whole or whole % 100 in (11, 12, 13)
    return text + ("th" if plain else endings.get(whole % 10, "th"))


def tick(value: float) -> str:
    """A round number on an axis: as few digits as it needs; thousands parted by commas."""
    rounded = round(value, 9)
    return _signless_zero(f"{rounded:,.0f}" if abs(rounded) >= 1000 else f"{rounded:g}")


def p_limit(value: float) -> str:
    """A significance level as it is written: .05."""
    return f"{value:.6g}".removeprefix("0")


def number(value: float | None, digits: int = 2) -> str:
    """Any other number (a test statistic, a cost) with commas and fixed decimals."""
    if value is None or not math.isfinite(value):
        return MISSING
    return _signless_zero(f"{value:,.{digits}f}")


def _signless_zero(text: str) -> str:
    return text.removeprefix("-") if float(text.replace(",", "")) == 0 else text
