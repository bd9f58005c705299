"""What goes wrong when the as-printed n is used, and what common habits would give."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from netsize.planning.answer import Answer
from netsize.planning.evidence import Literature
from netsize.planning.goals import power_at, units_within
from netsize.planning.rows import Row
from netsize.sizing.aftermath import aftermath
from netsize.sizing.study import Study
from netsize.synthesis.records import plain

__all__ = ["Consequence", "Habit", "consequences", "habits"]

_CUSTOM = 25  # participants a group, a habit in many fields (common practice)


@dataclass(frozen=True, slots=True, kw_only=True)
class Consequence:
    """A study of the as-printed size, were the true effect `effect` (shown scale).

    power : to find it. sign_error : P(wrong sign given significant). exaggeration : mean size of a
    significant estimate over the true effect (Gelman & Carlin 2014); both None for tests without
    a direction.
    """

    key: str
    label: str
    effect: float
    n_total: int
    power: float
    sign_error: float | None
    exaggeration: float | None

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {f: getattr(self, f) for f in self.__dataclass_fields__}


@dataclass(frozen=True, slots=True, kw_only=True)
class Habit:
    """A rule of thumb for n, with the power it has at the planning value and at the median."""

    key: str
    label: str
    n_total: int
    power_at_value: float
    power_at_median: float

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {f: getattr(self, f) for f in self.__dataclass_fields__}


def consequences(
    rows: Sequence[Row], answer: Answer, study: Study, scale: str
) -> tuple[Consequence, ...]:
    """At the planning value and at the median, where positive; none without an as-printed n."""
    naive = next(row for row in rows if row.key == "as-printed").sized
    if naive.n_total is None:
        return ()
    inward = study.metric(scale).inward
    out = []
    for key, label, effect in (
        ("planning-value", "planning value", answer.value),
        ("planning-median", "median", answer.median),
    ):
        if not np.isfinite(effect) or effect <= 0:
            continue
        at = inward(np.array(effect))
        after = aftermath(study, naive.units, at)
        out.append(
            Consequence(
                key=key,
                label=label,
                effect=effect,
                n_total=naive.n_total,
                power=float(power_at(study, naive.units, at)),
                sign_error=plain(float(after.sign_error)),
                exaggeration=plain(float(after.exaggeration)),
            )
        )
    return tuple(out)


def habits(literature: Literature, answer: Answer, study: Study, scale: str) -> tuple[Habit, ...]:
    """The size of the largest earlier study, and 25 a group."""
    largest = max(literature.rows, key=lambda row: row.n)
    candidates = [
        (
            "largest-earlier",
            f"as large as the largest earlier study ({largest.label})",
            units_within(study, largest.n),
        ),
        (
            "customary",
            f"{_customary(study)}, a common habit",
            max(_CUSTOM, study.first),
        ),
    ]
    inward = study.metric(scale).inward
    effects = inward(np.nan_to_num(np.array([answer.value, answer.median]), neginf=0.0))
    out = []
    for key, label, units in candidates:
        if units == 0:
            continue
        at_value, at_median = (float(p) for p in power_at(study, units, effects))
        out.append(
            Habit(
                key=key,
                label=label,
                n_total=int(study.groups(np.array(float(units))).sum()),
                power_at_value=at_value,
                power_at_median=at_median,
            )
        )
    return tuple(out)


def _customary(study: Study) -> str:
    alone = study.groups(np.array(1.0)).size == 1
    return f"{_CUSTOM} participants" if alone else f"{_CUSTOM} per {study.design.group_word}"
