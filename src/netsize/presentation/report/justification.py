"""The justification of the sample size in three lengths, built from the plan's numbers.

Each sentence says what was done or what came out; none says more than the plan holds. Every number
in them stands in a table of the page too, which a test checks.
"""

from __future__ import annotations

from collections.abc import Sequence

from netsize.planning.plan import Plan
from netsize.planning.sensitivity import Variation
from netsize.presentation import format as fmt
from netsize.presentation.headline import planned, value_in_words
from netsize.synthesis.weighing import Weighing

__all__ = ["full_methods", "one_sentence", "over_everything", "protocol_paragraph"]

_TESTS = {
    "two-groups": "a t test of two independent groups",
    "paired": "a t test of paired differences",
    "one-sample": "a one-sample t test",
    "correlation": "a test of one correlation",
    "anova": "a one-way analysis of variance",
    "factorial": "an F test of one effect in a factorial design",
    "repeated": "a repeated-measures F test",
    "regression": "an F test of the increment of R² in a regression",
    "contingency": "a chi-square test of a contingency table",
}


def one_sentence(plan: Plan) -> str:
    """For an abstract; a second sentence where the evidence speaks against an effect."""
    negligible = plan.answer.probability_negligible
    if negligible <= 0.5:
        return _planned_sentence(plan)
    return (
        f"{_planned_sentence(plan)} The same evidence is better explained by no effect than by one "
        f"(P(negligible effect) {fmt.stated(negligible)})."
    )


def _planned_sentence(plan: Plan) -> str:
    if not plan.answer.finite:
        return (
            f"From {_literature(plan)}, no finite sample size reaches {_power(plan)} with "
            f"{_assurance(plan)} assurance (planning value {_value(plan)})."
        )
    naive, value, goal = plan.row("as-printed"), plan.row("planning-value"), plan.settings.goal
    basis = f"{_value(plan)}, {value_in_words(plan)}"
    if not _given(plan):
        basis += f" (estimated from {_literature(plan)})"
    if goal == "budget":
        power = fmt.percent(value.power or 0.0)
        return f"The budget allows {planned(plan)}: {power} power at {basis}."
    text = f"We plan for {planned(plan)}: {_purpose(plan)} at {basis}"
    if goal == "precision" or naive.sized.n_total is None or value.power_of_naive_n is None:
        return text + "."
    return (
        f"{text}; the mean of the printed effects ({_symbol(plan)} = {fmt.effect(naive.effect)}) "
        f"would suggest {fmt.count(naive.sized.n_total)} participants, with "
        f"{fmt.percent(value.power_of_naive_n)} power at that value."
    )


def protocol_paragraph(plan: Plan) -> str:
    """For a protocol or an ethics application."""
    return " ".join([*_evidence(plan), *_belief(plan), *_size(plan), *_wrong(plan)])


def full_methods(
    plan: Plan,
    weighing: Weighing | None,
    variations: Sequence[Variation],
    without: Sequence[Variation],
    *,
    disagreements: int,
    version: str,
) -> str:
    """For a methods section or a registration."""
    return " ".join(
        [
            *_evidence(plan),
            *_reading(plan, disagreements),
            *_belief(plan),
            *_model(plan),
            *_corrections(plan, weighing),
            *_size(plan),
            *_wrong(plan),
            *_moves(plan, variations, without),
            f"Computed with netsize {version}; the computation has no random part.",
        ]
    )


def _evidence(plan: Plan) -> list[str]:
    literature = plan.literature
    text = (
        f"The sample size rests on {_literature(plan)} "
        f"({fmt.count(sum(literature.samples.values()))} participants), {_significant(plan)}"
    )
    if literature.left_out:
        count = len(literature.left_out)
        text += f"; {count} more {'was' if count == 1 else 'were'} read and left out"
    return [text + "."]


def _significant(plan: Plan) -> str:
    k, significant = len(plan.literature.rows), plan.literature.significant
    if k == 1:
        return f"which is {'' if significant else 'not '}significant {_as_predicted(plan)}"
    share = {0: "none", k: "all"}.get(significant, str(significant))
    return f"{share} of which {'is' if significant in (0, 1) else 'are'} significant " + (
        _as_predicted(plan)
    )


def _reading(plan: Plan, disagreements: int) -> list[str]:
    sentences = [
        f"Each result was expressed as {_scale(plan)} with a correction for small samples, and "
        f"given the exact {fmt.percent(plan.settings.level)} interval of its own test statistic.",
        "The printed numbers of each result were checked against each other; "
        + (
            "no disagreement was found."
            if disagreements == 0
            else f"{disagreements} disagreement{'s were' if disagreements > 1 else ' was'} found "
            "and left as printed."
        ),
    ]
    if len(plan.literature.samples) < len(plan.literature.rows):
        rho = plan.settings.within_sample_correlation
        sentences.append(f"Results of one sample were taken to correlate {rho:g}.")
    return sentences


