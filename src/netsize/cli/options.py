"""Options shared by the commands that plan: declared once, added to a command by a decorator.

An option left out is not passed on, so that the library's own defaults rule; the help texts name
them.
"""

from __future__ import annotations

import inspect
from collections.abc import Callable
from functools import wraps
from typing import Annotated, Any

import typer

from netsize.errors import SettingError

__all__ = ["SkipUnread", "Source", "numbers", "planning_options", "spelled"]

Source = Annotated[
    str | None,
    typer.Argument(
        help="A file, or - for standard input; left out on a terminal: paste.", show_default=False
    ),
]
SkipUnread = Annotated[
    bool, typer.Option("--skip-unread", help="Leave out places that cannot be read, and list them.")
]


def _option(kind: Any, help: str, *names: str, panel: str | None = None) -> Any:
    return Annotated[
        kind | None, typer.Option(*names, help=help, show_default=False, rich_help_panel=panel)
    ]


# name in Python → what the user sees
_OPTIONS: dict[str, Any] = {
    "design": _option(
        str,
        "Design of the new study: two-groups, paired, one-sample, correlation, anova, factorial, "
        "repeated, regression, contingency. Default: as the evidence.",
    ),
    "alpha": _option(float, "Level of its test. Default 0.05."),
    "sides": _option(int, "Sides of its test, 2 or 1. Default 2."),
    "power": _option(float, "Power wanted. Default 0.80."),
    "assurance": _option(
        float, "Probability with which the study is to reach its target. Default 0.80."
    ),
    "smallest_effect": _option(float, "Smallest effect of interest, on the scale of the table."),
    "ratio": _option(float, "Size of group 2 over group 1. Default 1."),
    "target": _option(
        str, "Plan for the effect of a new-study, or for the mean. Default new-study."
    ),
    "rule": _option(
        str,
        "Where the planning value comes from: averaged, profile, pooled-limit, single-study, "
        "fixed. Default averaged.",
    ),
    "planning_effect": _option(float, "The effect to plan for, with --rule fixed."),
    "goal": _option(str, "power, assurance, precision or budget. Default power."),
    "half_width": _option(float, "Half-width of the interval wanted, with --goal precision."),
    "assured": _option(
        bool, "Keep within the half-width with probability --assurance, not only on average."
    ),
    "at_most": _option(
        float, "Most participants (or most money, with --cost-per), with --goal budget."
    ),
    "cost_per": _option(float, "Cost of one participant."),
    "fixed_cost": _option(float, "Cost of the study apart from its participants. Default 0."),
    "corrections": _option(
        str, "Published corrections to add as rows: all, or names joined by commas."
    ),
    "groups": _option(int, "Groups (anova, repeated)."),
    "df1": _option(int, "Degrees of freedom of the effect (factorial, contingency)."),
    "cells": _option(int, "Cells of the whole design (factorial)."),
    "occasions": _option(int, "Measurements a participant (repeated)."),
    "added_terms": _option(int, "Predictors tested together (regression)."),
    "all_terms": _option(int, "All predictors (regression)."),
    "spread_ratio": _option(float, "SD of group 2 over group 1 (two-groups). Default 1."),
    "tests": _option(int, "Tests that share alpha. Default 1."),
    "loss": _option(float, "Expected share recruited but not analysed. Default 0."),
    "cluster_size": _option(int, "Participants a cluster. Default 1."),
    "cluster_correlation": _option(float, "Correlation within clusters. Default 0."),
    "covariate_r2": _option(float, "Share of variance that covariates explain. Default 0."),
    "metric": _option(
        str,
        "Scale to pool on: mean-difference, difference-score, fisher-z, cohen-f. Default: the "
        "design's, or the evidence's.",
    ),
    "correlation": _option(
        float, "Correlation within pairs, to convert between paired and unpaired.", "--within-pair"
    ),
    "cut_points": _option(
        str, "Two-sided levels that part the p-bands, joined by commas. Default 0.05."
    ),
    "within_sample_correlation": _option(
        float, "Assumed correlation of results that share a sample. Default 0.5."
    ),
    "heterogeneity": _option(
        str,
        "Estimator of heterogeneity for the pooled row: restricted-likelihood (default), "
        "likelihood, dersimonian-laird, paule-mandel, sidik-jonkman, hedges.",
    ),
    "interval": _option(str, "Interval of the pooled row: hartung-knapp (default) or wald."),
    "level": _option(float, "Confidence level of the intervals. Default 0.95."),
    "effect_scale": _option(
        float, "Prior SD of the mean effect. Default 0.8 on d, 0.4 on r and f."
    ),
    "heterogeneity_scale": _option(
        float, "Prior scale of the between-study SD. Default 0.25 on d, 0.125 on r and f."
    ),
    "printing_floor": _option(
        float, "Lowest relative chance of printing a result that is not significant. Default 0.01."
    ),
    "negligible": _option(float, "Prior probability of a negligible effect. Default 0.5."),
}


def planning_options(command: Callable[..., Any]) -> Callable[..., Any]:
    """Give a command all planning options; it receives those used as the dict `choices`."""
    own = [
        p
        for p in inspect.signature(command, eval_str=True).parameters.values()
        if p.name != "choices"
    ]
    added = [
        inspect.Parameter(name, inspect.Parameter.KEYWORD_ONLY, default=None, annotation=annotation)
        for name, annotation in _OPTIONS.items()
    ]

    @wraps(command)
    def wrapper(**values: Any) -> Any:
        given = {name: values.pop(name) for name in _OPTIONS}
        choices = {name: value for name, value in given.items() if value is not None}
        if "cut_points" in choices:
            choices["cut_points"] = numbers("--cut-points", choices["cut_points"])
        if "corrections" in choices:
            choices["corrections"] = tuple(x.strip() for x in choices["corrections"].split(","))
        return command(**values, choices=choices)

    parameters = [p.replace(kind=inspect.Parameter.KEYWORD_ONLY) for p in own] + added
    wrapper.__signature__ = inspect.Signature(parameters)  # type: ignore[attr-defined]
    wrapper.__annotations__ = {p.name: p.annotation for p in parameters}
    return wrapper


def numbers(option: str, text: str) -> tuple[float, ...]:
    """Numbers joined by commas; SettingError naming the option where one is none."""
    try:
        return tuple(float(part) for part in text.split(","))
    except ValueError:
        raise SettingError(option, f"{text!r} is not a list of numbers such as 0.05,0.10") from None


def spelled(choices: dict[str, Any]) -> list[str]:
    """Choices as the words of a command line, for the record."""
    words: list[str] = []
    for name, value in choices.items():
        info = _OPTIONS[name].__metadata__[0]
        # the first name stands in the place of a default that an annotation does not have
        own = [n for n in (info.default, *(info.param_decls or ())) if isinstance(n, str)]
        option = own[0] if own else f"--{name.replace('_', '-')}"
        if value is True:
            words.append(option)
        elif isinstance(value, tuple):
            words += [option, ",".join(f"{v:g}" if isinstance(v, float) else v for v in value)]
        else:
            words += [option, f"{value:.12g}" if isinstance(value, float) else str(value)]
    return words
