"""The answers of the sizing room: a size for every effect, and what a given size can do."""

from __future__ import annotations

from dataclasses import asdict, dataclass, fields
from typing import TYPE_CHECKING, Any

import numpy as np
from scipy.special import ndtri

from netsize.numerics.arrays import Array, BoolArray, IntArray
from netsize.sizing.aftermath import aftermath
from netsize.sizing.designs import EffectMetric
from netsize.sizing.precision import expected_half_width, has_interval
from netsize.sizing.search import detectable_effect
from netsize.sizing.study import Study

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["Abilities", "Cost", "Goal", "Sizing"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Goal:
    """What the size was chosen for.

    kind : "power", "assurance" (of the power, under a distribution of effects), "expected-power",
        "half-width" or "given" (the size was given). target : the power or half-width wanted; for
        "given" the power at which the detectable effect is quoted. assurance : probability with
        which the target is to be met, where asked for. level : of the interval.
    """

    kind: str
    target: float
    assurance: float | None = None
    level: float = 0.95


@dataclass(frozen=True, slots=True, kw_only=True)
class Cost:
    """Money: `fixed` for the study and `each` for every participant recruited."""

    fixed: float = 0.0
    each: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Abilities:
    """What a study of a given size can do; arrays shaped as the effects, nan where undefined.

    predicted : P(significant in the predicted direction). sign_error, exaggeration : of a
    significant result (Gelman & Carlin 2014). detectable : smallest effect, on the metric given,
    that has the target power. half_width : expected half-width of the interval for the effect, on
    the design's own scale.
    """

    predicted: Array
    sign_error: Array
    exaggeration: Array
    detectable: Array
    half_width: Array


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sizing:
    """The size of a study for every effect of an array, and the power it reaches.

    Attributes
    ----------
    study : design and modifiers. goal : what the size is for. metric : scale of `effect`.
    effect : as given, any shape S; for a distribution of effects its quantile (assurance) or mean.
    own_effect : the same on the design's own scale.
    n_per_group : participants analysed, int64, shape (*S, groups). n_total : S.
    recruited_per_group, recruited_total : the same before the expected loss.
    power : exact power at `effect` with that size. reached : the goal's own quantity (expected
        power, half-width, probability of reaching the power); equals `power` for a power goal.
    finite : False where no size reaches the goal; the sizes are 0 there and the rest nan.
    ceiling : what `reached` tends to as n grows, where that can lie below the target; else nan.
    cost : price of the recruited participants, nan without a price.
    """

    study: Study
    goal: Goal
    metric: EffectMetric
    effect: Array
    own_effect: Array
    n_per_group: IntArray
    n_total: IntArray
    recruited_per_group: IntArray
    recruited_total: IntArray
    power: Array
    reached: Array
    finite: BoolArray
    ceiling: float
    cost: Array

    @property
    def units(self) -> Array:
        """The size as the study counts it: participants or clusters of the smaller group."""
        return np.asarray(self.n_per_group.min(axis=-1) / self.study.modifiers.cluster_size)

    def abilities(self) -> Abilities:
        """What the study can do beyond its power (slower: intervals are averaged)."""
        units = np.where(self.finite, self.units, np.nan)
        after = aftermath(self.study, units, self.own_effect)
        sizes, place = np.unique(units, return_inverse=True)
        least = detectable_effect(self.study, sizes, self.goal_power)
        nothing = np.full(self.effect.shape, np.nan)
        return Abilities(
            predicted=after.predicted,
            sign_error=after.sign_error,
            exaggeration=after.exaggeration,
            detectable=self.metric.outward(least)[place].reshape(self.effect.shape),
            half_width=expected_half_width(self.study, units, self.own_effect, self.goal.level)
            if has_interval(self.study)
            else nothing,
        )

    @property
    def goal_power(self) -> float:
        """The power that the goal speaks of; .80 for a half-width."""
        return 0.8 if self.goal.kind == "half-width" else self.goal.target

    def exact_power(self) -> float | None:
        """For one study of proportions its power from the binomial distribution, else None.

        A rejection region of whole counts makes it jump about the normal approximation, so it does
        not choose the size. Not given for clusters, whose counts are not binomial.
        """
        m = self.study.modifiers
        if self.effect.size != 1 or not self.finite.all() or m.cluster_size > 1:
            return None
        return self.study.design.exact_power(
            self.n_per_group.reshape(-1).astype(float),
            float(self.own_effect.flat[0]),
            -float(ndtri(self.study.tail)),
            m.sides,
        )

    def settings(self) -> dict[str, Any]:
        """Design options and modifiers as plain values."""
        design = self.study.design
        options = {f.name: getattr(design, f.name) for f in fields(design)}  # type: ignore[arg-type]
        return {"design": design.name, **options, **asdict(self.study.modifiers)}

    def to_dict(self) -> dict[str, Any]:
        """Plain values for JSON; None where no finite size exists or a quantity is undefined."""
        answer: dict[str, Any] = {
            "goal": {k: v for k, v in asdict(self.goal).items() if v is not None},
            "metric": self.metric.name,
            "effect": _plain(self.effect),
            "n_per_group": _plain_groups(self.n_per_group, self.finite),
            "n_total": _plain(self.n_total, self.finite),
            "power": _plain(self.power, self.finite),
            "reached": _plain(self.reached, self.finite),
            "recruited_per_group": _plain_groups(self.recruited_per_group, self.finite),
            "recruited_total": _plain(self.recruited_total, self.finite),
        }
        if not np.all(np.isnan(self.cost)):
            answer["cost"] = _plain(self.cost, self.finite)
        if not np.isnan(self.ceiling):
            answer["ceiling"] = self.ceiling
        exact = self.exact_power()
        if exact is not None:
            answer["exact_power"] = exact
        if self.goal.kind == "given":
            found = self.abilities()
            answer |= {
                "predicted_direction": _plain(found.predicted),
                "sign_error": _plain(found.sign_error),
                "exaggeration": _plain(found.exaggeration),
                "detectable_effect": _plain(found.detectable),
                "half_width": _plain(found.half_width),
            }
        return answer | {"settings": self.settings(), "assumptions": list(self.assumptions())}

    def assumptions(self) -> tuple[str, ...]:
        """Everything taken for granted and every modifier's effect, a sentence each."""
        from netsize.sizing.wording import assumptions

        return assumptions(self)

    def table(self) -> pd.DataFrame:
        """One row an effect: sizes, power, what was reached, and the cost if there is a price."""
        import pandas as pd

        flat = self.effect.size
        groups = self.n_per_group.reshape(flat, -1)
        columns: dict[str, Any] = {self.metric.name: self.effect.ravel()}
        columns |= {f"n_{i + 1}": groups[:, i] for i in range(groups.shape[1])}
        columns |= {
            "n_total": self.n_total.ravel(),
            "recruited_total": self.recruited_total.ravel(),
            "power": self.power.ravel(),
            "reached": self.reached.ravel(),
            "finite": self.finite.ravel(),
        }
        if not np.all(np.isnan(self.cost)):
            columns["cost"] = self.cost.ravel()
        return pd.DataFrame(columns)


def _plain(values: Array | IntArray, known: BoolArray | None = None) -> Any:
    """An array as nested lists of numbers, None where not known or not finite."""
    shown = np.isfinite(values) & (True if known is None else known)
    objects = np.array(values, dtype=object)
    objects[~shown] = None
    return objects.tolist()


def _plain_groups(sizes: IntArray, finite: BoolArray) -> Any:
    """Group sizes as lists, None in place of the whole list where there is no finite size."""
    if sizes.ndim == 1:
        return sizes.tolist() if finite else None
    return [_plain_groups(s, f) for s, f in zip(sizes, finite, strict=True)]
