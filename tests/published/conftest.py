"""Reference data sets as columns."""

from __future__ import annotations

import csv
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

_DATA = Path(__file__).parents[2] / "data"


@pytest.fixture(scope="session")
def columns() -> Callable[..., list[NDArray[np.float64]]]:
    """columns("bcg_colditz1994", "tpos", ...) → the named numeric columns of a file in data/."""

    def read(name: str, *wanted: str) -> list[NDArray[np.float64]]:
        with (_DATA / f"{name}.csv").open(encoding="utf-8") as lines:
            rows = list(csv.DictReader(line for line in lines if not line.startswith("#")))
        return [np.array([float(row[w]) for row in rows]) for w in wanted]

    return read


@pytest.fixture(scope="session")
def bcg(columns) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Log risk ratios and variances of the thirteen BCG trials (Colditz et al. 1994)."""
    a, b, c, d = columns("bcg_colditz1994", "tpos", "tneg", "cpos", "cneg")
    return np.log(a / (a + b)) - np.log(c / (c + d)), 1 / a - 1 / (a + b) + 1 / c - 1 / (c + d)


@pytest.fixture(scope="session")
def teachers(columns) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Effects and variances of the nineteen teacher-expectancy studies (Raudenbush 1984)."""
    d, v = columns("teacher_expectancy_raudenbush1984", "d", "vi")
    return d, v


@pytest.fixture(scope="session")
def smoking(columns) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Log relative risks and variances of the 37 passive-smoking studies (Hackshaw et al. 1997)."""
    rr, low, high = columns("passive_smoking_hackshaw1997", "rr", "lb", "ub")
    return np.log(rr), ((np.log(high) - np.log(low)) / (2 * 1.959964)) ** 2
