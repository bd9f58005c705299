"""Ranges of settings: every fault becomes one message that names the option."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from netsize.errors import SettingError
from netsize.numerics.arrays import Array

__all__ = ["between", "numbers", "option", "whole"]


def option(name: str) -> str:
    """A Python setting as the option that users see: "cluster_size" → "--cluster-size"."""
    return "--" + name.replace("_", "-")


def numbers(name: str, values: ArrayLike) -> Array:
    """Values as a float64 array; SettingError for anything that is not a finite number."""
    try:
        array = np.asarray(values, dtype=float)
    except (TypeError, ValueError):
        raise SettingError(option(name), f"{values!r} is not a number") from None
    if array.size == 0:
        raise SettingError(option(name), "nothing given; expected at least one number")
    if not np.all(np.isfinite(array)):
        bad = float(array[~np.isfinite(array)].flat[0])
        raise SettingError(option(name), f"{bad:g} is not a finite number")
    return array


def between(
    name: str,
    values: ArrayLike,
    low: float,
    high: float,
    *,
    ends: str = "()",
    expected: str | None = None,
) -> Array:
    """Values as an array, all inside the interval; `ends` says which ends belong to it."""
    array = numbers(name, values)
    above = array >= low if ends[0] == "[" else array > low
    under = array <= high if ends[1] == "]" else array < high
    if not np.all(above & under):
        bad = float(array[~(above & under)].flat[0])
        wanted = expected or (
            f"a number {'from' if ends[0] == '[' else 'above'} {low:g} "
            f"{'to' if ends[1] == ']' else 'to below'} {high:g}"
        )
        raise SettingError(option(name), f"{bad:g} is out of range; expected {wanted}")
    return array


def whole(name: str, values: ArrayLike, low: int, high: int = 10**9) -> Array:
    """Values as an array of whole numbers from low to high (kept as float64 for arithmetic)."""
    wanted = f"a whole number from {low} to {high:,}"
    array = between(name, values, low, high, ends="[]", expected=wanted)
    if not np.all(array == np.floor(array)):
        bad = float(array[array != np.floor(array)].flat[0])
        raise SettingError(option(name), f"{bad:g} is not a whole number")
    return array
