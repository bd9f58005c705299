"""How often the planning value is cautious enough, in simulated literatures.

`python -m netsize.rehearsal.calibration FILE` writes the whole table; a cell depends on its own
seed only, so any cell can be made again alone.
"""

from __future__ import annotations

import sys
from collections.abc import Sequence
from dataclasses import dataclass, fields
from itertools import product

import numpy as np

from netsize.effect_sizes.metrics import METRICS
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array, BoolArray
from netsize.rehearsal.literatures import Habit, World, simulate
from netsize.sizing.search import smallest_units
from netsize.sizing.study import Study, make_study
from netsize.synthesis.random_effects import pool_many, quantile
from netsize.synthesis.selection_averaged import fit_averaged_many
from netsize.synthesis.selection_profile import fit_profile

__all__ = ["Cell", "calibrate", "worlds"]

_METRIC = METRICS["mean-difference"]
_PERCENTILE = 0.2  # of the planning distributions: assurance 0.80
_POWER = 0.8


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """What happened in the literatures of one world.

    bias, rmse : of the median of μ given an effect. mean_cautious, new_cautious, profile_cautious,
    pooled_cautious : shares of literatures whose 20th percentile (of μ averaged, of the new study's
    effect averaged, of μ profile, of the pooled mean without correction) is at or below the true
    μ. finite : share with a finite n for the new study's effect. median_n : a group, of those;
    power : their mean power at the true μ, no finite n counted as none asked. negligible : mean
    posterior probability of a negligible effect.
    """

    bias: float
    rmse: float
    mean_cautious: float
    new_cautious: float
    profile_cautious: float
    pooled_cautious: float
    finite: float
    median_n: float
    power: float
    negligible: float


def calibrate(world: World, *, count: int, seed: Sequence[int]) -> Cell:
    """Simulate `count` literatures of a world and plan from each."""
    groups = simulate(world, count=count, rng=np.random.default_rng(seed))
    weights = np.ones(world.results)
    fits = fit_averaged_many(groups, weights=[weights] * count, metric=_METRIC)
    median = np.array([float(f.mean.quantile(0.5)) for f in fits])
    of_mean = np.array([float(f.mean.quantile(_PERCENTILE)) for f in fits])
    of_new = np.array([float(f.new_study.quantile(_PERCENTILE)) for f in fits])
    profile = np.array(
        [
            float(fit_profile(g, weights=weights, metric=_METRIC).mean.quantile(_PERCENTILE))
            for g in groups
        ]
    )
    study = make_study("two-groups")
    units, finite = _sizes(study, of_new)
    reached = study.predicted(units[finite], np.full(finite.sum(), world.mean))
    return Cell(
        bias=float(np.mean(median) - world.mean),
        rmse=float(np.sqrt(np.mean((median - world.mean) ** 2))),
        mean_cautious=float(np.mean(of_mean <= world.mean)),
        new_cautious=float(np.mean(of_new <= world.mean)),
        profile_cautious=float(np.mean(profile <= world.mean)),
        pooled_cautious=float(np.mean(_pooled_limits(groups) <= world.mean)),
        finite=float(np.mean(finite)),
        median_n=float(np.median(units[finite])) if finite.any() else float("nan"),
        power=float(np.mean(reached)) if finite.any() else float("nan"),
        negligible=float(np.mean([f.probability_negligible for f in fits])),
    )


def worlds() -> list[World]:
    """The worlds of the published table: the model's own, then three that break its assumptions."""
    plain = [
        World(results=k, mean=m, spread=s, printing=w, smallest=a, largest=b)
        for k, m, s, w, (a, b) in product(
            (1, 3, 8, 20),
            (0.0, 0.2, 0.5, 0.8),
            (0.0, 0.2, 0.4),
            (0.05, 0.2, 0.5, 1.0),
            ((12, 60), (40, 200)),
        )
    ]
    habits: tuple[Habit, ...] = ("lenient", "stopping", "dropping")
    broken = [
        World(results=k, mean=m, spread=0.2, printing=0.2, smallest=12, largest=60, habit=habit)
        for habit, k, m in product(habits, (1, 3, 8, 20), (0.0, 0.2, 0.5))
    ]
    return plain + broken


def _sizes(study: Study, effect: Array) -> tuple[Array, BoolArray]:
    units = np.zeros(effect.size)
    finite = effect > 0
    found, reachable = smallest_units(study, effect[finite], _POWER)
    units[finite] = found
    finite[finite] = reachable
    return units, finite


def _pooled_limits(groups: Sequence[Sequence[Evidence]]) -> Array:
    """Lower 20 % limits of the uncorrected random-effects mean of d (large-sample variance)."""
    t = np.array([[e.low for e in g] for g in groups])
    scale = np.array([[e.scale for e in g] for g in groups])
    d = t / scale
    variance = scale**-2.0 + d * d / (8 * scale**2)
    pooled = pool_many(d, variance)
    return np.asarray(pooled.mean + pooled.se * quantile(_PERCENTILE, pooled.df))


def _table(count: int, seed: int) -> str:
    names = [f.name for f in fields(Cell)]
    lines = [
        "# Simulated literatures: how cautious the planning value is (see the columns below).",
        "# Invented worlds, no data. Made by: python -m netsize.rehearsal.calibration FILE",
        f"# {count} literatures a row, row i with seed ({seed}, i). Two groups, two-sided .05,",
        "# power .80, assurance .80, default priors. *_cautious: share of literatures whose",
        "# 20th percentile is at or below the true mean (nominal .80); median_n is per group.",
        "row,habit,k,mean,spread,printing,smallest,largest," + ",".join(names),
    ]
    for i, w in enumerate(worlds()):
        cell = calibrate(w, count=count, seed=(seed, i))
        numbers = ",".join(f"{getattr(cell, name):.4g}" for name in names)
        lines.append(
            f"{i},{w.habit},{w.results},{w.mean:g},{w.spread:g},{w.printing:g},"
            f"{w.smallest},{w.largest},{numbers}"
        )
        print(lines[-1], file=sys.stderr, flush=True)
    return "\n".join(lines) + "\n"


if __name__ == "__main__":
    from pathlib import Path

    Path(sys.argv[1]).write_text(_table(100, 20261201), encoding="utf-8")
