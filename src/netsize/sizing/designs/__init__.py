"""The designs of a new study, by name."""

from __future__ import annotations

from dataclasses import MISSING, fields
from typing import Any

from netsize.errors import SettingError
from netsize.sizing.checks import option
from netsize.sizing.designs.associations import (
    Contingency,
    Correlation,
    Regression,
    TwoCorrelations,
)
from netsize.sizing.designs.base import Design, EffectMetric
from netsize.sizing.designs.margins import Equivalence, NonInferiority
from netsize.sizing.designs.means import OneSample, Paired, TwoGroups
from netsize.sizing.designs.proportions import OneProportion, TwoProportions
from netsize.sizing.designs.variances import Anova, Factorial, RepeatedMeasures

__all__ = [
    "DESIGNS",
    "Anova",
    "Contingency",
    "Correlation",
    "Design",
    "EffectMetric",
    "Equivalence",
    "Factorial",
    "NonInferiority",
    "OneProportion",
    "OneSample",
    "Paired",
    "Regression",
    "RepeatedMeasures",
    "TwoCorrelations",
    "TwoGroups",
    "TwoProportions",
    "design_named",
    "options_of",
]

DESIGNS: dict[str, type[Design]] = {
    kind.name: kind
    for kind in (
        TwoGroups,
        Paired,
        OneSample,
        Correlation,
        Anova,
        Factorial,
        RepeatedMeasures,
        Regression,
        TwoProportions,
        OneProportion,
        Contingency,
        TwoCorrelations,
        Equivalence,
        NonInferiority,
    )
}


def options_of(kind: type[Design]) -> tuple[str, ...]:
    """Names of the options a design takes."""
    return tuple(field.name for field in fields(kind))  # type: ignore[arg-type]


def design_named(name: str, **options: Any) -> Design:
    """The design called `name` with the options given; SettingError for what it does not take."""
    kind = DESIGNS.get(name)
    if kind is None:
        raise SettingError("--design", f"{name!r} is none of {', '.join(DESIGNS)}")
    taken = options_of(kind)
    for given in options:
        if given not in taken:
            takes = ", ".join(option(t) for t in taken) or "none"
            raise SettingError(
                option(given), f"the design {name} has no such option; its own: {takes}"
            )
    for field in fields(kind):  # type: ignore[arg-type]
        if field.default is MISSING and field.name not in options:
            raise SettingError(option(field.name), f"the design {name} needs it")
    return kind(**options)
