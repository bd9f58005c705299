"""Pooling and corrections side by side, and the planning distribution."""

from __future__ import annotations

import math

import numpy as np

from netsize.numerics.grid import GridDistribution
from netsize.presentation import format as fmt
from netsize.presentation.report.chapters.parts import picture
from netsize.presentation.report.content import Block, Cell, Column, Paragraph, Section, Table
from netsize.presentation.report.material import Material
from netsize.presentation.weighing import limits, paragraph
from netsize.synthesis.records import Estimate
from netsize.synthesis.weighing import Weighing

__all__ = ["belief", "corrections", "estimator_table"]

_PERCENTILES = (5, 10, 20, 25, 50, 75, 80, 90, 95)


def corrections(material: Material) -> Section:
    """The classical estimators and diagnostics."""
    weighing = material.weighing
    blocks: list[Block] = []
    if weighing is None:
        text = "No result has a point estimate, so nothing can be pooled in the classical way."
        blocks.append(Paragraph(text=text))
    else:
        blocks += [
            Paragraph(text=paragraph(weighing)),
            estimator_table(weighing),
            picture(material.plan, "funnel"),
        ]
    blocks.append(picture(material.plan, "significant-p"))
    if weighing is not None:
        blocks.append(_diagnostics(weighing))
    return Section(key="corrections", heading="Pooling and corrections", blocks=tuple(blocks))


def estimator_table(weighing: Weighing) -> Table:
    """The pooled mean and every correction."""
    return Table(
        key="estimators",
        caption="The mean effect by published methods",
        columns=(
            Column(title="estimator"),
            Column(title=weighing.metric.symbol, kind="effect"),
            Column(title=f"{fmt.percent(weighing.pooled.level)} interval", kind="interval"),
            Column(title="τ", kind="effect"),
            Column(title="below the printed mean", kind="percent"),
            Column(title="used", kind="count"),
            Column(title="status"),
        ),
        rows=tuple(_estimator(weighing, e) for e in weighing.estimators),
        notes=_heterogeneity(weighing),
    )


def _estimator(weighing: Weighing, e: Estimate) -> tuple[Cell, ...]:
    low, high = weighing.shown(e.low), weighing.shown(e.high)
    deflation = None if e.key == "as-printed" else weighing.deflation(e)
    return (
        e.label,
        weighing.shown(e.estimate),
        None if low is None or high is None else (low, high),
        None if e.tau2 is None else math.sqrt(max(e.tau2, 0.0)),
        deflation,
        e.used,
        f"{e.status}: {e.reason}" if e.reason and e.status != "fine" else e.status,
    )


def _heterogeneity(weighing: Weighing) -> tuple[str, ...]:
    p = weighing.pooled
    notes = [*weighing.notes]
    if p.i2 is not None and p.tau2 is not None:
        text = f"{p.method}: I² = {fmt.percent(p.i2)}, τ = {fmt.effect(math.sqrt(p.tau2))}"
        if p.prediction_low is not None and p.prediction_high is not None:
            low, high = weighing.shown(p.prediction_low), weighing.shown(p.prediction_high)
            text += (
                f"; without correction the effect of a new study lies in {fmt.interval(low, high)}"
            )
        notes.append(f"{text}.")
    return tuple(notes)


def _diagnostics(weighing: Weighing) -> Table:
    return Table(
        key="diagnostics",
        caption="Signs of selective printing",
        columns=(
            Column(title="test"),
            Column(title="statistic"),
            Column(title="p", kind="p"),
            Column(title="what it shows"),
        ),
        rows=tuple(
            (
                d.label,
                None if d.statistic is None else f"{d.symbol} = {fmt.effect(d.statistic)}",
                d.p,
                d.finding or d.reason,
            )
            for d in weighing.diagnostics
        ),
        notes=tuple(limits(weighing)),
    )


def belief(material: Material) -> Section:
    """The planning distribution and what the exact selection model concluded."""
    plan = material.plan
    answer, fit = plan.answer, plan.literature.averaged
    given = "Given that there is an effect, its" if plan.settings.rule == "averaged" else "Its"
    text = (
        f"The planning distribution is that of {answer.origin}. {given} "
        f"median is {plan.metric.symbol} = {fmt.effect(answer.median)}, its central 95% interval "
        f"{fmt.interval(answer.low, answer.high)}. The posterior probability that the effect is "
        f"negligible is {_probability(answer.probability_negligible)}."
    )
    if plan.settings.rule == "fixed":
        text = (
            f"The effect planned for, {plan.metric.symbol} = {fmt.effect(answer.value)}, is given. "
            "By the evidence, the probability that the effect is negligible is "
            f"{_probability(answer.probability_negligible)}."
        )
    quantiles = answer.distribution.quantile(np.array(_PERCENTILES) / 100)
    printing = [
        ("relative chance of printing" + (f", band {i + 2}" if len(fit.printing) > 1 else ""), d)
        for i, d in enumerate(fit.printing)
    ]
    rows = [
        ("mean effect, given one", fit.mean.mapped(plan.metric.shown)),
        ("effect of a new study, given one", fit.new_study.mapped(plan.metric.shown)),
        (f"spread between studies (τ{', on Fisher z' if plan.metric.symbol == 'r' else ''})",
         fit.heterogeneity),
        *printing,
        ("share of conducted results that was not printed", fit.unprinted),
    ]  # fmt: skip
    return Section(
        key="belief",
        heading="The planning distribution",
        blocks=(
            Paragraph(text=text),
            picture(plan, "planning-distribution"),
            Table(
                key="percentiles",
                caption=f"Percentiles of the planning distribution ({plan.metric.symbol})",
                columns=(
                    Column(title="percentile"),
                    *(Column(title=fmt.ordinal(p), kind="effect") for p in _PERCENTILES),
                ),
                rows=((plan.metric.symbol, *(float(q) for q in quantiles)),),
            ),
            Table(
                key="selection",
                caption="The exact selection model, averaged over its unknowns",
                columns=(
                    Column(title="quantity"),
                    Column(title="median", kind="effect"),
                    Column(title="central 95%", kind="interval"),
                ),
                rows=tuple((name, *_summary(d)) for name, d in rows),
                notes=(
                    "Relative chance of printing: of a result in a weaker p-band, against one that "
                    f"is significant as predicted ({_cuts(material)}).",
                ),
            ),
        ),
    )


def _summary(d: GridDistribution) -> tuple[Cell, Cell]:
    low, median, high = (float(x) for x in d.quantile([0.025, 0.5, 0.975]))
    return median, (low, high)


def _cuts(material: Material) -> str:
    cuts = ", ".join(fmt.p_limit(c) for c in material.plan.settings.cut_points)
    return f"bands parted at two-sided {cuts}"


def _probability(value: float) -> str:
    return fmt.probability(value).replace("<", "below ").replace(">", "above ")
