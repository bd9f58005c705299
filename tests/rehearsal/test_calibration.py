import csv
from dataclasses import asdict
from itertools import product
from pathlib import Path

import numpy as np
import pytest

from netsize.effect_sizes.metrics import METRICS
from netsize.rehearsal.calibration import calibrate, worlds
from netsize.rehearsal.literatures import World, simulate
from netsize.synthesis.selection_averaged import fit_averaged_many

TABLE = Path(__file__).parents[2] / "data" / "calibration.csv"

# Expected d, g-free, and publication probability of two-group studies of which only t > critical
# (two-sided .05) is printed: independent recomputation by quadrature of the quantity studied by
# Hedges (1984), Journal of Educational Statistics 9, 61, and Lane & Dunlap (1978).
PRINTED_ONLY_IF_SIGNIFICANT = [
    (20, 0.0, 0.7741),
    (20, 0.5, 0.8686),
    (40, 0.2, 0.5647),
    (40, 0.8, 0.8359),
    (80, 0.5, 0.5383),
]


@pytest.mark.parametrize(("n", "delta", "expected"), PRINTED_ONLY_IF_SIGNIFICANT)
def test_simulated_selection_inflates_d_as_published_theory_says(n, delta, expected):
    world = World(results=4000, mean=delta, spread=0.0, printing=0.0, smallest=n, largest=n)
    (printed,) = simulate(world, count=1, rng=np.random.default_rng(11))
    d = np.array([e.low / e.scale for e in printed])
    assert d.mean() == pytest.approx(expected, abs=4 * d.std() / np.sqrt(d.size))


def test_optional_stopping_raises_the_rate_of_false_positives():
    world = World(
        results=8000, mean=0.0, spread=0.0, printing=1.0, smallest=60, largest=60, habit="stopping"
    )
    (tested,) = simulate(world, count=1, rng=np.random.default_rng(12))
    share = np.mean([e.band == 0 for e in tested])
    # one-sided .025 at each of three looks at 50, 75 and 100 %: between one look and three
    assert 0.035 < share < 0.075


def test_without_habits_the_rate_of_false_positives_is_nominal():
    world = World(results=20000, mean=0.0, spread=0.0, printing=1.0, smallest=12, largest=60)
    (tested,) = simulate(world, count=1, rng=np.random.default_rng(13))
    share = np.mean([e.band == 0 for e in tested])
    assert share == pytest.approx(0.025, abs=0.004)


@pytest.mark.slow
def test_the_planning_percentile_is_cautious_in_three_of_four_literatures(capsys):
    shares = {}
    for i, (k, mu, omega) in enumerate(product((1, 3, 8), (0.2, 0.5), (0.05, 0.5))):
        world = World(results=k, mean=mu, spread=0.1, printing=omega, smallest=12, largest=60)
        groups = simulate(world, count=150, rng=np.random.default_rng([20261201, i]))
        fits = fit_averaged_many(
            groups, weights=[np.ones(k)] * 150, metric=METRICS["mean-difference"]
        )
        low = np.array([float(f.mean.quantile(0.2)) for f in fits])
        shares[(k, mu, omega)] = float(np.mean(low <= mu))
    with capsys.disabled():
        print("\nshare of literatures with 20th percentile of the mean at or below the truth")
        for (k, mu, omega), share in shares.items():
            print(f"  k = {k}, mean {mu}, printing {omega}: {share:.2f}")
    assert min(shares.values()) >= 0.75


def _rows():
    lines = TABLE.read_text(encoding="utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def test_the_committed_table_covers_every_world():
    rows = _rows()
    made = worlds()
    assert len(rows) == len(made)
    for row, world in zip(rows, made, strict=True):
        assert (row["habit"], int(row["k"]), float(row["mean"])) == (
            world.habit,
            world.results,
            world.mean,
        )


@pytest.mark.slow
@pytest.mark.parametrize("row", [37, 150, 396])
def test_a_row_of_the_committed_table_can_be_made_again(row):
    committed = _rows()[row]
    cell = asdict(calibrate(worlds()[row], count=100, seed=(20261201, row)))
    for name in ("bias", "rmse", "mean_cautious", "profile_cautious", "finite", "negligible"):
        assert cell[name] == pytest.approx(float(committed[name]), abs=0.011)
