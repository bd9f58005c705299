"""How fast many effects are solved together; ratios are reported, never asserted.

python -m pytest tests/bench/test_bench_sizing.py --benchmark-enable
"""

from __future__ import annotations

import time

import numpy as np
import pytest
from statsmodels.stats.power import TTestIndPower

from netsize.sizing import solve

_EFFECTS = np.linspace(0.05, 2, 10_000)


def test_ten_thousand_two_group_effects(benchmark: pytest.FixtureRequest) -> None:
    """Identical integers to statsmodels' solver, and the ratio of the times per effect."""
    found = benchmark(solve, "two-groups", effect=_EFFECTS, power=0.8)
    start = time.perf_counter()
    for _ in range(3):
        solve("two-groups", effect=_EFFECTS, power=0.8)
    ours = (time.perf_counter() - start) / 3 / _EFFECTS.size
    some = np.arange(25, _EFFECTS.size, 199)
    solver = TTestIndPower()
    start = time.perf_counter()
    theirs = [solver.solve_power(effect_size=_EFFECTS[i], power=0.8, alpha=0.05) for i in some]
    each = (time.perf_counter() - start) / some.size
    np.testing.assert_array_equal(found.n_per_group[some, 0], np.maximum(np.ceil(theirs), 2))
    benchmark.extra_info["statsmodels / netsize, per effect"] = round(each / ours)
    print(f"\n{ours * 1e6:.1f} µs an effect; {each / ours:.0f} times as fast as a solver in a loop")


@pytest.mark.parametrize(
    ("design", "options"),
    [("anova", {"groups": 4}), ("correlation", {}), ("contingency", {"df1": 3})],
)
def test_a_thousand_effects_of_other_designs(
    benchmark: pytest.FixtureRequest, design: str, options: dict[str, int]
) -> None:
    effects = np.linspace(0.05, 0.9, 1000)
    assert benchmark(solve, design, effect=effects, power=0.8, **options).finite.all()
