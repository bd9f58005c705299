"""Speed of the exact selection model and of a cold plan; run with `pytest tests/bench
--benchmark-enable`. Nothing here is asserted about time."""

import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from netsize.effect_sizes.metrics import METRICS
from netsize.rehearsal.literatures import World, simulate
from netsize.synthesis.selection_averaged import fit_averaged, fit_averaged_many

EXAMPLE = Path(__file__).parents[2] / "examples" / "reading-aloud.txt"
METRIC = METRICS["mean-difference"]
IMPORTS = "import numpy, scipy.special, scipy.optimize, pandas, statsmodels.api, matplotlib.figure"


def _literatures(k, count=1):
    world = World(results=k, mean=0.4, spread=0.2, printing=0.3, smallest=12, largest=100)
    return simulate(world, count=count, rng=np.random.default_rng(k))


@pytest.mark.parametrize("k", [10, 200])
def test_exact_fit(benchmark, k):
    (evidence,) = _literatures(k)
    fit = benchmark(fit_averaged, evidence, weights=np.ones(k), metric=METRIC)
    assert fit.rested


def test_hundred_literatures_of_ten(benchmark):
    groups = _literatures(10, count=100)
    fits = benchmark(fit_averaged_many, groups, weights=[np.ones(10)] * 100, metric=METRIC)
    assert len(fits) == 100


@pytest.mark.parametrize(
    "code",
    [
        IMPORTS,
        f"from netsize.cli.main import main; raise SystemExit(main(['plan', {str(EXAMPLE)!r}]))",
    ],
    ids=["importing the scientific dependencies", "a cold plan"],
)
def test_whole_process(benchmark, code):
    def start():
        return subprocess.run([sys.executable, "-c", code], capture_output=True, check=True)

    assert benchmark.pedantic(start, rounds=3, warmup_rounds=1).returncode == 0
