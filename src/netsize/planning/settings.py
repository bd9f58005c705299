"""Everything the user can choose about a plan, in one record that is printed with the answer."""

from __future__ import annotations

from dataclasses import asdict, dataclass, field
from typing import Any, Literal, TypeAlias, get_args

from netsize.effect_sizes.metrics import Metric
from netsize.errors import SettingError
from netsize.sizing.checks import between, option
from netsize.synthesis.heterogeneity import HETEROGENEITY, Heterogeneity
from netsize.synthesis.random_effects import INTERVALS, IntervalRule
from netsize.synthesis.selection import Priors

__all__ = ["GOALS", "RULES", "TARGETS", "Goal", "PlanSettings", "Rule", "Target"]

Rule: TypeAlias = Literal["averaged", "profile", "pooled-limit", "single-study", "fixed"]
Target: TypeAlias = Literal["new-study", "mean"]
Goal: TypeAlias = Literal["power", "assurance", "precision", "budget"]
RULES: tuple[str, ...] = get_args(Rule)
TARGETS: tuple[str, ...] = get_args(Target)
GOALS: tuple[str, ...] = get_args(Goal)

_SMALLEST, _LARGEST = 1e-4, 20.0  # effects that a plan takes
_MOST_CUTS = 3  # each adds a dimension to the integration


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanSettings:
    """The choices behind a plan; every one has a default and is printed.

    Attributes
    ----------
    design : of the new study; None chooses the one that matches the evidence.
    design_options : the design's own options (groups, ratio, ...) and modifiers (loss, ...).
    alpha, sides : level and sides of its test. power : wanted.
    assurance : probability with which the sized study reaches its target.
    smallest_effect : of interest, on the shown scale (d, dz, r, f), or None.
    target : "new-study" sizes for θ ~ N(μ, τ²), "mean" for μ.
    rule : where the planning distribution comes from. planning_effect : for the rule "fixed".
    goal : "power" solves for n at each row's effect, "assurance" at its lower limit at that
        assurance; "precision" for the expected `half_width` of the interval, or with `assured` for
        one kept within it with probability `assurance`; "budget" tells what `at_most`
        participants can do.
    cost_per, fixed_cost : turn a sum `at_most` into participants.
    metric, correlation : pooling scale and within-pair correlation for the conversion.
    cut_points : two-sided significance levels that part the p-bands.
    within_sample_correlation : of results that share a sample.
    heterogeneity, interval, level : of the classical pooling.
    corrections : keys of published corrections to add as rows.
    effect_scale, heterogeneity_scale, printing_floor, negligible : priors; None for the default.
    """

    design: str | None = None
    design_options: dict[str, Any] = field(default_factory=dict)
    alpha: float = 0.05
    sides: int = 2
    power: float = 0.8
    assurance: float = 0.8
    smallest_effect: float | None = None
    target: Target = "new-study"
    rule: Rule = "averaged"
    planning_effect: float | None = None
    goal: Goal = "power"
    half_width: float | None = None
    assured: bool = False
    at_most: float | None = None
    cost_per: float | None = None
    fixed_cost: float = 0.0
    metric: str | None = None
    correlation: float | None = None
    cut_points: tuple[float, ...] = (0.05,)
    within_sample_correlation: float = 0.5
    heterogeneity: Heterogeneity = "restricted-likelihood"
    interval: IntervalRule = "hartung-knapp"
    level: float = 0.95
    corrections: tuple[str, ...] = ()
    effect_scale: float | None = None
    heterogeneity_scale: float | None = None
    printing_floor: float = 0.01
    negligible: float = 0.5

    def __post_init__(self) -> None:
        for name in ("alpha", "power", "assurance", "level", "printing_floor"):
            between(name, getattr(self, name), 0, 1)
        between("negligible", self.negligible, 0, 1, ends="[)")
        between("within_sample_correlation", self.within_sample_correlation, 0, 1, ends="[]")
        for name in ("smallest_effect", "planning_effect", "half_width"):
            if getattr(self, name) is not None:
                between(name, getattr(self, name), _SMALLEST, _LARGEST, ends="[]")
        for name in ("at_most", "cost_per"):
            if getattr(self, name) is not None:
                between(name, getattr(self, name), 0, 1e12)
        if not 1 <= len(self.cut_points) <= _MOST_CUTS:
            raise SettingError(
                "--cut-points", f"give one to {_MOST_CUTS} levels, not {len(self.cut_points)}"
            )
        self._check_goal()
        for name in ("effect_scale", "heterogeneity_scale"):
            if getattr(self, name) is not None:
                between(name, getattr(self, name), 0.001, 100)
        between("fixed_cost", self.fixed_cost, 0, float("inf"), ends="[)")
        if self.power <= self.alpha:
            raise SettingError("--power", f"{self.power:g} is not above alpha {self.alpha:g}")
        for name, choices in (
            ("rule", RULES),
            ("target", TARGETS),
            ("goal", GOALS),
            ("heterogeneity", HETEROGENEITY),
            ("interval", INTERVALS),
        ):
            if getattr(self, name) not in choices:
                raise SettingError(
                    f"--{name}", f"{getattr(self, name)!r} is none of {', '.join(choices)}"
                )
        if self.rule == "fixed" and self.planning_effect is None:
            raise SettingError("--planning-effect", "the rule fixed needs the effect to plan for")
        if self.rule != "fixed" and self.planning_effect is not None:
            raise SettingError("--planning-effect", "it serves --rule fixed only")

    def _check_goal(self) -> None:
        """Options of one goal only; one given in vain is a mistake to tell, not to pass over."""
        owners = {
            "half_width": "precision",
            "assured": "precision",
            "at_most": "budget",
            "cost_per": "budget",
        }
        for name, goal in owners.items():
            if getattr(self, name) and self.goal != goal:
                raise SettingError(option(name), f"it serves --goal {goal} only")
        if self.goal == "precision" and self.half_width is None:
            raise SettingError("--half-width", "the goal precision needs the half-width wanted")
        if self.goal == "budget" and self.at_most is None:
            raise SettingError("--at-most", "the goal budget needs the most that can be spent")
        if self.fixed_cost and self.cost_per is None:
            raise SettingError("--fixed-cost", "it needs the cost of a participant, --cost-per")

    def on_scale(self, metric: Metric) -> None:
        """SettingError where an effect given does not exist on the scale of the metric."""
        for name in ("smallest_effect", "planning_effect"):
            value = getattr(self, name)
            if value is not None and metric.name == "fisher-z" and value >= 1:
                raise SettingError(option(name), f"{value:g} is no correlation; it must be below 1")

    def priors(self, metric: Metric) -> Priors:
        """The priors on a metric, defaults filled in."""
        default = Priors.default(metric)
        return Priors(
            effect_scale=self.effect_scale or default.effect_scale,
            heterogeneity_scale=self.heterogeneity_scale or default.heterogeneity_scale,
            printing_floor=self.printing_floor,
            negligible=self.negligible,
        )

    def to_dict(self) -> dict[str, Any]:
        """Every choice as plain JSON types."""
        return {k: list(v) if isinstance(v, tuple) else v for k, v in asdict(self).items()}