def _belief(plan: Plan) -> list[str]:
    answer, naive = plan.answer, plan.row("as-printed")
    symbol, rule = _symbol(plan), plan.settings.rule
    sentences = []
    if naive.effect is not None:
        several = plan.literature.printed.size > 1
        sentences.append(
            f"As printed, the effect{'s average' if several else ' is'} {symbol} = "
            f"{fmt.effect(naive.effect)}."
        )
    negligible = (
        f"The posterior probability of a negligible effect is "
        f"{_probability(answer.probability_negligible)}."
    )
    if rule == "fixed":
        return [
            *sentences,
            f"The effect planned for, {_value(plan)}, was set beforehand and not estimated.",
            negligible,
        ]
    middle = (
        f"a median of {symbol} = {fmt.effect(answer.median)}, central 95% interval "
        f"{fmt.interval(answer.low, answer.high)}"
    )
    whose = "a new study's effect" if plan.settings.target == "new-study" else "the mean effect"
    if rule in ("averaged", "profile"):
        sentences.append(
            "Because significant results may have been likelier to be printed, we did not plan for "
            "the printed effects but fitted a selection model to the exact distributions of the "
            "printed statistics (after Hedges 1992; Vevea & Hedges 1995)."
        )
        given = (
            f"Given that there is an effect, {whose}" if rule == "averaged" else whose.capitalize()
        )
        sentences.append(f"{given} has {middle}.")
    else:
        source = "the pooled mean" if rule == "pooled-limit" else "one significant study"
        sentences.append(f"The planning distribution comes from {source} ({middle}).")
    sentences.append(negligible)
    samples = len(plan.literature.samples)
    if samples < 5 and rule in ("averaged", "profile"):
        sentences.append(
            f"With only {samples} independent sample{'s' if samples > 1 else ''} this rests "
            "heavily on prior assumptions."
        )
    return sentences


def _model(plan: Plan) -> list[str]:
    p, s = plan.literature.averaged.priors, plan.settings
    if s.rule not in ("averaged", "profile"):
        return []
    cuts = " and ".join(fmt.p_limit(c) for c in s.cut_points)
    text = (
        f"The model lets the chance of being printed change at two-sided p = {cuts}"
        f"{_direction(plan)}."
    )
    if s.rule == "profile":
        return [text, "Heterogeneity and selection were profiled out of its likelihood."]
    shape = "normal" if plan.metric.signed else "half-normal"
    return [
        text,
        "It averages over what cannot be known from so few results: the mean effect (prior "
        f"{shape}, scale {p.effect_scale:g} on {_pooling(plan)}), the spread between studies "
        f"(half-normal, scale {p.heterogeneity_scale:g}), and the relative chance of printing a "
        f"non-significant result (log-uniform from {p.printing_floor:g} to 1), with prior "
        f"probability {p.negligible:g} that the effect is negligible.",
    ]


def _corrections(plan: Plan, weighing: Weighing | None) -> list[str]:
    if weighing is None:
        return []
    values = [
        value
        for e in weighing.corrections
        if e.status in ("fine", "at a boundary")
        and (value := weighing.shown(e.estimate)) is not None
    ]
    symbol, pooled = _symbol(plan), weighing.pooled
    mean = (
        f"For comparison, the random-effects mean is {symbol} = "
        f"{fmt.effect(weighing.shown(pooled.mean))} "
        f"{fmt.interval(weighing.shown(pooled.low), weighing.shown(pooled.high))}"
    )
    if not values:
        return [mean + "; no classical correction can be computed from this literature."]
    if len(values) == 1:
        return [
            f"{mean}, and the one classical correction that runs gives {fmt.effect(values[0])}."
        ]
    return [
        f"{mean}, and {len(values)} classical corrections for selective publication range from "
        f"{fmt.effect(min(values))} to {fmt.effect(max(values))}."
    ]


def _size(plan: Plan) -> list[str]:
    if not plan.answer.finite:
        return _no_size(plan)
    s, answer = plan.settings, plan.answer
    test = _TESTS[plan.study.design.name]
    level = f"two-sided α = {fmt.p_limit(s.alpha)}"
    if not plan.study.design.law.directional:
        level = f"α = {fmt.p_limit(s.alpha)}"
    elif s.sides == 1:
        level = f"one-sided α = {fmt.p_limit(s.alpha)}"
    tests = plan.study.modifiers.tests
    if tests > 1:
        level += f" shared by {tests} tests"
    sentences = [f"We plan for {_value(plan)}, {value_in_words(plan)}."]
    if s.goal == "precision":
        kept = f"with probability {fmt.percent(s.assurance)}" if s.assured else "on average"
        sentences.append(
            f"The {fmt.percent(s.level)} interval of the effect then has a half-width of at most "
            f"{fmt.effect(s.half_width)} {kept} with {planned(plan)}; the design is that of {test}."
        )
    elif s.goal == "budget":
        power = plan.row("planning-value").power
        sentences.append(
            f"The budget allows {planned(plan)}; with {test} at {level} this gives "
            f"{fmt.percent(power or 0.0)} power at that value"
            + (
                f", and {_power(plan)} from {_symbol(plan)} = {fmt.effect(answer.detectable)} on."
                if answer.detectable is not None
                else "."
            )
        )
    else:
        sentences.append(f"With {test} at {level}, {_power(plan)} then takes {planned(plan)}.")
    if answer.chance_significant is not None:
        sentences.append(
            f"Taken {over_everything(plan)}, the chance that the study ends significant "
            f"{_as_predicted(plan)} is {_probability(answer.chance_significant)}; "
            f"no study of this design, however large, would exceed {_probability(answer.ceiling)}."
        )
    return sentences


