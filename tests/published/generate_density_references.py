"""Reference values of the noncentral laws at 40 digits, from their definitions.

    python tests/published/generate_density_references.py

writes density_references.csv beside this file (about ten minutes). Nothing of netsize is used.

t     T = (Z + δ)/S with S² chi-square on ν over ν: densities and tails as integrals over S.
chi2  Poisson mixture of central chi-squares: λ/2 sets the mean of the extra pairs of df.
f     Poisson mixture of central F (through the incomplete beta function).
r     Fisher's (1915) integral ∫ dw/(cosh w - ρr)^{n-1} for the density; tails by integrating it.
limit the noncentrality (ρ for r) at which the lower tail equals `probability`.
"""

from __future__ import annotations

import csv
import itertools
import math
from collections.abc import Callable
from pathlib import Path

import mpmath as mp

mp.mp.dps = 40
OUT = Path(__file__).with_name("density_references.csv")


def around_mode(log_f: Callable, low: float, high: float) -> mp.mpf:
    """∫ exp(log_f) over (low, high) for a log-concave integrand, in pieces around its mode."""
    a, b = mp.mpf(low), mp.mpf(high)
    for _ in range(200):  # golden section
        c, d = (
            b - (b - a) * mp.mpf("0.6180339887498949"),
            a + (b - a) * mp.mpf("0.6180339887498949"),
        )
        if log_f(c) < log_f(d):
            a = c
        else:
            b = d
        if b - a < mp.mpf(10) ** -15 * (1 + abs(b)):
            break
    mode = (a + b) / 2
    top = log_f(mode)
    reach = []
    for end, sign in ((mp.mpf(low), -1), (mp.mpf(high), 1)):
        step = mp.mpf(10) ** -12 * (1 + abs(mode))
        while sign * (end - (mode + sign * step)) > 0 and log_f(mode + sign * step) > top - 110:
            step *= 2
        reach.append(end if sign * (end - (mode + sign * step)) <= 0 else mode + sign * step)
    shares = [mp.mpf(x) for x in ("0", "0.02", "0.06", "0.15", "0.3", "0.6", "1")]
    left = [mode - (mode - reach[0]) * s for s in reversed(shares)]
    right = [mode + (reach[1] - mode) * s for s in shares[1:]]
    return mp.exp(top) * mp.quad(lambda s: mp.exp(log_f(s) - top), left + right)


# --- noncentral t ---


def log_chi(s: mp.mpf, nu: mp.mpf) -> mp.mpf:
    """Log-density of S = √(V/ν)."""
    return (
        mp.log(2) + nu / 2 * mp.log(nu / 2) - mp.loggamma(nu / 2)
        + (nu - 1) * mp.log(s) - nu * s * s / 2
    )  # fmt: skip


def span(nu: mp.mpf) -> tuple[float, float]:
    width = 15 / math.sqrt(2 * nu)
    return max(1 - width, 1e-30), 1 + width + 12 / math.sqrt(nu)


def t_density(t, nu, delta):
    t, nu, delta = mp.mpf(t), mp.mpf(nu), mp.mpf(delta)

    def log_f(s):
        return log_chi(s, nu) + mp.log(s) - (t * s - delta) ** 2 / 2 - mp.log(2 * mp.pi) / 2

    low, high = (
        1e-30,
        60 / math.sqrt(nu) + 2 + (abs(float(delta)) + 20) / (abs(float(t)) + math.sqrt(nu)),
    )
    return around_mode(log_f, low, high)


def log_ncdf(x):
    if x > -10:
        return mp.log(mp.ncdf(x))
    return mp.log(mp.erfc(-x / mp.sqrt(2)) / 2)


def t_lower(t, nu, delta):
    t, nu, delta = mp.mpf(t), mp.mpf(nu), mp.mpf(delta)

    def log_f(s):
        return log_chi(s, nu) + log_ncdf(t * s - delta)

    return around_mode(log_f, 1e-30, 60 / math.sqrt(nu) + 3)


# --- Poisson mixtures ---


