"""The evidence as read, with its arithmetic check and assumptions."""

from __future__ import annotations

import numpy as np

from netsize.effect_sizes.records import EffectSize
from netsize.presentation import format as fmt
from netsize.presentation.reading import statistic
from netsize.presentation.report.chapters.parts import picture
from netsize.presentation.report.content import (
    Block,
    Bullets,
    Cell,
    Column,
    Paragraph,
    Section,
    Table,
)
from netsize.presentation.report.material import Material
from netsize.reported.check import Finding

__all__ = ["evidence"]


def evidence(material: Material) -> Section:
    """Every result with what was made of it; what disagrees; what was left out and assumed."""
    plan = material.plan
    literature = plan.literature
    blocks: list[Block] = [
        Paragraph(text=_summary(material)),
        _results(material),
        picture(plan, "evidence"),
    ]
    disagreements = [
        f"{row.label}: {finding.message}"
        for row, found in zip(literature.rows, material.findings, strict=True)
        for finding in found
    ]
    if disagreements:
        blocks.append(Bullets(title="Printed numbers that disagree", items=tuple(disagreements)))
    if literature.left_out:
        left = tuple(f"{x.label}: {x.reason}" for x in literature.left_out)
        blocks.append(Bullets(title="Left out", items=left))
    blocks.append(Bullets(title="Assumed", items=plan.assumptions))
    return Section(key="evidence", heading="The evidence as read", blocks=tuple(blocks))


def _summary(material: Material) -> str:
    literature, metric = material.plan.literature, material.plan.metric
    k, samples = len(literature.rows), len(literature.samples)
    way = "in the predicted direction" if metric.signed else "by their F or chi-square"
    return (
        f"{k} result{'s' if k != 1 else ''} from {samples} sample{'s' if samples != 1 else ''}, "
        f"{fmt.count(sum(literature.samples.values()))} participants; {literature.significant} "
        f"significant {way}; pooled as {metric.title} ({metric.symbol})."
    )


def _results(material: Material) -> Table:
    plan = material.plan
    symbol = plan.metric.symbol
    rows = plan.literature.rows
    shared = any(row.sample != row.label for row in rows)
    columns = [Column(title="result")]
    columns += [Column(title="sample")] if shared else []
    columns += [
        Column(title="as the paper prints it"),
        Column(title="n", kind="count"),
        Column(title=f"printed {symbol}", kind="effect"),
        Column(title=f"corrected {symbol}", kind="effect"),
        Column(title=f"{fmt.percent(plan.settings.level)} interval", kind="interval"),
        Column(title="p", kind="p"),
        Column(title="check"),
    ]
    return Table(
        key="results",
        caption="Results, their effects corrected for small samples, and the arithmetic check",
        columns=tuple(columns),
        rows=tuple(
            _result(row, found, shared) for row, found in zip(rows, material.findings, strict=True)
        ),
        notes=(
            "p is two-sided and recomputed from the statistic. Check: whether the printed numbers "
            "agree with each other within rounding.",
        ),
    )


def _result(row: EffectSize, found: tuple[Finding, ...], shared: bool) -> tuple[Cell, ...]:
    low, high = (float(x) for x in row.metric.shown(np.array([row.low, row.high])))
    estimate = None if row.estimate is None else float(row.metric.shown(np.array(row.estimate)))
    return (
        row.label,
        *((row.sample if row.sample != row.label else "",) if shared else ()),
        " ".join(row.result.text.split()) or statistic(row.result),
        row.n,
        row.printed,
        estimate,
        (low, high),
        row.p,
        _verdict(row, found),
    )


def _verdict(row: EffectSize, found: tuple[Finding, ...]) -> str:
    if any(f.changes_significance for f in found):
        return "significance disagrees"
    if found:
        return f"{' and '.join(dict.fromkeys(f.kind for f in found))} disagrees"
    return "agrees" if row.result.p is not None or row.result.also else "nothing to check"
