"""Noncentral laws against 40-digit arithmetic from their definitions.

The values come from `generate_density_references.py` beside this file (mpmath).
"""

from __future__ import annotations

import csv
from collections.abc import Callable
from pathlib import Path
from types import ModuleType
from typing import NamedTuple

import numpy as np
import pytest
from numpy.typing import NDArray

from netsize.numerics import correlation, noncentral_chi2, noncentral_f, noncentral_t


class Cases(NamedTuple):
    """Columns of one quantity of one law."""

    x: NDArray[np.float64]
    df1: NDArray[np.float64]
    df2: NDArray[np.float64]
    ncp: NDArray[np.float64]
    value: NDArray[np.float64]


@pytest.fixture(scope="module")
def cases() -> Callable[[str, str], Cases]:
    path = Path(__file__).with_name("density_references.csv")
    with path.open(encoding="utf-8") as lines:
        rows = list(csv.DictReader(line for line in lines if not line.startswith("#")))

    def select(law: str, quantity: str) -> Cases:
        chosen = [r for r in rows if r["law"] == law and r["quantity"] == quantity]
        names = ("x", "df1", "df2", "ncp", "value")
        return Cases(*(np.array([float(r[n] or "nan") for r in chosen]) for n in names))

    return select


def _arguments(law: str, c: Cases) -> tuple[NDArray[np.float64], ...]:
    return {
        "t": (c.x, c.df1, c.ncp),
        "chi2": (c.x, c.df1, c.ncp),
        "f": (c.x, c.df1, c.df2, c.ncp),
        "r": (c.x, c.ncp, c.df1),
    }[law]


LAWS: dict[str, ModuleType] = {
    "t": noncentral_t,
    "chi2": noncentral_chi2,
    "f": noncentral_f,
    "r": correlation,
}


@pytest.mark.parametrize(("law", "number"), [("t", 392), ("chi2", 210), ("f", 720), ("r", 245)])
def test_log_density(cases, law, number):
    c = cases(law, "log_density")
    assert c.value.size == number
    value = LAWS[law].log_density(*_arguments(law, c))
    # a relative error of the density of 1e-10 is an absolute error of its logarithm; where the
    # density itself is below e^-1e5 its logarithm keeps 15 digits
    assert np.all(np.abs(value - c.value) <= 1e-10 + 1e-14 * np.abs(c.value))


@pytest.mark.parametrize("quantity", ["lower_tail", "upper_tail"])
def test_tail_of_t(cases, quantity):
    c = cases("t", quantity)
    assert c.value.size == 210
    value = getattr(noncentral_t, quantity)(c.x, c.df1, c.ncp)
    toward = c.x * c.ncp >= 0
    assert value[toward] == pytest.approx(c.value[toward], rel=1e-9, abs=1e-200)
    assert value == pytest.approx(c.value, rel=1e-9, abs=1e-13)


@pytest.mark.parametrize(
    ("law", "quantity"),
    [
        ("chi2", "lower_tail"),
        ("chi2", "upper_tail"),
        ("f", "lower_tail"),
        ("f", "upper_tail"),
        ("r", "lower_tail"),
    ],
)
def test_tail(cases, law, quantity):
    c = cases(law, quantity)
    assert c.value.size >= 40
    value = getattr(LAWS[law], quantity)(*_arguments(law, c))
    assert value == pytest.approx(c.value, rel=1e-9, abs=1e-290)


@pytest.mark.parametrize("law", ["t", "f", "chi2", "r"])
@pytest.mark.parametrize("p", [0.005, 0.025, 0.05, 0.9, 0.95, 0.975, 0.995])
def test_limit(cases, law, p):
    c = cases(law, f"limit {p}")
    if law == "f":
        value = noncentral_f.noncentrality(c.x, c.df1, c.df2, p)
    elif law == "r":
        value = correlation.coefficient(c.x, c.df1, p)
    else:
        value = LAWS[law].noncentrality(c.x, c.df1, p)
    assert value == pytest.approx(c.value, rel=1e-9, abs=1e-9)
