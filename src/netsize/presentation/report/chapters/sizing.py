"""Naive against corrected, and the sizes around the answer."""

from __future__ import annotations

from netsize.planning.curves import size_over_effect
from netsize.planning.plan import Plan
from netsize.planning.rows import Row
from netsize.presentation import format as fmt
from netsize.presentation.figures.evidence import ends_of
from netsize.presentation.report.chapters.parts import groups_of, picture, size_of
from netsize.presentation.report.content import (
    Block,
    Cell,
    Column,
    Paragraph,
    Section,
    Table,
)
from netsize.presentation.report.justification import over_everything
from netsize.presentation.report.material import Material

__all__ = ["central_table", "naive", "sizes"]


def naive(material: Material) -> Section:
    """The central table, its figure, and what goes wrong with the as-printed size."""
    plan = material.plan
    blocks: list[Block] = [central_table(plan), picture(plan, "sizes")]
    if plan.consequences:
        blocks.append(_consequences(plan))
    if plan.habits:
        blocks.append(_habits(plan))
    return Section(key="naive", heading="Naive against corrected", blocks=tuple(blocks))


def central_table(plan: Plan) -> Table:
    """Every reading of the evidence with its size."""
    symbol, budget = plan.metric.symbol, plan.settings.goal == "budget"
    columns = [
        Column(title="reading of the evidence"),
        Column(title=symbol, kind="effect"),
        Column(title=f"{fmt.percent(plan.settings.level)} interval", kind="interval"),
        Column(title=f"n per {plan.study.design.group_word}", kind="counts"),
        Column(title="n total", kind="count"),
    ]
    if plan.settings.goal != "power":
        columns.append(Column(title="power of this n", kind="probability"))
    needed = size_over_effect(plan).rows if budget else (None,) * len(plan.rows)
    columns.append(
        Column(title=f"n for {fmt.percent(plan.settings.power)} power", kind="count")
        if budget
        else Column(title="power of the as-printed n", kind="probability")
    )
    notes = []
    if plan.settings.goal == "assurance":
        notes.append(
            f"n is solved for each row's lower limit at {fmt.percent(plan.settings.assurance)} "
            "assurance, not for the effect in the second column."
        )
    if budget:
        notes.append("n is what the budget pays for; its power depends on which reading is right.")
    return Table(
        key="readings",
        caption="Every reading of the evidence with the size it leads to",
        columns=tuple(columns),
        rows=tuple(_reading(plan, row, n) for row, n in zip(plan.rows, needed, strict=True)),
        strong=tuple(i for i, row in enumerate(plan.rows) if row.key == "planning-value"),
        notes=tuple(notes),
    )


def _reading(plan: Plan, row: Row, needed: int | None) -> tuple[Cell, ...]:
    cells: list[Cell] = [
        row.label + (f" ({row.note})" if row.note else ""),
        row.effect,
        None if row.low is None and row.high is None else ends_of(row),
        groups_of(row.sized),
        size_of(row.sized, known=row.effect is not None),
    ]
    if plan.settings.goal != "power":
        cells.append(row.power)
    cells.append(needed if plan.settings.goal == "budget" else row.power_of_naive_n)
    return tuple(cells)


def _consequences(plan: Plan) -> Table:
    directed = plan.consequences[0].exaggeration is not None
    columns = [
        Column(title="were the effect the"),
        Column(title=plan.metric.symbol, kind="effect"),
        Column(title="power", kind="probability"),
    ]
    if directed:
        columns += [
            Column(title="exaggeration of significant estimates", kind="factor"),
            Column(title="wrong sign among them", kind="probability"),
        ]
    size = fmt.count(plan.consequences[0].n_total)
    return Table(
        key="consequences",
        caption=f"What would go wrong with {size} participants"
        + (", the as-printed size" if plan.settings.goal != "budget" else ""),
        columns=tuple(columns),
        rows=tuple(
            (c.label, c.effect, c.power, *((c.exaggeration, c.sign_error) if directed else ()))
            for c in plan.consequences
        ),
        notes=("Exaggeration: mean of |estimate| among significant results over the true effect "
               "(Gelman & Carlin 2014).",) if directed else (),
    )  # fmt: skip


def _habits(plan: Plan) -> Table:
    return Table(
        key="habits",
        caption="Common habits, for contrast",
        columns=(
            Column(title="habit"),
            Column(title="n total", kind="count"),
            Column(title="power at the planning value", kind="probability"),
            Column(title="at the median", kind="probability"),
        ),
        rows=tuple((h.label, h.n_total, h.power_at_value, h.power_at_median) for h in plan.habits),
    )