def mixture(ncp, first: Callable, step: Callable):
    """Σ Poisson(j; λ/2) × tail(j): `first` the upper tail at j = 0, `step(j)` its growth to j + 1.

    Returns (lower, upper); the lower tails are complements at 90 digits.
    """
    with mp.workdps(90):
        half = mp.mpf(ncp) / 2
        weight, upper = mp.exp(-half), first()
        total_upper, total_lower = weight * upper, weight * (1 - upper)
        j = 0
        while half > 0:
            upper += step(j)
            j += 1
            weight *= half / j
            total_upper += weight * upper
            total_lower += weight * (1 - upper)
            if j > half and weight * upper < mp.mpf(10) ** -45 * total_upper:
                break
        return +total_lower, +total_upper


def chi2_tails(x, nu, ncp):
    with mp.workdps(90):
        a, y = mp.mpf(nu) / 2, mp.mpf(x) / 2
        return mixture(
            ncp,
            lambda: mp.gammainc(a, y, mp.inf, regularized=True),
            lambda j: mp.exp((a + j) * mp.log(y) - y - mp.loggamma(a + j + 1)),
        )


def chi2_log_density(x, nu, ncp):
    x, nu, ncp = mp.mpf(x), mp.mpf(nu), mp.mpf(ncp)
    central = (nu / 2 - 1) * mp.log(x / 2) - x / 2 - mp.log(2) - mp.loggamma(nu / 2)
    return central - ncp / 2 + mp.log(positive_sum(None, nu / 2, ncp * x / 4))


def f_tails(f, nu1, nu2, ncp):
    with mp.workdps(90):
        a, b = mp.mpf(nu1) / 2, mp.mpf(nu2) / 2
        y = a * mp.mpf(f) / (a * mp.mpf(f) + b)
        return mixture(
            ncp,
            lambda: mp.betainc(b, a, 0, 1 - y, regularized=True),
            lambda j: mp.exp(
                (a + j) * mp.log(y) + b * mp.log(1 - y) - mp.log(a + j)
                - mp.loggamma(a + j) - mp.loggamma(b) + mp.loggamma(a + b + j)
            ),
        )  # fmt: skip


def f_log_density(f, nu1, nu2, ncp):
    f, a, b, ncp = mp.mpf(f), mp.mpf(nu1) / 2, mp.mpf(nu2) / 2, mp.mpf(ncp)
    y = a * f / (a * f + b)
    central = (
        a * mp.log(y) + b * mp.log(1 - y) - mp.log(f)
        - mp.loggamma(a) - mp.loggamma(b) + mp.loggamma(a + b)
    )  # fmt: skip
    return central - ncp / 2 + mp.log(positive_sum(a + b, a, ncp * y / 2))


def positive_sum(a, b, z):
    """Σ (a)ⱼ zʲ/((b)ⱼ j!), without (a)ⱼ where a is None, from its largest term outwards."""
    if z == 0:
        return mp.mpf(1)

    def ratio(j):
        return (1 if a is None else a + j) * z / ((b + j) * (j + 1))

    if a is None:
        mode = (-b + mp.sqrt(b * b + 4 * z)) / 2
    else:
        mode = (z - b + mp.sqrt((z - b) ** 2 + 4 * z * a)) / 2
    start = int(mp.floor(mode))
    log_top = start * mp.log(z) - mp.loggamma(b + start) + mp.loggamma(b) - mp.loggamma(start + 1)
    if a is not None:
        log_top += mp.loggamma(a + start) - mp.loggamma(a)
    total = term = mp.mpf(1)
    j = start
    while term > mp.mpf(10) ** -45 or j < start + 5:
        term *= ratio(j)
        j += 1
        total += term
    term, j = mp.mpf(1), start
    while j > 0 and term > mp.mpf(10) ** -45:
        j -= 1
        term /= ratio(j)
        total += term
    return mp.exp(log_top) * total


# --- correlation ---


