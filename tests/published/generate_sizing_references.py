"""High-precision powers and smallest sizes from the definitions of the distributions.

Run `python tests/published/generate_sizing_references.py` to write sizing_references.csv beside it:
for each design, effect, level and target the smallest n per group (sample) and the exact powers at
n and n-1, with mpmath at 30 digits. Nothing of netsize is used.
"""

from __future__ import annotations

import csv
from collections.abc import Callable
from functools import cache
from pathlib import Path

from mpmath import mp, mpf
from scipy.special import stdtrit

mp.dps = 30


@cache
def t_critical(tail: mpf, df: mpf) -> mpf:
    """t with P(T > t) = tail for central t = Z/S, by secants from a double-precision start."""

    def excess(t: mpf) -> mpf:
        return over_chi(df, lambda s: mp.ncdf(-t * s)) - tail

    start = mpf(float(stdtrit(float(df), 1 - float(tail))))
    return mp.findroot(
        excess, (start, start * (1 + mpf(10) ** -6)), tol=mpf(10) ** (-2 * mp.dps + 20)
    )


def over_chi(df: mpf, function: Callable[[mpf], mpf], top: mpf | None = None) -> mpf:
    """E function(S), S = √(χ²/df), or of function(S) 1(S < top)."""
    sd = 1 / mp.sqrt(2 * df)
    low, high = max(mpf(0), 1 - 14 * sd), 1 + 14 * sd + (mpf(10) if df < 4 else 0)
    if top is not None:
        high = min(high, top)
    if high <= low:
        return mpf(0)
    constant = mp.log(2) + df / 2 * mp.log(df / 2) - mp.loggamma(df / 2)

    def integrand(s: mpf) -> mpf:
        if s == 0:
            return mpf(0) if df > 1 else mp.exp(constant) * function(s)
        return mp.exp(constant + (df - 1) * mp.log(s) - df * s * s / 2) * function(s)

    if df < 10:  # the mass can sit at the very end, which tanh-sinh resolves
        return mp.quad(integrand, mp.linspace(low, high, 9))
    return mp.quadgl(integrand, mp.linspace(low, high, 5))


def t_power(df: mpf, ncp: mpf, alpha: mpf, sides: int) -> mpf:
    """P(|T| > c), or P(T > c), T = (Z + δ)/S."""
    c = t_critical(alpha / sides, df)
    power = over_chi(df, lambda s: mp.ncdf(ncp - c * s))
    return power + over_chi(df, lambda s: mp.ncdf(-ncp - c * s)) if sides == 2 else power


def equivalence_power(df: mpf, ncp: mpf, relative: mpf, alpha: mpf) -> mpf:
    """P(both one-sided tests significant), margins at ±ncp, true effect relative·ncp."""
    c = t_critical(alpha, df)
    return over_chi(
        df,
        lambda s: mp.ncdf((1 - relative) * ncp - c * s) - mp.ncdf(c * s - (1 + relative) * ncp),
        ncp / c,
    )


def poisson_mixture(ncp: mpf, tail: Callable[[int], mpf]) -> mpf:
    """Σ Poisson(j; λ/2) tail(j)."""
    mean = ncp / 2
    spread = int(mp.sqrt(mean) * 14 + 60)
    start = max(0, int(mean) - spread)
    return mp.fsum(
        mp.exp(-mean + j * mp.log(mean) - mp.loggamma(j + 1)) * tail(j)
        for j in range(start, int(mean) + spread)
    )


def solve_tail(tail: Callable[[mpf], mpf], alpha: mpf) -> mpf:
    """x with tail(x) = alpha by bisection, then secants."""
    low, high = mpf(0), mpf(1000)
    for _ in range(16):
        middle = (low + high) / 2
        low, high = (middle, high) if tail(middle) > alpha else (low, middle)
    return mp.findroot(lambda x: tail(x) - alpha, (low, high), tol=mpf(10) ** (-2 * mp.dps + 20))


def f_power(df1: mpf, df2: mpf, ncp: mpf, alpha: mpf) -> mpf:
    """P(F > c) as a Poisson mixture of beta tails."""

    def central(f: mpf, j: int = 0) -> mpf:
        x = df2 / (df2 + df1 * f)
        return mp.betainc(df2 / 2, df1 / 2 + j, 0, x, regularized=True)

    c = solve_tail(central, alpha)
    return poisson_mixture(ncp, lambda j: central(c, j))


def chi_square_power(df: mpf, ncp: mpf, alpha: mpf) -> mpf:
    """P(χ² > c) as a Poisson mixture of central tails."""

    def central(x: mpf, j: int = 0) -> mpf:
        return mp.gammainc(df / 2 + j, x / 2, mp.inf, regularized=True)

    c = solve_tail(central, alpha)
    return poisson_mixture(ncp, lambda j: central(c, j))


