"""Ready-made effects with a variance, a standard error or an interval."""

from __future__ import annotations

import math

from netsize.effect_sizes.families.ready import error_from_interval
from netsize.effect_sizes.forms.normal import EstimateForm
from netsize.effect_sizes.metrics import METRICS
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["from_estimate"]


def from_estimate(result: ReportedResult, settings: Settings) -> EstimateForm:
    """A value on a named metric; correlations on Fisher's z, ratios as logarithms."""
    del settings
    if result.metric not in METRICS:
        raise EvidenceError(
            f"an estimate needs its metric, one of {', '.join(METRICS)}"
            + ("" if result.metric is None else f"; {result.metric!r} is none of them")
        )
    value = result.value
    if value is None or not math.isfinite(value) or result.relation != "=":
        raise EvidenceError("an estimate needs a finite value")
    metric = METRICS[result.metric]
    if not metric.signed and value < 0:
        raise EvidenceError(f"{metric.title} cannot be negative")
    error, notes = error_from_interval(result, value)
    n = sum(result.n)
    return EstimateForm(
        result=result,
        value=value * result.direction if metric.signed else value,
        standard_error=error,
        home=metric.name,
        kind=f"ready-made estimates ({metric.name})",
        n=n,
        groups=result.n if len(result.n) == 2 else (n,) if n else (),
        assumptions=notes,
    )