def r_density(r, n, rho):
    r, n, rho = mp.mpf(r), mp.mpf(n), mp.mpf(rho)
    # cosh w - ρr = (1 - ρr) + 2 sinh²(w/2): the first w at which the integrand is down by e^-110
    end = 2 * mp.asinh(mp.sqrt((1 - rho * r) * mp.expm1(110 / (n - 1)) / 2))
    points = [end * s for s in (0, mp.mpf(1) / 16, mp.mpf(1) / 8, mp.mpf(1) / 4, mp.mpf(1) / 2, 1)]
    integral = mp.quad(
        lambda w: mp.exp(-(n - 1) * mp.log1p(2 * mp.sinh(w / 2) ** 2 / (1 - rho * r))), points
    )
    log_rest = (
        (n - 1) / 2 * mp.log((1 - rho) * (1 + rho))
        + (n - 4) / 2 * mp.log((1 - r) * (1 + r))
        - (n - 1) * mp.log(1 - rho * r)
    )
    return (n - 2) / mp.pi * mp.exp(log_rest) * integral


def half_half(c, x):
    """₂F₁(½, ½; c; x); for large c by its own series, which mpmath is slow to choose."""
    if c < 20:
        return mp.hyp2f1(0.5, 0.5, c, x)
    total = term = mp.mpf(1)
    k = 0
    while term > mp.mpf(10) ** -42:
        term *= (k + mp.mpf(1) / 2) ** 2 / ((c + k) * (k + 1)) * x
        total += term
        k += 1
    return total


def r_lower(r, n, rho):
    """Integrates Hotelling's form of the density over z = artanh r (Fisher's is too slow here)."""
    n, rho = mp.mpf(n), mp.mpf(rho)
    z, theta = mp.atanh(mp.mpf(r)), mp.atanh(rho)
    log_constant = (
        mp.log(n - 2) - mp.log(2 * mp.pi) / 2 + mp.loggamma(n - 1) - mp.loggamma(n - mp.mpf(1) / 2)
    )

    def height(u):
        return mp.exp(
            log_constant
            + (mp.log(mp.cosh(u)) - mp.log(mp.cosh(theta))) / 2
            - (n - mp.mpf(3) / 2) * mp.log(mp.cosh(u - theta))
        ) * half_half(n - mp.mpf(1) / 2, (1 + rho * mp.tanh(u)) / 2)

    reach = mp.acosh(mp.exp(60 / (n - 2)))
    points = sorted(
        {z, *(z - reach * s for s in (1, 0.5, 0.25, 0.1, 0.03)), *([theta] if theta < z else [])}
    )
    return mp.quad(height, points)


# --- the table ---


def rows():
    ts, deltas = (-100, -4, -0.3, 0, 2, 9.5, 100), (-60, -7, -0.5, 0, 1.3, 12, 60)
    for nu, t, delta in itertools.product((1, 2, 3, 8, 38, 500, 20000, 10**6), ts, deltas):
        yield "t", "log_density", t, nu, "", delta, mp.log(t_density(t, nu, delta))
    for nu, t, delta in itertools.product((1, 2, 8, 38, 500, 10**6), (-4, 0, 2, 9.5, 60), deltas):
        for name, value in (
            ("lower_tail", t_lower(t, nu, delta)),
            ("upper_tail", t_lower(-t, nu, -delta)),
        ):
            yield "t", name, t, nu, "", delta, value
    for nu, ncp in itertools.product(
        (1, 1.4, 2, 3, 50, 1000, 10**6), (0, 1e-6, 0.3, 20, 150, 10**4)
    ):
        for z in (-3, -1, 0, 2, 8):
            x = float(nu + ncp + z * math.sqrt(2 * (nu + 2 * ncp)))
            x = x if x > 0 else 0.01 * float(nu)
            yield "chi2", "log_density", x, nu, "", ncp, chi2_log_density(x, nu, ncp)
            if nu <= 1000 and ncp <= 150:
                lower, upper = chi2_tails(x, nu, ncp)
                yield "chi2", "lower_tail", x, nu, "", ncp, lower
                yield "chi2", "upper_tail", x, nu, "", ncp, upper
    for nu1, nu2 in itertools.product((1, 1.4, 2, 3, 40, 10**6), (1, 2, 3, 57, 1000, 10**6)):
        for ncp, q in itertools.product((0, 1e-6, 3, 150, 10**4), (0.05, 0.6, 1, 3)):
            f = float(q * (nu1 + ncp) / nu1)
            yield "f", "log_density", f, nu1, nu2, ncp, f_log_density(f, nu1, nu2, ncp)
            if nu1 <= 40 and nu2 <= 1000 and ncp <= 150:
                lower, upper = f_tails(f, nu1, nu2, ncp)
                yield "f", "lower_tail", f, nu1, nu2, ncp, lower
                yield "f", "upper_tail", f, nu1, nu2, ncp, upper
    rhos = (-0.999999, -0.7, 0, 0.005, 0.31, 0.95, 0.9999)
    for n, rho, z in itertools.product((3, 4, 5, 12, 50, 1000, 10**6), rhos, (-6, -2, 0, 0.7, 3)):
        r = math.tanh(math.atanh(rho) + z / math.sqrt(n - 2))
        yield "r", "log_density", r, n, "", rho, mp.log(r_density(r, n, rho))
    for n, rho, z in itertools.product((3, 5, 50, 10**6), (-0.999, 0, 0.31, 0.9999), (-6, -1, 0.7)):
        r = math.tanh(math.atanh(rho) + z / math.sqrt(n - 2))
        yield "r", "lower_tail", r, n, "", rho, r_lower(r, n, rho)
    yield from limits()


