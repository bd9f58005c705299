"""A plan as text: the one-sentence answer, the table, what it rests on."""

from __future__ import annotations

from collections.abc import Sequence

from netsize.planning.answer import Alternative
from netsize.planning.consequences import Consequence, Habit
from netsize.planning.plan import Plan
from netsize.planning.rows import Row
from netsize.planning.sensitivity import Variation
from netsize.presentation.format import (
    bayes_factor,
    count,
    counts,
    effect,
    factor,
    interval,
    percent,
    probability,
    stated,
)
from netsize.presentation.headline import headline
from netsize.presentation.terminal import Column, show_list, show_table, show_text

__all__ = ["CAUTION", "show_plan", "show_variations"]

CAUTION = (
    "Estimates are no guarantee. Follow the ethics and regulatory rules that apply to you, and "
    "have a qualified statistician review clinical or animal protocols."
)


def show_plan(plan: Plan) -> None:
    """Print a plan: answer, evidence, table, chances, consequences, assumptions, warnings."""
    show_text(headline(plan))
    show_text("")
    show_text(_evidence(plan))
    show_text("")
    symbol = plan.metric.symbol
    show_table(
        [
            ("reading of the evidence", "left"),
            (symbol, "right"),
            *_limit_column(plan),
            (f"{plan.settings.level:.0%} interval", "right"),
            (f"n per {plan.study.design.group_word}", "right"),
            ("n total", "right"),
            *_extra_columns(plan),
            ("power of as-printed n", "right"),
        ],
        [
            (
                row.label + (f" ({row.note})" if row.note else ""),
                effect(row.effect),
                *([effect(row.limit)] if plan.settings.goal == "assurance" else []),
                interval(row.low, row.high),
                counts(row.sized.n_per_group) if row.sized.n_total else _no_size(row.limit),
                count(row.sized.n_total),
                *_extra_cells(plan, row),
                probability(row.power_of_naive_n),
            )
            for row in plan.rows
        ],
    )
    show_text("")
    for sentence in _chances(plan):
        show_text(sentence)
    if plan.answer.alternatives:
        show_list("Sizes that exist:", [_alternative(plan, a) for a in plan.answer.alternatives])
        show_text(
            "Or name a smallest effect of interest (--smallest-effect), or consider a design with "
            "interim looks."
        )
    show_list("If the as-printed n were used:", [_consequence(plan, c) for c in plan.consequences])
    show_list("Common habits, for contrast:", [_habit(h) for h in plan.habits])
    show_list("Left out:", [f"{x.label}: {x.reason}" for x in plan.literature.left_out])
    show_list("Warnings:", list(plan.warnings))
    show_list("Assumed:", list(plan.assumptions))
    show_text(CAUTION)


def show_variations(plan: Plan, variations: Sequence[Variation]) -> None:
    """Print how the answer moves, a changed choice or a missing sample a row."""
    symbol = plan.metric.symbol
    show_text("How the answer moves:")
    show_table(
        [
            ("changed", "left"),
            (f"planning {symbol}", "right"),
            (f"median {symbol}", "right"),
            ("P(negligible)", "right"),
            ("n total", "right"),
        ],
        [
            (
                v.label,
                effect(v.value),
                effect(v.median),
                probability(v.probability_negligible),
                count(v.sized.n_total) if v.sized.n_total else "none",
            )
            for v in variations
        ],
    )


def _limit_column(plan: Plan) -> list[Column]:
    return [("planned for", "right")] if plan.settings.goal == "assurance" else []


def _extra_columns(plan: Plan) -> list[Column]:
    if plan.settings.goal == "precision":
        return [("power", "right")]
    if plan.settings.goal == "budget":
        return [("half-width", "right"), ("exaggeration", "right"), ("wrong sign", "right")]
    return []


def _extra_cells(plan: Plan, row: Row) -> list[str]:
    if plan.settings.goal == "precision":
        return [probability(row.power)]
    if plan.settings.goal == "budget":
        return [effect(row.half_width), factor(row.exaggeration), probability(row.sign_error)]
    return []


def _evidence(plan: Plan) -> str:
    literature = plan.literature
    k, samples = len(literature.rows), len(literature.samples)
    return (
        f"Evidence: {k} result{'s' if k != 1 else ''} from {samples} "
        f"sample{'s' if samples != 1 else ''}, {count(sum(literature.samples.values()))} "
        f"participants; {literature.significant} significant in the predicted direction; pooled as "
        f"{plan.metric.title} ({plan.metric.symbol})."
    )


def _no_size(value: float | None) -> str:
    return "none" if value is not None and value <= 0 else "-"


def _chances(plan: Plan) -> list[str]:
    answer = plan.answer
    given = "Given an effect, " if plan.settings.rule == "averaged" else "Planning distribution: "
    out = [
        f"P(negligible effect) {stated(answer.probability_negligible)}. {given}"
        f"{answer.origin}: median {effect(answer.median)}, central {percent(plan.settings.level)} "
        f"{interval(answer.low, answer.high)}."
    ]
    if answer.chance_significant is not None:
        out.append(
            f"Chance that the sized study ends significant as predicted{_included(plan)}: "
            f"{probability(answer.chance_significant)}; no study, however large, exceeds "
            f"{probability(answer.ceiling)}."
        )
    else:
        out.append(
            f"Chance of a significant result as predicted, as n grows without end: "
            f"{probability(answer.ceiling)}."
        )
    out.append(_selection(plan))
    return out


def _included(plan: Plan) -> str:
    return ", negligible effects included" if plan.settings.rule == "averaged" else ""


def _selection(plan: Plan) -> str:
    """What the evidence says about printing: ω of the band below significance, and its trace."""
    fit = plan.literature.averaged
    omega = fit.printing[0].quantile([0.025, 0.5, 0.975])
    unprinted = fit.unprinted.quantile([0.025, 0.5, 0.975])
    tau = fit.heterogeneity.quantile([0.025, 0.5, 0.975])
    return (
        f"Selective printing: a result below the first band is printed {effect(omega[1])} times "
        f"as often as one in it {interval(omega[0], omega[2])}, and {percent(unprinted[1])} of "
        f"results never were ({percent(unprinted[0])} to {percent(unprinted[2])}); Bayes factor "
        f"for selection {bayes_factor(plan.literature.log_bayes_factor_selection)}, for an effect "
        f"{bayes_factor(fit.log_bayes_factor)}. Between-study SD {effect(tau[1])} "
        f"{interval(tau[0], tau[2])}."
    )


def _alternative(plan: Plan, a: Alternative) -> str:
    return f"{a.what}: {plan.metric.symbol} = {effect(a.effect)}, n = {count(a.sized.n_total)}"


def _consequence(plan: Plan, c: Consequence) -> str:
    text = (
        f"were the effect the {c.label} ({plan.metric.symbol} = {effect(c.effect)}), "
        f"{count(c.n_total)} participants would give power {probability(c.power)}"
    )
    if c.exaggeration is None:
        return text
    return (
        f"{text}; a significant estimate would be {factor(c.exaggeration)} times too large on "
        f"average and have the wrong sign with probability {probability(c.sign_error)}"
    )


def _habit(h: Habit) -> str:
    return (
        f"{h.label}, n total {count(h.n_total)}: power {probability(h.power_at_value)} at the "
        f"planning value, {probability(h.power_at_median)} at the median"
    )
