"""Everything a report draws on, computed once: plan, weighing, variations and trade-offs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from netsize.errors import InputError
from netsize.planning.plan import Plan
from netsize.planning.sensitivity import Variation, leave_one_out, sensitivity
from netsize.planning.tradeoffs import Affordable, Narrow, Target, affordable, narrow, targets
from netsize.reported.check import Finding, check
from netsize.synthesis.weighing import Weighing, weigh

__all__ = ["MOST_REFITTED", "Material", "gather_material"]

MOST_REFITTED = 40  # samples without each of which the plan is made again


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Material:
    """A plan and what stands around it.

    weighing : None where no result has a point estimate. findings : of the arithmetic check, for
    each result used.
    """

    plan: Plan
    weighing: Weighing | None
    findings: tuple[tuple[Finding, ...], ...]
    variations: tuple[Variation, ...]
    without: tuple[Variation, ...]
    targets: tuple[Target, ...]
    narrow: tuple[Narrow, ...]
    affordable: tuple[Affordable, ...]

    @property
    def disagreements(self) -> int:
        """Findings in all."""
        return sum(len(found) for found in self.findings)

    def to_dict(self) -> dict[str, Any]:
        """The records, unrounded."""
        plan = self.plan.to_dict()
        del plan["version"]  # the document has it
        return {
            "plan": plan,
            "weighing": None if self.weighing is None else self.weighing.to_dict(),
            "check": [[f.to_dict() for f in found] for found in self.findings],
            "sensitivity": [_finite(v.to_dict()) for v in self.variations],
            "leave_one_out": [_finite(v.to_dict()) for v in self.without],
            "targets": [t.to_dict() for t in self.targets],
            "precision": [x.to_dict() for x in self.narrow],
            "sizes": [a.to_dict() for a in self.affordable],
        }


def gather_material(plan: Plan) -> Material:
    """Compute what the report shows beside the plan."""
    return Material(
        plan=plan,
        weighing=_weighing(plan),
        findings=tuple(check(row.result) for row in plan.literature.rows),
        variations=sensitivity(plan),
        without=leave_one_out(plan) if len(plan.literature.samples) <= MOST_REFITTED else (),
        targets=targets(plan) if plan.settings.rule != "fixed" else (),
        narrow=narrow(plan),
        affordable=affordable(plan),
    )


def _weighing(plan: Plan) -> Weighing | None:
    s = plan.settings
    try:
        return weigh(
            plan.literature.table,
            heterogeneity=s.heterogeneity,
            interval=s.interval,
            level=s.level,
            within_sample_correlation=s.within_sample_correlation,
        )
    except InputError:
        return None  # inequalities alone: nothing to weigh, and the page says so


def _finite(record: dict[str, Any]) -> dict[str, Any]:
    infinite = (float("inf"), float("-inf"))
    return {k: None if v in infinite or v != v else v for k, v in record.items()}
