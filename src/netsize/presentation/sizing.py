"""A sizing as text: the answer in a sentence, the table, what was taken for granted."""

from __future__ import annotations

import numpy as np

from netsize.numerics.arrays import Array
from netsize.presentation.format import count, counts, effect, factor, percent, probability
from netsize.presentation.terminal import Column, show_list, show_table, show_text
from netsize.sizing.records import Abilities, Sizing

__all__ = ["show_sizing", "sizing_sentence"]

_SYMBOLS = {
    "eta2": "η²",
    "omega2": "ω²",
    "f2": "f²",
    "r2": "ΔR²",
    "v": "V",
    "partial-r": "partial r",
}


def show_sizing(sizing: Sizing) -> None:
    """Print a sizing: answer, table, assumptions, caution."""
    from netsize.presentation.planning import CAUTION

    found = sizing.abilities() if sizing.goal.kind == "given" else None
    show_text(sizing_sentence(sizing, found))
    show_text("")
    columns, rows = _table(sizing, found)
    show_table(columns, rows)
    show_text("")
    show_list("Taken for granted", sizing.assumptions())
    show_text("")
    show_text(CAUTION)


def sizing_sentence(sizing: Sizing, found: Abilities | None = None) -> str:
    """The answer in a sentence; `found` for a size that was given."""
    if sizing.effect.size > 1:
        return f"{_design(sizing)}: {sizing.effect.size} cases, {_goal(sizing)}."
    if not sizing.finite.all():
        return _no_size(sizing)
    people = _participants(sizing)
    at = f"{_symbol(sizing)} = {effect(float(sizing.effect.flat[0]))}"
    power, reached = float(sizing.power.flat[0]), float(sizing.reached.flat[0])
    kind = sizing.goal.kind
    if kind == "given" and found is not None:
        text = f"With {people} the power to {_aim(sizing)} {at} is {percent(power)}"
        least = float(found.detectable.flat[0])
        if np.isfinite(least):
            text += (
                f"; the smallest effect found with {percent(sizing.goal.target)} power is "
                f"{effect(least)}"
            )
        return text + "."
    if kind == "half-width":
        return f"Plan for {people}: {_goal(sizing)} at {at}; it comes to {effect(reached)}."
    if kind == "power":
        return f"Plan for {people}: power {percent(power)} to {_aim(sizing)} {at}."
    if kind == "assurance":
        return (
            f"Plan for {people}: with probability {percent(reached)} the power is "
            f"{percent(sizing.goal.target)} or more. The effect planned for is {at}."
        )
    return (
        f"Plan for {people}: averaged over the distribution of effects the power is "
        f"{percent(reached)}; no size brings it above {percent(sizing.ceiling)}."
    )


def _design(sizing: Sizing) -> str:
    title = sizing.study.design.title
    return title[0].upper() + title[1:]


def _symbol(sizing: Sizing) -> str:
    return _SYMBOLS.get(sizing.metric.name, sizing.metric.name)


def _goal(sizing: Sizing) -> str:
    goal = sizing.goal
    if goal.kind == "given":
        return "what a study of the given size can do"
    if goal.kind == "half-width":
        kept = "on average"
        if goal.assurance is not None:
            kept = f"with probability {percent(goal.assurance)}"
        return (
            f"the {percent(goal.level)} interval reaches at most {effect(goal.target)} to either "
            f"side {kept}"
        )
    return f"the fewest participants with {percent(goal.target)} power"


def _participants(sizing: Sizing) -> str:
    groups = [int(g) for g in sizing.n_per_group.reshape(-1)]
    total, recruited = int(sizing.n_total.flat[0]), int(sizing.recruited_total.flat[0])
    text = f"{count(total)} participants"
    if len(groups) > 1:
        text += f" ({counts(groups)} per {sizing.study.design.group_word})"
    if recruited != total:
        text += f", {count(recruited)} recruited"
    if np.isfinite(sizing.cost).all():
        text += f" at a cost of {float(sizing.cost.flat[0]):,.0f}"
    return text


