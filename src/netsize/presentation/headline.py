"""The answer of a plan in two or three sentences."""

from __future__ import annotations

import math

from netsize.planning.plan import Plan
from netsize.presentation.format import count, counts, effect, ordinal, percent

_IMPRACTICAL = 10_000  # participants

__all__ = ["headline", "planned", "value_in_words"]


def headline(plan: Plan) -> str:
    """The n and what it rests on, or that no finite n exists and what to do instead."""
    if not plan.answer.finite:
        sentences = [_no_finite_size(plan)]
    elif plan.settings.goal == "budget":
        sentences = [_budget(plan)]
    elif plan.settings.goal == "precision":
        sentences = [_precision(plan), _as_printed_size(plan)]
    else:
        sentences = [_power(plan), _as_printed(plan)]
    if (plan.answer.sized.n_total or 0) > _IMPRACTICAL:
        sentences.append(
            "A size like this says that the evidence does not fix one: name a smallest effect of "
            "interest with --smallest-effect, or plan at a lower assurance."
        )
    if plan.answer.probability_negligible > 0.5:
        sentences.append(
            "Caution: the evidence is better explained by no effect than by one "
            f"(probability {percent(plan.answer.probability_negligible)})."
        )
    return " ".join(s for s in sentences if s)


def _power(plan: Plan) -> str:
    return (
        f"Plan for {planned(plan)}: {percent(plan.settings.power)} power at "
        f"{_value(plan)}, {value_in_words(plan)}."
    )


def _precision(plan: Plan) -> str:
    s = plan.settings
    kept = f"with probability {percent(s.assurance)}" if s.assured else "on average"
    return (
        f"Plan for {planned(plan)}: the {percent(s.level)} interval of the effect reaches at "
        f"most {effect(s.half_width)} to either side {kept} at {_value(plan)}, "
        f"{value_in_words(plan)}."
    )


def _budget(plan: Plan) -> str:
    row, naive = plan.row("planning-value"), plan.row("as-printed")
    text = (
        f"The budget pays for {planned(plan)}: power {percent(row.power or 0.0)} at "
        f"{_value(plan)}, {value_in_words(plan)}"
    )
    if naive.power is not None:
        text += (
            f", where the papers as printed ({plan.metric.symbol} = {effect(naive.effect)}) would "
            f"promise {percent(naive.power)}"
        )
    text += "."
    if plan.answer.detectable is not None:
        text += (
            f" The smallest effect it finds with {percent(plan.settings.power)} power is "
            f"{plan.metric.symbol} = {effect(plan.answer.detectable)}."
        )
    return text


def _as_printed_size(plan: Plan) -> str:
    naive = plan.row("as-printed")
    if naive.sized.n_total is None:
        return ""
    return (
        f"Taken as printed ({plan.metric.symbol} = {effect(naive.effect)}), the papers would "
        f"suggest {count(naive.sized.n_total)}: precision depends little on the effect."
    )


def _as_printed(plan: Plan) -> str:
    naive = plan.row("as-printed")
    power = plan.row("planning-value").power_of_naive_n
    if naive.sized.n_total is None or power is None:
        return ""
    return (
        f"Taken as printed ({plan.metric.symbol} = {effect(naive.effect)}), the papers would "
        f"suggest {count(naive.sized.n_total)}, whose power at that value is {percent(power)}."
    )


def _no_finite_size(plan: Plan) -> str:
    answer = plan.answer
    wanted = f"{percent(plan.settings.power)} power with {percent(answer.assurance)} assurance"
    what = value_in_words(plan)
    if answer.value == -math.inf:
        text = f"No finite sample size reaches {wanted}: {what} has no lower limit."
    elif answer.value <= 0:
        text = f"No finite sample size reaches {wanted}: {what} is {_value(plan)}, not above zero."
    else:
        text = (
            f"No sample size within reach gives {wanted}: {what} is {_value(plan)}, so small that "
            "more than a hundred million participants a group would be needed."
        )
    lower = [a for a in answer.alternatives if a.assurance != answer.assurance]
    if lower:
        text += (
            f" A finite size exists below {percent(answer.highest_assurance)} assurance; with "
            f"{lower[0].what} it is {count(lower[0].sized.n_total)} participants."
        )
    return text


def value_in_words(plan: Plan) -> str:
    """What the planning value is, in words."""
    if plan.answer.from_smallest:
        return "the smallest effect of interest"
    return {
        "averaged": (
            f"the {_percentile(plan)} of what the evidence supports, net of selection and given "
            "an effect"
        ),
        "profile": f"the {_percentile(plan)} of what the evidence supports net of selection",
        "pooled-limit": f"the {_percentile(plan)} of the pooled mean, not corrected for selection",
        "single-study": (
            f"the {_percentile(plan)} of what one study supports, given that it is significant"
        ),
        "fixed": "the effect given",
    }[plan.settings.rule]


def _percentile(plan: Plan) -> str:
    return f"{ordinal(100 * (1 - plan.answer.assurance))} percentile"


def _value(plan: Plan) -> str:
    return f"{plan.metric.symbol} = {effect(plan.answer.value)}"


def planned(plan: Plan) -> str:
    """The size in words, with its groups and how many to recruit where that differs."""
    sized = plan.answer.sized
    groups = sized.n_per_group or ()
    text = f"{count(sized.n_total)} participants"
    if len(groups) > 1:
        text += f" ({counts(groups)} per {plan.study.design.group_word})"
    if sized.recruited != sized.n_total:
        text += f", {count(sized.recruited)} recruited"
    return text
