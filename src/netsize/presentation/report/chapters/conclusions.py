"""The answer, how it moves, its justification, methods, cautions and how to reproduce it."""

from __future__ import annotations

from netsize.planning.plan import Plan
from netsize.planning.sensitivity import Variation
from netsize.presentation import format as fmt
from netsize.presentation.headline import headline
from netsize.presentation.planning import CAUTION
from netsize.presentation.report.chapters.parts import size_of
from netsize.presentation.report.citing import cited
from netsize.presentation.report.content import (
    SCHEMA,
    Block,
    Bullets,
    Cell,
    Column,
    Fact,
    Facts,
    Input,
    Paragraph,
    Section,
    Table,
)
from netsize.presentation.report.justification import (
    full_methods,
    one_sentence,
    protocol_paragraph,
)
from netsize.presentation.report.material import MOST_REFITTED, Material
from netsize.synthesis.weighing import Weighing

__all__ = ["answer", "cautions", "justification", "methods", "moves", "reproducibility"]


def answer(material: Material) -> Section:
    """The headline and the few numbers behind it."""
    plan = material.plan
    a, naive, value = plan.answer, plan.row("as-printed"), plan.row("planning-value")
    facts = [
        Fact(
            name="participants",
            kind="count",
            value=size_of(a.sized),
            note=_groups(plan),
        ),
        Fact(
            name=f"planning value ({plan.metric.symbol})",
            kind="effect",
            value=a.value,
            note=f"as printed {fmt.effect(naive.effect)}",
        ),
        Fact(
            name="chance of a significant result",
            kind="probability",
            value=a.chance_significant if a.chance_significant is not None else a.ceiling,
            note=f"at most {fmt.probability(a.ceiling)}, however large"
            if a.chance_significant is not None
            else "at most, however large",
        ),
        Fact(
            name="P(negligible effect)",
            kind="probability",
            value=a.probability_negligible,
        ),
    ]
    if plan.settings.goal != "budget" and naive.sized.n_total is not None:
        facts.insert(
            1,
            Fact(
                name="as the papers print it",
                kind="count",
                value=naive.sized.n_total,
                note=f"power at the planning value {fmt.probability(value.power_of_naive_n)}",
            ),
        )
    blocks: list[Block] = [
        Paragraph(text=headline(plan), tone="lead"),
        Facts(items=tuple(facts)),
    ]
    return Section(key="answer", heading="The answer", blocks=tuple(blocks))


def _groups(plan: Plan) -> str:
    groups = plan.answer.sized.n_per_group
    if groups is None:
        return "no finite size"
    text = "in one sample"
    if len(groups) > 1:
        text = f"{fmt.counts(groups)} per {plan.study.design.group_word}"
    if plan.answer.sized.recruited != plan.answer.sized.n_total:
        text += f"; {fmt.count(plan.answer.sized.recruited)} to recruit"
    return text


def moves(material: Material) -> Section:
    """What if we are wrong."""
    plan = material.plan
    caption = "One choice changed at a time"
    blocks: list[Block] = [_variations(plan, "sensitivity", caption, material.variations)]
    if material.without:
        caption = "One sample left out at a time"
        blocks.append(_variations(plan, "leave-one-out", caption, material.without))
    elif len(plan.literature.samples) > MOST_REFITTED and material.weighing is not None:
        blocks.append(Paragraph(text=_influence(material.weighing)))
    return Section(key="moves", heading="What if we are wrong", blocks=tuple(blocks))


def _influence(weighing: Weighing) -> str:
    most = max(weighing.leave_one_out, key=lambda w: abs(w.shift))
    return (
        f"With {weighing.samples} samples the plan was not made again without each. The pooled "
        f"mean moves most without {most.label}, by {fmt.effect(abs(most.shift))} of its standard "
        "error."
    )


def _variations(plan: Plan, key: str, caption: str, variations: tuple[Variation, ...]) -> Table:
    return Table(
        key=key,
        caption=caption,
        columns=(
            Column(title="changed"),
            Column(title=f"planning {plan.metric.symbol}", kind="effect"),
            Column(title="median", kind="effect"),
            Column(title="P(negligible)", kind="probability"),
            Column(title="n total", kind="count"),
        ),
        rows=tuple(
            (v.label, v.value, v.median, v.probability_negligible, size_of(v.sized))
            for v in variations
        ),
        strong=tuple(i for i, v in enumerate(variations) if v.group == "as planned"),
    )


def justification(material: Material, version: str) -> Section:
    """Three lengths to paste."""
    plan = material.plan
    return Section(
        key="justification",
        heading="Justification, to paste",
        blocks=(
            Paragraph(text=one_sentence(plan), tone="quote", title="One sentence"),
            Paragraph(text=protocol_paragraph(plan), tone="quote", title="For a protocol"),
            Paragraph(
                text=full_methods(
                    plan,
                    material.weighing,
                    material.variations,
                    material.without,
                    disagreements=material.disagreements,
                    version=version,
                ),
                tone="quote",
                title="Full methods",
            ),
        ),
    )


def methods(material: Material) -> Section:
    """The published sources behind the numbers of this page."""
    items = tuple(f"{s.citation} ({s.used_for.rstrip('.')}.)" for s in cited(material))
    return Section(
        key="methods",
        heading="Methods and their sources",
        blocks=(Bullets(title="Published methods that enter this report", items=items),),
    )


def cautions(material: Material) -> Section:
    """Warnings of this plan and the usual caution."""
    blocks: list[Block] = []
    if material.plan.warnings:
        blocks.append(Bullets(title="About this plan", items=material.plan.warnings))
    blocks.append(Paragraph(text=CAUTION, tone="note"))
    return Section(key="cautions", heading="Cautions", blocks=tuple(blocks))


def reproducibility(material: Material, source: Input, command: str, version: str) -> Section:
    """Version, input, settings, command."""
    priors = material.plan.literature.averaged.priors
    settings = material.plan.settings.to_dict() | {
        "effect_scale": priors.effect_scale,
        "heterogeneity_scale": priors.heterogeneity_scale,
    }
    design = {"design": material.plan.study.design.name} | settings.pop("design_options")
    choices = "; ".join(
        f"{name.replace('_', ' ')} {_choice(value)}"
        for name, value in (settings | design).items()
        if value is not None and value != []
    )
    rows: list[tuple[Cell, ...]] = [
        ("netsize", version),
        ("report schema", str(SCHEMA)),
        ("input", source.name),
        ("SHA-256 of the input file", source.sha256 or "not a file"),
        ("SHA-256 of the results as read", source.results_sha256),
        ("unread places", f"{len(source.unread)} left out" if source.unread else "none"),
        ("choices", choices),
    ]
    if command:
        rows.append(("command", command))
    blocks: list[Block] = [
        Table(
            key="reproduce",
            caption="What this report was made from, and every choice",
            columns=(Column(title="what"), Column(title="value")),
            rows=tuple(rows),
            notes=("No random numbers are used; the same input and choices give the same page.",),
        )
    ]
    return Section(key="reproduce", heading="To reproduce this", blocks=tuple(blocks))


def _choice(value: object) -> str:
    if isinstance(value, list):
        return ", ".join(_choice(v) for v in value)
    return f"{value:g}" if isinstance(value, float) else str(value)
