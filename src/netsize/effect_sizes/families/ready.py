"""Standard errors of estimates that were printed ready-made."""

from __future__ import annotations

import math

from scipy.special import ndtri

from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["error_from_interval"]

_SKEW = 0.1  # share of the width by which an estimate may sit off the middle of its interval


def error_from_interval(
    result: ReportedResult, value: float, *, logarithmic: bool = False
) -> tuple[float, tuple[str, ...]]:
    """Standard error as printed, or half the interval over the normal quantile of its level.

    `logarithmic` intervals are printed on the ratio and used on its logarithm. An interval whose
    middle is far from `value` is reported in the notes.
    """
    if result.standard_error is not None:
        if not (result.standard_error > 0 and math.isfinite(result.standard_error)):
            raise EvidenceError(f"a standard error of {result.standard_error:g} is not above 0")
        return result.standard_error, ()
    if result.interval is None:
        raise EvidenceError("neither an interval nor a standard error is given")
    low, high, level = result.interval.low, result.interval.high, result.interval.level
    if logarithmic:
        if not low > 0:
            raise EvidenceError(f"the interval of a ratio cannot reach {low:g}")
        low, high = math.log(low), math.log(high)
    if not (low < high and math.isfinite(high - low)):
        raise EvidenceError("the interval's lower end must be below its upper end")
    if not 0 < level < 1:
        raise EvidenceError(f"a confidence level of {level:g} is not between 0 and 1")
    notes: tuple[str, ...] = (f"standard error from the {level:.4g} interval",)
    if abs((low + high) / 2 - value) > _SKEW * (high - low):
        notes = (*notes, "the interval is not centred on the estimate; check both")
    return (high - low) / (2 * float(ndtri((1 + level) / 2))), notes
