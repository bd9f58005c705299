"""What every standard form offers."""

from __future__ import annotations

import math
from typing import Protocol

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectSize
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["GIVE_CORRELATION", "Form", "equal_groups", "refuse"]

GIVE_CORRELATION = (
    "give it for all with --within-pair .5 (correlation=0.5 in Python), or beside the line as "
    "[within-pair r .5]"
)


class Form(Protocol):
    """One usable result in standard form.

    Attributes
    ----------
    result : where it came from. kind : what it is, in the plural ("paired comparisons").
    home : name of the metric that suits it without conversion.
    adaptable : True where it fits any design, so that the other results decide on the metric.
    """

    @property
    def result(self) -> ReportedResult: ...
    @property
    def kind(self) -> str: ...
    @property
    def home(self) -> str: ...
    @property
    def adaptable(self) -> bool: ...

    def on(self, settings: Settings) -> EffectSize:
        """The effect on `settings.metric`; EvidenceError with the reason where it cannot go."""
        ...


def refuse(kind: str, metric: Metric, need: str) -> EvidenceError:
    """The error of a result that cannot go on a metric; `need` says what is missing."""
    return EvidenceError(f"{kind} cannot go on the metric {metric.name}: {need}")


def equal_groups(total: int) -> tuple[int, int]:
    """Two groups as equal as the total allows, the larger first."""
    return math.ceil(total / 2), total // 2