def limits():
    """Roots of the tails above, to 20 digits; 0 where no noncentrality agrees."""
    for t, nu, p in ((2.31, 38, 0.975), (2.31, 38, 0.025), (-0.4, 1, 0.975), (-0.4, 1, 0.025),
                     (40, 3, 0.975), (12, 200, 0.005), (0, 10**6, 0.9)):  # fmt: skip
        root = mp.findroot(
            lambda d, t=t, nu=nu, p=p: t_lower(t, nu, d) - p, (t - 1, t + 1), tol=1e-50
        )
        yield "t", f"limit {p}", t, nu, "", "", root
    f_cases = (
        (5, 2, 57, 0.95),
        (5, 2, 57, 0.05),
        (0.05, 3, 40, 0.025),
        (1.2, 3, 40, 0.95),
        (11.221, 4, 50, 0.95),
        (30, 1, 3, 0.025),
        (2, 20, 1000, 0.995),
    )
    for f, nu1, nu2, p in f_cases:
        yield (
            "f",
            f"limit {p}",
            f,
            nu1,
            nu2,
            "",
            positive_root(lambda ncp, f=f, a=nu1, b=nu2: f_tails(f, a, b, ncp)[0], p, nu1 * f),
        )
    for x, nu, p in (
        (8, 3, 0.95),
        (8, 3, 0.025),
        (0.1, 5, 0.025),
        (40, 1, 0.975),
        (900, 800, 0.025),
    ):
        yield (
            "chi2",
            f"limit {p}",
            x,
            nu,
            "",
            "",
            positive_root(lambda ncp, x=x, nu=nu: chi2_tails(x, nu, ncp)[0], p, x),
        )
    for r, n, p in ((0.31, 50, 0.975), (0.31, 50, 0.025), (0.9, 5, 0.975), (-0.5, 4, 0.025)):
        guess = math.tanh(math.atanh(r) - (1.9 if p > 0.5 else -1.9) / math.sqrt(n - 2))
        root = mp.findroot(
            lambda c, r=r, n=n, p=p: r_lower(r, n, c) - p, (guess, (guess + r) / 2), tol=1e-40
        )
        yield "r", f"limit {p}", r, n, "", "", root


def positive_root(lower: Callable, p: float, scale: float):
    """The λ ≥ 0 with lower(λ) = p, by bisection; 0 where lower(0) < p."""
    if lower(0) <= p:
        return mp.mpf(0)
    a, b = mp.mpf(0), mp.mpf(scale) * 2 + 50
    while lower(b) > p:
        b *= 2
    for _ in range(70):
        middle = (a + b) / 2
        a, b = (middle, b) if lower(middle) > p else (a, middle)
    return (a + b) / 2


def main() -> None:
    with OUT.open("w", newline="") as file:
        file.write("# 40-digit arithmetic from the definitions: generate_density_references.py\n")
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(("law", "quantity", "x", "df1", "df2", "ncp", "value"))
        for *head, value in rows():
            writer.writerow(
                (*(repr(h) if isinstance(h, float) else h for h in head), mp.nstr(value, 20))
            )


if __name__ == "__main__":
    main()
