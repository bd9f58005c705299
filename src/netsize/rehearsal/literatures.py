"""Simulated literatures of two-group studies, printed according to their p-values."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, TypeAlias

import numpy as np
from scipy.special import stdtrit

from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array, IntArray

__all__ = ["Habit", "World", "simulate"]

Habit: TypeAlias = Literal["plain", "lenient", "stopping", "dropping"]

_LOOKS = (0.5, 0.75, 1.0)
_OUTCOME_CORRELATION = 0.5


@dataclass(frozen=True, slots=True, kw_only=True)
class World:
    """One state of the world to simulate.

    results : k printed results a literature. mean, spread : μ and τ of the true effects, as
    standardized mean differences. printing : ω, chance of printing a result that misses the bar.
    smallest, largest : group sizes, uniform. habit : what researchers do,
        "plain"     a result is printed when p < .05 as predicted, otherwise with probability ω;
        "lenient"   the bar is p < .10, while the model believes it to be .05;
        "stopping"  tested after half, three quarters and all participants, stopped once p < .05;
        "dropping"  of two outcomes correlated .5 the one with the larger t is reported.
    """

    results: int
    mean: float
    spread: float
    printing: float
    smallest: int
    largest: int
    habit: Habit = "plain"


def simulate(world: World, *, count: int, rng: np.random.Generator) -> list[list[Evidence]]:
    """`count` literatures of `world.results` printed studies each."""
    wanted = count * world.results
    t: list[Array] = []
    sizes: list[IntArray] = []
    found = 0
    while found < wanted:
        printed_t, printed_n = _conduct(world, 4 * wanted, rng)
        t.append(printed_t)
        sizes.append(printed_n)
        found += printed_t.size
    all_t, all_n = np.concatenate(t)[:wanted], np.concatenate(sizes)[:wanted]
    critical = stdtrit(2.0 * all_n - 2, 0.975)
    evidence = [
        Evidence(
            kernel="t",
            df=(2.0 * n - 2,),
            scale=float(np.sqrt(n / 2)),
            low=float(x),
            high=float(x),
            cuts=(float(c),),
            band=0 if x > c else 1,
        )
        for x, n, c in zip(all_t, all_n, critical, strict=True)
    ]
    k = world.results
    return [evidence[i * k : (i + 1) * k] for i in range(count)]


def _conduct(world: World, count: int, rng: np.random.Generator) -> tuple[Array, IntArray]:
    """Run `count` studies and keep t and group size of those that get printed."""
    n = rng.integers(world.smallest, world.largest + 1, count)
    theta = rng.normal(world.mean, world.spread, count)
    t, n = _STUDIES[world.habit](theta, n, rng)
    bar = 0.05 if world.habit == "lenient" else 0.025
    passes = t > stdtrit(2.0 * n - 2, 1 - bar)
    printed = passes | (rng.random(count) < world.printing)
    return t[printed], n[printed]


def _one_test(theta: Array, n: IntArray, rng: np.random.Generator) -> tuple[Array, IntArray]:
    df = 2.0 * n - 2
    z = rng.normal(theta * np.sqrt(n / 2), 1.0)
    return z / np.sqrt(rng.chisquare(df) / df), n


def _stopping(theta: Array, n: IntArray, rng: np.random.Generator) -> tuple[Array, IntArray]:
    """Group means and pooled sums of squares grow look by look; the first p < .05 is reported.

    The sums of squares grow independently of the means, which leaves each look's t exact and the
    joint law of the looks very nearly so.
    """
    looks = np.array([np.maximum((share * n).astype(np.int64), 2) for share in _LOOKS])
    total = np.zeros(n.size)
    squares = np.zeros(n.size)
    before = np.zeros(n.size, dtype=np.int64)
    t = np.full(n.size, np.nan)
    at = n.copy()
    for look in looks:
        added = look - before
        # increments of the difference of sums, and of the pooled variance on its 2·added df
        total = total + rng.normal(theta * added, np.sqrt(2.0 * added))
        df_added = 2.0 * added - (2 if not before.any() else 0)
        squares = squares + np.where(df_added > 0, rng.chisquare(np.maximum(df_added, 1e-9)), 0.0)
        df = 2.0 * look - 2
        now = total / look / np.sqrt(squares / df * 2 / look)
        open_ = np.isnan(t)
        stops = open_ & ((now > stdtrit(df, 0.975)) | (look == looks[-1]))
        t[stops], at[stops] = now[stops], look[stops]
        before = look
    return t, at


def _dropping(theta: Array, n: IntArray, rng: np.random.Generator) -> tuple[Array, IntArray]:
    df = 2.0 * n - 2
    shared = rng.normal(size=n.size)
    share = np.sqrt(_OUTCOME_CORRELATION)
    own = np.sqrt(1 - _OUTCOME_CORRELATION)
    outcomes = [
        (theta * np.sqrt(n / 2) + share * shared + own * rng.normal(size=n.size))
        / np.sqrt(rng.chisquare(df) / df)
        for _ in range(2)
    ]
    return np.maximum(*outcomes), n


_STUDIES: dict[str, Callable[..., tuple[Array, IntArray]]] = {
    "plain": _one_test,
    "lenient": _one_test,
    "stopping": _stopping,
    "dropping": _dropping,
}
