"""Logarithmic axes drawn in powers of ten: where their round numbers are."""

from __future__ import annotations

import numpy as np

from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas

__all__ = ["log_ticks"]


def log_ticks(low: float, high: float, room: float | None = None) -> list[float]:
    """Round numbers with base-10 logarithms in [low, high], at most six of them.

    Multiples 1, 2, 5 of powers of ten, then 1, 3, then fewer powers, until their texts fit side
    by side on `room` millimetres (an upright axis has no such limit).
    """
    powers = range(int(np.floor(low)), int(np.ceil(high)) + 1)
    choices = [[d * 10.0**p for p in powers for d in digits] for digits in ((1, 2, 5), (1, 3))]
    choices += [[10.0**p for p in powers][::step] for step in (1, 2, 3)]
    for found in choices:
        inside = [n for n in found if low <= np.log10(n) <= high]
        if len(inside) <= 6 and (room is None or _fit(inside, room / (high - low))):
            break
    return inside


def _fit(values: list[float], scale: float) -> bool:
    widths = [canvas.width(fmt.tick(v)) for v in values]
    steps = np.diff(np.log10(values)) * scale
    return all(
        (a + b) / 2 + 1.0 <= step for a, b, step in zip(widths[:-1], widths[1:], steps, strict=True)
    )