def over_everything(plan: Plan) -> str:
    """What the overall chance of a significant result is taken over."""
    if plan.settings.rule == "averaged":
        return "over the whole distribution, negligible effects included"
    return "over the planning distribution"


def _no_size(plan: Plan) -> list[str]:
    answer, symbol = plan.answer, _symbol(plan)
    sentences = [
        f"At {_assurance(plan)} assurance the planning value is {_value(plan)}, which is not above "
        f"zero, so no finite sample size has {_power(plan)} there; this is what the evidence "
        "supports, not a failure of the computation.",
        f"Even as n grows without end, the chance of a significant result {_as_predicted(plan)} "
        f"stays at {_probability(answer.ceiling)}.",
    ]
    if answer.alternatives:
        listed = "; ".join(
            f"{fmt.count(a.sized.n_total)} participants at {a.what} "
            f"({symbol} = {fmt.effect(a.effect)})"
            for a in answer.alternatives
        )
        sentences.append(f"Finite sizes exist under weaker demands: {listed}.")
    sentences.append(
        "A smallest effect of interest, set on grounds other than these results, would fix the "
        "size."
    )
    return sentences


def _wrong(plan: Plan) -> list[str]:
    """What the as-printed size would do at the planning value, or at the median without one."""
    if not plan.consequences or plan.settings.goal in ("budget", "precision"):
        return []
    c = plan.consequences[0]
    text = (
        f"The size that the printed mean suggests, {fmt.count(c.n_total)}, would have "
        f"{fmt.percent(c.power)} power at the {c.label} ({_symbol(plan)} = {fmt.effect(c.effect)})"
    )
    if c.exaggeration is not None:
        text += (
            f", and its significant estimates would average {fmt.factor(c.exaggeration)} times "
            "that effect"
        )
    return [text + "."]


def _moves(plan: Plan, variations: Sequence[Variation], without: Sequence[Variation]) -> list[str]:
    sentences = []
    changed = [v for v in variations if v.group != "as planned"]
    for subset, what in (
        (changed, f"Under {len(changed)} other choices of priors and assumptions, one at a time,"),
        (without, "Leaving out one sample at a time,"),
    ):
        if len(subset) < 2:
            continue
        values = [v.value for v in subset]
        text = (
            f"{what} the planning value ranges from {_symbol(plan)} = {fmt.effect(min(values))} to "
            f"{fmt.effect(max(values))}"
        )
        sizes = [v.sized.n_total for v in subset if v.sized.n_total is not None]
        if plan.settings.goal != "budget" and sizes:
            text += f" and n from {fmt.count(min(sizes))} to {fmt.count(max(sizes))}"
            none = len(subset) - len(sizes)
            if none:
                text += f", with no finite n in {none} of {len(subset)}"
        sentences.append(text + ".")
    return sentences


def _literature(plan: Plan) -> str:
    k, samples = len(plan.literature.rows), len(plan.literature.samples)
    text = f"{k} printed result{'s' if k != 1 else ''}"
    return text if samples == k else f"{text} of {samples} sample{'s' if samples != 1 else ''}"


def _purpose(plan: Plan) -> str:
    s = plan.settings
    if s.goal != "precision":
        return _power(plan)
    kept = f"with probability {fmt.percent(s.assurance)}" if s.assured else "on average"
    return f"an interval with a half-width of at most {fmt.effect(s.half_width)} {kept}"


def _given(plan: Plan) -> bool:
    """Whether the planning value was set and not estimated."""
    return plan.answer.from_smallest or plan.settings.rule == "fixed"


def _as_predicted(plan: Plan) -> str:
    return "in the predicted direction" if plan.metric.signed else f"at {_first_cut(plan)}"


def _direction(plan: Plan) -> str:
    return " in the predicted direction" if plan.metric.signed else ""


def _first_cut(plan: Plan) -> str:
    return fmt.p_limit(plan.settings.cut_points[0])


def _scale(plan: Plan) -> str:
    title = plan.metric.title
    return f"{title if title[0].isupper() else f'a {title}'} ({_symbol(plan)})"


def _pooling(plan: Plan) -> str:
    return "Fisher's z" if plan.metric.name == "fisher-z" else _symbol(plan)


def _symbol(plan: Plan) -> str:
    return plan.metric.symbol


def _value(plan: Plan) -> str:
    return f"{plan.metric.symbol} = {fmt.effect(plan.answer.value)}"


def _power(plan: Plan) -> str:
    return f"{fmt.percent(plan.settings.power)} power"


def _assurance(plan: Plan) -> str:
    return fmt.percent(plan.settings.assurance)


def _probability(value: float) -> str:
    """For running text: ".85", "below .01", "above .99"."""
    text = fmt.probability(value)
    return text.replace("<", "below ").replace(">", "above ")
