"""The published corrections by name, each returning the common record.

Adding one: write a module whose function returns an `Estimate`, and a line in `CORRECTIONS`.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from netsize.effect_sizes.records import EffectTable
from netsize.errors import SettingError, SolveError
from netsize.synthesis import clustered, small_study
from netsize.synthesis.conditional import (
    Domain,
    Sides,
    conditional_likelihood,
    conditional_quantiles,
    search_domain,
)
from netsize.synthesis.confidence import unusable
from netsize.synthesis.dependence import DEPENDENCE, Dependence
from netsize.synthesis.heterogeneity import HETEROGENEITY, Heterogeneity
from netsize.synthesis.limit import limit
from netsize.synthesis.random_effects import IntervalRule, check
from netsize.synthesis.records import Estimate
from netsize.synthesis.results import Results, from_table
from netsize.synthesis.step_function import check_cuts, step_function
from netsize.synthesis.trim_and_fill import trim_and_fill
from netsize.synthesis.unrestricted import adequately_powered, unrestricted

__all__ = ["CORRECTIONS", "Correction", "Settings", "correct", "correct_results", "domain_of"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Settings:
    """The choices that the classical methods share; see `netsize.weigh` for each."""

    heterogeneity: Heterogeneity = "restricted-likelihood"
    interval: IntervalRule = "hartung-knapp"
    level: float = 0.95
    within_sample_correlation: float = 0.5
    dependence: Dependence = "composites"
    steps: tuple[float, ...] = (0.025,)

    def __post_init__(self) -> None:
        check(self.interval, self.level)
        check_cuts(self.steps)
        for name, value, known in (
            ("heterogeneity", self.heterogeneity, HETEROGENEITY),
            ("dependence", self.dependence, DEPENDENCE),
        ):
            if value not in known:
                raise SettingError(
                    f"--{name}", f"{value!r} is not one of {', '.join(known)}; choose one"
                )


@dataclass(frozen=True, slots=True)
class Correction:
    """How tables call a correction, and the function that makes its row."""

    label: str
    row: Callable[[Results, Settings], Estimate]


def correct(
    table: EffectTable,
    names: str | Sequence[str] = "all",
    *,
    heterogeneity: Heterogeneity = "restricted-likelihood",
    interval: IntervalRule = "hartung-knapp",
    level: float = 0.95,
    within_sample_correlation: float = 0.5,
    dependence: Dependence = "composites",
    steps: Sequence[float] = (0.025,),
) -> tuple[Estimate, ...]:
    """Rows of the corrections asked for, in the order of `CORRECTIONS`.

    Parameters
    ----------
    table : effect sizes; rows without a point estimate are passed over.
    names : "all", or keys of `CORRECTIONS` as a sequence or parted by commas; an unknown one is a
        SettingError that lists them.
    The others as in `netsize.weigh`.
    """
    settings = Settings(
        heterogeneity=heterogeneity,
        interval=interval,
        level=level,
        within_sample_correlation=within_sample_correlation,
        dependence=dependence,
        steps=tuple(steps),
    )
    keys = _keys(names)
    results = from_table(table, within_sample_correlation=within_sample_correlation)
    return correct_results(results, keys, settings)


def correct_results(
    results: Results, keys: Sequence[str], settings: Settings
) -> tuple[Estimate, ...]:
    """The rows of `keys`; a method that fails numerically says so in its own row."""
    rows = []
    for key in keys:
        correction = CORRECTIONS[key]
        try:
            rows.append(correction.row(results, settings))
        except (SolveError, np.linalg.LinAlgError, ArithmeticError) as error:
            rows.append(
                unusable(
                    key,
                    correction.label,
                    level=settings.level,
                    used=results.means.size,
                    status="did not converge",
                    reason=str(error),
                )
            )
    return tuple(rows if results.metric.signed else map(_without_sign, rows))


def _without_sign(row: Estimate) -> Estimate:
    """Mark a negative value where effects have no sign; it is not cut off, which would bias it."""
    if row.estimate is None or row.estimate >= 0 or row.status != "fine":
        return row
    note = "below 0, which stands for no effect on this scale"
    return replace(
        row, status="at a boundary", reason="; ".join(x for x in (note, row.reason) if x)
    )


def domain_of(results: Results, sides: Sides = "predicted") -> Domain:
    """Effects that searches on exact curves cover."""
    return search_domain(
        results.estimates, results.null_variances, signed=results.metric.signed, sides=sides
    )


def _keys(names: str | Sequence[str]) -> tuple[str, ...]:
    asked = [n.strip() for n in names.split(",")] if isinstance(names, str) else list(names)
    if asked == ["all"]:
        return tuple(CORRECTIONS)
    for name in asked:
        if name not in CORRECTIONS:
            raise SettingError(
                "--corrections",
                f"{name!r} is not one of {', '.join(CORRECTIONS)}; name some of them, or all",
            )
    return tuple(key for key in CORRECTIONS if key in asked)


def _pet(results: Results, settings: Settings) -> Estimate:
    if _clustered(results, settings):
        return clustered.clustered_precision_effect(
            results, "pet", "PET", power=1, level=settings.level
        )
    return small_study.pet(results.means, results.mean_null_variances, level=settings.level)


def _peese(results: Results, settings: Settings) -> Estimate:
    if _clustered(results, settings):
        return clustered.clustered_precision_effect(
            results, "peese", "PEESE", power=2, level=settings.level
        )
    return small_study.peese(results.means, results.mean_null_variances, level=settings.level)


def _pet_peese(results: Results, settings: Settings) -> Estimate:
    if _clustered(results, settings):
        return clustered.clustered_pet_peese(
            results, "pet-peese", "PET-PEESE", level=settings.level
        )
    return small_study.pet_peese(results.means, results.mean_null_variances, level=settings.level)


def _trim_and_fill(results: Results, settings: Settings) -> Estimate:
    return trim_and_fill(
        results.means,
        results.mean_variances,
        asymmetry="L0",
        heterogeneity=settings.heterogeneity,
        interval=settings.interval,
        level=settings.level,
    )


def _trim_and_fill_run(results: Results, settings: Settings) -> Estimate:
    return trim_and_fill(
        results.means,
        results.mean_variances,
        asymmetry="R0",
        heterogeneity=settings.heterogeneity,
        interval=settings.interval,
        level=settings.level,
    )


def _unrestricted(results: Results, settings: Settings) -> Estimate:
    return unrestricted(results.means, results.mean_variances, level=settings.level)


def _adequately_powered(results: Results, settings: Settings) -> Estimate:
    return adequately_powered(results.means, results.mean_variances, level=settings.level)


def _limit(results: Results, settings: Settings) -> Estimate:
    return limit(
        results.means,
        results.mean_variances,
        null_variances=results.mean_null_variances,
        heterogeneity=settings.heterogeneity,
        level=settings.level,
    )


def _step_function(results: Results, settings: Settings) -> Estimate:
    if not results.metric.signed:
        return unusable(
            "step-function",
            CORRECTIONS["step-function"].label,
            level=settings.level,
            used=results.estimates.size,
            status="does not apply",
            reason="one-sided normal p-values do not exist on a scale without direction",
        )
    return step_function(
        results.estimates,
        results.variances,
        null_variances=results.null_variances,
        cuts=settings.steps,
        shares=results.shares,
        level=settings.level,
    )


def _conditional_likelihood(results: Results, settings: Settings) -> Estimate:
    places = list(results.significant)
    return conditional_likelihood(
        [results.evidence[i] for i in places],
        results.shares[places],
        domain_of(results),
        sides="predicted",
        level=settings.level,
    )


def _conditional_either_sign(results: Results, settings: Settings) -> Estimate:
    key = "conditional-either-sign"
    if not results.metric.signed:
        return unusable(
            key,
            CORRECTIONS[key].label,
            level=settings.level,
            used=len(results.significant),
            status="does not apply",
            reason="on a scale without direction it is the conditional likelihood above",
        )
    places = [
        i for i, e in enumerate(results.evidence) if e.low == e.high and abs(e.low) > e.cuts[0]
    ]
    return conditional_likelihood(
        [results.evidence[i] for i in places],
        results.shares[places],
        domain_of(results, "either"),
        sides="either",
        level=settings.level,
    )


def _conditional_quantiles(results: Results, settings: Settings) -> Estimate:
    return conditional_quantiles(
        [results.evidence[i] for i in results.significant],
        domain_of(results),
        level=settings.level,
    )


def _clustered(results: Results, settings: Settings) -> bool:
    return settings.dependence == "clustered" and results.means.size < results.estimates.size


CORRECTIONS: dict[str, Correction] = {
    "unrestricted": Correction("Unrestricted least squares", _unrestricted),
    "adequately-powered": Correction("Adequately powered only", _adequately_powered),
    "pet": Correction("PET", _pet),
    "peese": Correction("PEESE", _peese),
    "pet-peese": Correction("PET-PEESE", _pet_peese),
    "limit": Correction("Limit meta-analysis", _limit),
    "trim-and-fill": Correction("Trim and fill L₀", _trim_and_fill),
    "trim-and-fill-run": Correction("Trim and fill R₀", _trim_and_fill_run),
    "step-function": Correction("Step-function model", _step_function),
    "conditional-likelihood": Correction("Conditional likelihood", _conditional_likelihood),
    "conditional-either-sign": Correction("Conditional (either sign)", _conditional_either_sign),
    "conditional-quantiles": Correction("Uniform p-values", _conditional_quantiles),
}