def correlation_power(n: mpf, rho: mpf, alpha: mpf) -> mpf:
    """P(|r| > critical) from Hotelling's (1953) density, in z = artanh r."""
    t = t_critical(alpha / 2, n - 2)
    cut, middle = mp.atanh(t / mp.sqrt(n - 2 + t * t)), mp.atanh(rho)
    constant = (n - 2) * mp.gamma(n - 1) / (mp.sqrt(2 * mp.pi) * mp.gamma(n - mpf(1) / 2))

    def density(z: mpf) -> mpf:
        r = mp.tanh(z)
        return (
            constant
            * (1 - rho * rho) ** ((n - 1) / 2)
            * (1 - r * r) ** ((n - 2) / 2)
            / (1 - rho * r) ** (n - mpf(3) / 2)
            * mp.hyp2f1(0.5, 0.5, n - mpf(1) / 2, (1 + rho * r) / 2)
        )

    end = max(cut, middle) + 14 / mp.sqrt(n - 3) + 4
    upper = mp.quad(density, mp.linspace(cut, end, 9))
    return upper + mp.quad(density, mp.linspace(-cut - 14 / mp.sqrt(n - 3) - 4, -cut, 9))


def power(design: str, n: int, effect: mpf, alpha: mpf) -> mpf:
    size = mpf(n)
    if design == "two-groups":
        return t_power(2 * size - 2, effect * mp.sqrt(size / 2), alpha, 2)
    if design == "two-groups one-sided":
        return t_power(2 * size - 2, effect * mp.sqrt(size / 2), alpha, 1)
    if design == "paired":
        return t_power(size - 1, effect * mp.sqrt(size), alpha, 2)
    if design == "anova 4":
        return f_power(mpf(3), 4 * (size - 1), 4 * size * effect**2, alpha)
    if design == "contingency 3":
        return chi_square_power(mpf(3), size * effect**2, alpha)
    if design == "correlation":
        return correlation_power(size, effect, alpha)
    if design == "equivalence .5":
        return equivalence_power(2 * size - 2, mp.sqrt(size / 2) / 2, effect * 2, alpha)
    raise ValueError(design)


LEAST = {"correlation": 4}  # others: 2


def smallest(design: str, effect: mpf, alpha: mpf, target: mpf) -> int:
    least = LEAST.get(design, 2)
    strength = abs(effect) if design != "equivalence .5" else mpf("0.5") - abs(effect)
    high = max(least, int((mp.sqrt(2) * mp.erfinv(1 - alpha) + 2) ** 2 / strength**2 / 4))
    while power(design, high, effect, alpha) < target:
        high = int(high * mpf("1.3")) + 1
    low = high
    while low >= least and power(design, low, effect, alpha) >= target:
        high, low = low, int(low * mpf("0.8"))
    low = max(low, least - 1)
    while high - low > 1:
        middle = (low + high) // 2
        if power(design, middle, effect, alpha) < target:
            low = middle
        else:
            high = middle
    return high


CASES = [
    *[
        ("two-groups", d, a, p)
        for d in ("0.2", "0.5", "0.8")
        for a in ("0.05", "0.001")
        for p in ("0.8", "0.95")
    ],
    ("two-groups", "0.005", "0.05", "0.8"),
    ("two-groups", "0.02", "0.05", "0.9"),
    ("two-groups", "5", "0.05", "0.8"),
    ("two-groups", "5", "0.000001", "0.99"),
    ("two-groups", "0.5", "0.05", "0.06"),
    *[("two-groups one-sided", d, "0.05", p) for d in ("0.3", "1.2") for p in ("0.8", "0.99")],
    *[("paired", d, a, "0.9") for d in ("0.1", "0.4", "2") for a in ("0.05", "0.01")],
    *[("anova 4", f, "0.05", p) for f in ("0.1", "0.25", "1.5") for p in ("0.8", "0.95")],
    *[("contingency 3", w, "0.01", "0.8") for w in ("0.1", "0.3", "0.9")],
    *[("correlation", r, "0.05", "0.8") for r in ("0.3", "0.5", "0.9")],
    *[("equivalence .5", d, "0.05", p) for d in ("0", "0.1", "0.3") for p in ("0.8", "0.9")],
]


def row(design: str, effect: str, alpha: str, target: str) -> list[str]:
    """Search at 15 digits, then both sides of the answer at 30."""
    mp.dps = 15
    t_critical.cache_clear()
    n = smallest(design, mpf(effect), mpf(alpha), mpf(target))
    mp.dps = 30
    t_critical.cache_clear()
    e, a, p = mpf(effect), mpf(alpha), mpf(target)
    at, before = power(design, n, e, a), None
    if n > LEAST.get(design, 2):
        before = power(design, n - 1, e, a)
        assert before < p
    assert at >= p
    shown = "" if before is None else mp.nstr(before, 17)
    return [design, effect, alpha, target, str(n), mp.nstr(at, 17), shown]


def main() -> None:
    path = Path(__file__).with_name("sizing_references.csv")
    with path.open("w", newline="") as out:
        out.write("# Written by generate_sizing_references.py (mpmath, 30 digits)\n")
        writer = csv.writer(out, lineterminator="\n")
        writer.writerow(["design", "effect", "alpha", "target", "n", "power", "power_before"])
        for case in CASES:
            writer.writerow(row(*case))
            out.flush()


if __name__ == "__main__":
    main()
