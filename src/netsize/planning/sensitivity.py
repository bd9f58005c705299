"""How the answer moves: other priors, other assumptions, one sample less."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import suppress
from dataclasses import dataclass, replace
from typing import Any

from netsize.errors import EvidenceError
from netsize.planning.answer import Answer
from netsize.planning.goals import Sized
from netsize.planning.plan import Plan, answer_again

__all__ = ["Variation", "leave_one_out", "sensitivity"]

_SCALES = (0.5, 1.5, 2.5)  # factors on the prior scales
_MOST = 40  # samples left out in turn


@dataclass(frozen=True, slots=True, kw_only=True)
class Variation:
    """The answer under one changed choice; effects on the shown scale.

    group : "as planned", "prior", "assumption" or "evidence". label : what was changed.
    value, median : of the planning distribution; sized : for the value.
    """

    group: str
    label: str
    value: float
    median: float
    probability_negligible: float
    sized: Sized

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types."""
        return {
            "group": self.group,
            "label": self.label,
            "value": self.value,
            "median": self.median,
            "probability_negligible": self.probability_negligible,
            **self.sized.to_dict(),
        }


def sensitivity(plan: Plan) -> tuple[Variation, ...]:
    """The plan as made, then with one choice changed at a time.

    Priors: scales of effect and heterogeneity halved, widened and much widened; the floor of
    printing lower and higher; prior probability of a negligible effect 0.2 and 0.8. Assumptions:
    selection at .10 and .01, within-sample correlation 0 and 1 where samples are shared, the other
    target. A change that leaves nothing to plan from is left out.
    """
    out = [_variation("as planned", "as planned", plan.answer)]
    results = [row.result for row in plan.literature.rows]
    for group, label, changed in _changes(plan):
        settings = replace(plan.settings, **changed)
        with suppress(EvidenceError):
            answered = answer_again(
                results, settings=settings, study=plan.study, metric=plan.metric
            )
            out.append(_variation(group, label, answered))
    return tuple(out)


def leave_one_out(plan: Plan) -> tuple[Variation, ...]:
    """The answer without each sample in turn, the 40 largest where there are more.

    Empty where there is only one sample, or where the rule does not look at the evidence; a sample
    without which nothing is left to plan from is passed over.
    """
    samples = plan.literature.samples
    if len(samples) < 2 or plan.settings.rule == "fixed":
        return ()
    largest = sorted(samples, key=lambda name: -samples[name])[:_MOST]
    out = []
    for left in (name for name in samples if name in largest):
        results = [row.result for row in plan.literature.rows if row.sample != left]
        with suppress(EvidenceError):
            answered = answer_again(
                results, settings=plan.settings, study=plan.study, metric=plan.metric
            )
            out.append(_variation("evidence", f"without {left}", answered))
    return tuple(out)


def _variation(group: str, label: str, answered: Answer) -> Variation:
    return Variation(
        group=group,
        label=label,
        value=answered.value,
        median=answered.median,
        probability_negligible=answered.probability_negligible,
        sized=answered.sized,
    )


def _changes(plan: Plan) -> Iterator[tuple[str, str, dict[str, Any]]]:
    priors, settings = plan.literature.averaged.priors, plan.settings
    if settings.rule == "averaged":
        for name, title, scale in (
            ("effect_scale", "prior SD of the mean effect", priors.effect_scale),
            ("heterogeneity_scale", "prior scale of heterogeneity", priors.heterogeneity_scale),
        ):
            for factor in _SCALES:
                yield "prior", f"{title} {factor * scale:g}", {name: factor * scale}
        for negligible in (0.2, 0.8):
            label = f"prior probability of a negligible effect {negligible:g}"
            yield "prior", label, {"negligible": negligible}
    if settings.rule in ("averaged", "profile"):
        for floor in (0.001, 0.05):
            label = f"lowest chance of printing {floor:g}"
            yield "prior", label, {"printing_floor": floor}
        for cut in (0.01, 0.1):
            if settings.cut_points != (cut,):
                yield "assumption", f"selection at p < {cut:g}", {"cut_points": (cut,)}
        other = "mean" if settings.target == "new-study" else "new-study"
        yield "assumption", f"target: {other}", {"target": other}
    if len(plan.literature.samples) < len(plan.literature.rows):
        for rho in (0.0, 1.0):
            label = f"within-sample correlation {rho:g}"
            yield "assumption", label, {"within_sample_correlation": rho}
