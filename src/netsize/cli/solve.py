"""`netsize solve`: the size of a study for a goal, or what a study of a given size can do."""

from __future__ import annotations

import inspect
import json
from typing import Annotated, Any

import typer

from netsize.errors import SettingError

__all__ = ["solve"]

# Option in Python → (its type, its help). Left out, it is not passed on: the library's default
# rules, and the help names it.
_OPTIONS: dict[str, tuple[type, str]] = {
    "metric": (str, "Scale of the effect. Default: the first named above."),
    "effect_sd": (float, "SD of a normal distribution of effects around --effect."),
    "power": (float, "Power wanted. Default 0.80."),
    "expected_power": (float, "Mean power wanted, under --effect-sd."),
    "half_width": (float, "Half-width wanted of the interval of the effect."),
    "assurance": (float, "Probability of the power (under --effect-sd) or of the half-width."),
    "level": (float, "Confidence level of that interval. Default 0.95."),
    "n": (str, "Given size of the smaller group, cell or sample, before losses."),
    "at_most": (float, "Most participants in all; with --cost-per, most money."),
    "cost_per": (float, "Cost of a participant recruited."),
    "fixed_cost": (float, "Cost of the study apart from its participants. Default 0."),
    "alpha": (float, "Level of the test. Default 0.05."),
    "sides": (int, "Sides of the test, 2 or 1. Default 2."),
    "tests": (int, "Tests that share alpha (Bonferroni). Default 1."),
    "loss": (float, "Expected share recruited but not analysed. Default 0."),
    "cluster_size": (int, "Participants analysed per cluster. Default 1."),
    "cluster_correlation": (float, "Intraclass correlation. Default 0."),
    "covariate_r2": (float, "Share of error variance that covariates explain. Default 0."),
    "covariates": (int, "Number of covariates. Default 1."),
    "ratio": (float, "Size of group 2 over group 1. Default 1."),
    "spread_ratio": (float, "SD in group 2 over group 1, Welch's test. Default 1."),
    "pair_correlation": (float, "Correlation ρ within pairs or between measurements."),
    "groups": (int, "Number of groups. Default 3 (anova), 1 (repeated)."),
    "df1": (int, "Degrees of freedom tested (factorial, contingency)."),
    "cells": (int, "Cells of the whole design. Default 4."),
    "occasions": (int, "Measurements of a participant. Default 2."),
    "sphericity": (float, "Sphericity ε of the measurements. Default 1."),
    "tested": (str, "within, between or interaction. Default within."),
    "added_terms": (int, "Predictors tested together. Default 1."),
    "all_terms": (int, "All predictors. Default: those tested."),
    "other_r2": (float, "R² of the predictors not tested. Default 0."),
    "baseline": (float, "Proportion or correlation of group 1, or the fixed value."),
    "test": (str, "pooled, corrected or arcsine. Default pooled."),
    "rows": (int, "Rows of the table. Default 2."),
    "columns": (int, "Columns of the table. Default 2."),
    "margin": (float, "Margin in units of the effect."),
    "comparison": (str, "two-groups, paired or one-sample. Default two-groups."),
}


def solve(*, design: str, effect: str, as_json: bool, **options: Any) -> None:
    """Size a study, or tell what a study of a given size can do.

    Without --n or --at-most the answer is the smallest study that reaches the goal:
    --power, --expected-power or --half-width. --effect and --n take a number, a list
    0.2,0.5 or a range 0.2:0.8:0.1 (first:last:step). Each design with the scales of
    its effect (--metric) and an example:

    \b
    two-groups        d, r, f, eta2         --effect 0.5 --ratio 2
    paired            dz, d (needs ρ)       --effect 0.4 --power 0.9
    one-sample        d                     --effect 0.4 --sides 1
    correlation       r, z                  --effect 0.3
    anova             f, eta2, omega2       --groups 3 --effect 0.25
    factorial         f, eta2, omega2       --df1 2 --cells 6 --effect 0.25
    repeated          f, eta2, omega2       --occasions 4 --effect 0.25
    regression        f2, f, r2, partial-r  --added-terms 2 --effect 0.1
    two-proportions   difference, h,        --baseline 0.3 --effect 0.2
                      proportion, odds-ratio, risk-ratio
    one-proportion    as two-proportions    --baseline 0.5 --effect 0.15
    contingency       w, v                  --columns 3 --effect 0.3
    two-correlations  q, r (of group 2)     --effect 0.3
    equivalence       d or dz               --margin 0.4 --effect 0
    non-inferiority   d or dz               --margin 0.4 --effect 0
    """
    import netsize
    from netsize.presentation.sizing import show_sizing

    given = {name: value for name, value in options.items() if value is not None}
    if "n" in given:
        given["n"] = _numbers("--n", given["n"])
    values = _distribution(effect, given) if "effect_sd" in given else _numbers("--effect", effect)
    sizing = netsize.solve(design, effect=values, **given)
    if as_json:
        typer.echo(json.dumps(sizing.to_dict(), ensure_ascii=False, allow_nan=False))
    else:
        show_sizing(sizing)


def _signature() -> inspect.Signature:
    """Design and effect, then an option for each entry of the table, then --json."""
    required = {
        "design": Annotated[str, typer.Option(help="Design of the study, see above.")],
        "effect": Annotated[str, typer.Option(help="True effect: number, list or range.")],
    }
    parameters = [
        inspect.Parameter(name, inspect.Parameter.KEYWORD_ONLY, annotation=annotation)
        for name, annotation in required.items()
    ]
    for name, (kind, text) in _OPTIONS.items():
        annotation = Annotated[kind | None, typer.Option(help=text, show_default=False)]  # type: ignore[valid-type]
        parameters.append(
            inspect.Parameter(
                name, inspect.Parameter.KEYWORD_ONLY, default=None, annotation=annotation
            )
        )
    as_json = Annotated[bool, typer.Option("--json", help="Print JSON for programs.")]
    parameters.append(
        inspect.Parameter(
            "as_json", inspect.Parameter.KEYWORD_ONLY, default=False, annotation=as_json
        )
    )
    return inspect.Signature(parameters)


solve.__signature__ = _signature()  # type: ignore[attr-defined]
solve.__annotations__ = {p.name: p.annotation for p in solve.__signature__.parameters.values()}  # type: ignore[attr-defined]

_MOST = 10_000  # points of a range


def _numbers(option: str, text: str) -> Any:
    """A number, a list a,b,c, or a range first:last:step with its last point included."""
    try:
        if ":" not in text:
            values = [float(part) for part in text.split(",")]
            return values[0] if len(values) == 1 else values
        first, last, step = (float(part) for part in text.split(":"))
        count = int((last - first) / step + 1 + 1e-9)
        if not 1 <= count <= _MOST:
            raise SettingError(option, f"{text!r} is a range of {count} points; at most {_MOST}")
        return [round(first + i * step, 12) for i in range(count)]
    except (ValueError, ZeroDivisionError, OverflowError):
        raise SettingError(
            option,
            f"{text!r} is no number, no list such as 0.2,0.5 and no range such as 0.2:0.8:0.1",
        ) from None


def _distribution(effect: str, given: dict[str, Any]) -> Any:
    """A normal distribution of effects from `--effect` and `--effect-sd`, taken out of `given`."""
    from netsize.sizing import normal_effects

    mean = _numbers("--effect", effect)
    if isinstance(mean, list):
        raise SettingError("--effect-sd", "takes one effect, not a list or range")
    return normal_effects(mean=mean, sd=given.pop("effect_sd"))