def sizes(material: Material) -> Section:
    """The chosen goal's sizes with the alternatives."""
    plan = material.plan
    blocks: list[Block] = [Paragraph(text=_goal(plan)), picture(plan, "power")]
    if plan.answer.alternatives:
        blocks.append(_weaker(plan))
    if material.targets:
        blocks.append(_targets(material))
    if material.affordable:
        blocks.append(_affordable(material))
    if material.narrow:
        blocks.append(_narrow(material))
    return Section(
        key="sizes", heading="Sizes for the goal, and alternatives", blocks=tuple(blocks)
    )


def _goal(plan: Plan) -> str:
    s = plan.settings
    words = {
        "power": f"The goal is {fmt.percent(s.power)} power at the planning value.",
        "assurance": f"The goal is {fmt.percent(s.power)} power at each reading's lower limit.",
        "precision": f"The goal is an interval with a half-width of {fmt.effect(s.half_width)}.",
        "budget": f"The goal is to spend at most {fmt.tick(s.at_most or 0)} "
        + ("in money." if s.cost_per is not None else "participants."),
    }[s.goal]
    return f"{words} New study: {plan.study.design.title}."


def _weaker(plan: Plan) -> Table:
    return Table(
        key="weaker",
        caption="Finite sizes under weaker demands",
        columns=(
            Column(title="demand"),
            Column(title=plan.metric.symbol, kind="effect"),
            Column(title=f"n per {plan.study.design.group_word}", kind="counts"),
            Column(title="n total", kind="count"),
        ),
        rows=tuple(
            (a.what, a.effect, groups_of(a.sized), a.sized.n_total)
            for a in plan.answer.alternatives
        ),
        notes=("Or name a smallest effect of interest (--smallest-effect).",),
    )


def _targets(material: Material) -> Table:
    """A row for each assurance, a column for each power."""
    plan = material.plan
    powers = sorted({t.power for t in material.targets})
    assurances = sorted({t.assurance for t in material.targets})
    found = {(t.power, t.assurance): t for t in material.targets}
    return Table(
        key="targets",
        caption="n total by assurance and power",
        columns=(
            Column(title="assurance"),
            Column(title=f"planning {plan.metric.symbol}", kind="effect"),
            *(Column(title=f"{fmt.percent(p)} power", kind="count") for p in powers),
        ),
        rows=tuple(
            (
                fmt.percent(a),
                found[powers[0], a].effect,
                *(size_of(found[p, a].sized) for p in powers),
            )
            for a in assurances
        ),
        strong=tuple(i for i, a in enumerate(assurances) if a == plan.settings.assurance),
    )


def _affordable(material: Material) -> Table:
    plan, rows = material.plan, material.affordable
    symbol = plan.metric.symbol
    wide = any(a.half_width is not None for a in rows)
    priced = any(a.cost is not None for a in rows)
    columns = [
        Column(title="size"),
        Column(title="n total", kind="count"),
        Column(title="power at the planning value", kind="probability"),
        Column(title="at the median", kind="probability"),
        Column(title="overall chance", kind="probability"),
        Column(title=f"detectable {symbol}", kind="effect"),
    ]
    columns += [Column(title="half-width", kind="effect")] if wide else []
    columns += [Column(title="cost", kind="money")] if priced else []
    return Table(
        key="budget",
        caption="What other sizes can do",
        columns=tuple(columns),
        rows=tuple(
            (
                a.what,
                a.n_total,
                a.power_at_value,
                a.power_at_median,
                a.chance,
                a.detectable,
                *((a.half_width,) if wide else ()),
                *((a.cost,) if priced else ()),
            )
            for a in rows
        ),
        strong=tuple(i for i, a in enumerate(rows) if a.what == "planned n"),
        notes=(
            f"Overall chance: of a significant result as predicted {over_everything(plan)}. "
            f"Detectable: found with "
            f"{fmt.percent(plan.settings.power)} power."
            + (" Half-width: expected, at the planning value." if wide else ""),
        ),
    )


def _narrow(material: Material) -> Table:
    plan = material.plan
    return Table(
        key="precision",
        caption=f"n for the precision of the {fmt.percent(plan.settings.level)} interval at the "
        "planning value",
        columns=(
            Column(title=f"half-width ({plan.metric.symbol})", kind="effect"),
            Column(title=f"n per {plan.study.design.group_word}", kind="counts"),
            Column(title="n total", kind="count"),
        ),
        rows=tuple((x.half_width, groups_of(x.sized), size_of(x.sized)) for x in material.narrow),
        strong=tuple(
            i for i, x in enumerate(material.narrow) if x.half_width == plan.settings.half_width
        ),
    )