def _no_size(sizing: Sizing) -> str:
    """Why there is none, and what to do instead."""
    shown = f"{_symbol(sizing)} = {effect(float(sizing.effect.flat[0]))}"
    kind = sizing.goal.kind
    if kind == "assurance":
        return (
            f"No finite sample size reaches {percent(sizing.goal.target)} power with "
            f"{percent(sizing.goal.assurance or 0.0)} assurance: that quantile of the distribution "
            f"is {shown}. A finite size exists below {percent(sizing.ceiling)} assurance; or plan "
            "for the smallest effect of interest with --effect alone."
        )
    if kind == "expected-power":
        return (
            f"No finite sample size has an expected power of {percent(sizing.goal.target)}: as n "
            f"grows it tends to {percent(sizing.ceiling)}, the probability of an effect in the "
            "predicted direction. Ask for less, or plan for a smallest effect of interest."
        )
    if sizing.study.design.name in ("equivalence", "non-inferiority"):
        return (
            f"No finite sample size: a true difference of {shown} lies at or beyond the margin. "
            "Widen --margin for a reason of substance, or do not claim it."
        )
    return (
        f"No finite sample size finds {shown} with {percent(sizing.goal.target)} power. Give the "
        "smallest effect of interest as --effect, plan for precision with --half-width, or show "
        "that the effect is negligible with --design equivalence --margin."
    )


def _table(sizing: Sizing, found: Abilities | None) -> tuple[list[Column], list[tuple[str, ...]]]:
    """Columns and rows, a row an effect."""
    columns: list[Column] = [
        (_symbol(sizing), "right"),
        (f"n per {sizing.study.design.group_word}", "right"),
        ("n total", "right"),
    ]
    losing = bool(np.any(sizing.recruited_total != sizing.n_total))
    priced = bool(np.any(np.isfinite(sizing.cost)))
    if losing:
        columns.append(("recruited", "right"))
    if priced:
        columns.append(("cost", "right"))
    columns.append(("power", "right"))
    own = sizing.study.design.metrics[0].name
    width = "half-width" if sizing.metric.name == own else f"half-width of {_SYMBOLS.get(own, own)}"
    reached = {"half-width": width, "assurance": "assurance", "expected-power": "mean power"}
    if sizing.goal.kind in reached:
        columns.append((reached[sizing.goal.kind], "right"))
    if found is not None:
        columns += [
            ("sign error", "right"),
            ("exaggeration", "right"),
            (width, "right"),
            (f"least {_symbol(sizing)} at {percent(sizing.goal.target)}", "right"),
        ]
    rows = []
    for i in range(sizing.effect.size):
        finite = bool(sizing.finite.flat[i])
        groups = sizing.n_per_group.reshape(sizing.effect.size, -1)[i].tolist()
        row = [
            effect(_at(sizing.effect, i)),
            counts(groups) if finite else "no finite n",
            count(int(sizing.n_total.flat[i]) if finite else None),
        ]
        if losing:
            row.append(count(int(sizing.recruited_total.flat[i]) if finite else None))
        if priced:
            row.append(f"{_at(sizing.cost, i):,.0f}" if finite else "-")
        row.append(probability(_at(sizing.power, i)))
        if sizing.goal.kind in reached:
            as_text = effect if sizing.goal.kind == "half-width" else probability
            row.append(as_text(_at(sizing.reached, i)))
        if found is not None:
            row += [
                probability(_at(found.sign_error, i)),
                factor(_at(found.exaggeration, i)),
                effect(_at(found.half_width, i)),
                effect(_at(found.detectable, i)),
            ]
        rows.append(tuple(row))
    return columns, rows


def _at(values: Array, i: int) -> float:
    return float(values.flat[i])


def _aim(sizing: Sizing) -> str:
    """What the test is to show; the effect follows."""
    margin = getattr(sizing.study.design, "margin", None)
    if sizing.study.design.name == "equivalence":
        return f"show a difference below {effect(margin)} either way if the true one is"
    if sizing.study.design.name == "non-inferiority":
        return f"show that the loss stays below {effect(margin)} if the true difference is"
    return "find"
