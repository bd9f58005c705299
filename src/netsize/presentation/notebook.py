"""What a notebook shows of the records that the top-level functions return.

These live on lower floors, which do not know this one. `netsize.__getattr__`, the door through
which the functions are reached, hands them `show` as their `_repr_html_`; nothing here loads before
the first record is displayed.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from netsize.effect_sizes.records import EffectTable
from netsize.planning.plan import Plan
from netsize.presentation.headline import headline
from netsize.presentation.reading import statistic
from netsize.presentation.report.chapters.sizing import central_table
from netsize.presentation.report.chapters.synthesis import estimator_table
from netsize.presentation.report.content import Column, Document, Table
from netsize.presentation.report.html import table_html
from netsize.presentation.report.text import html_text
from netsize.presentation.weighing import paragraph
from netsize.reported.records import Reading
from netsize.synthesis.weighing import Weighing

__all__ = ["show"]


def show(record: Any) -> str:
    """The record as an HTML fragment, numbers as everywhere else, labels escaped."""
    text, table = _SHOWN[type(record)](record)
    lead = f"<p><strong>{html_text(text)}</strong></p>\n" if text else ""
    return lead + table_html(table)


def _plan(plan: Plan) -> tuple[str, Table]:
    return headline(plan), central_table(plan)


def _weighing(weighing: Weighing) -> tuple[str, Table]:
    return paragraph(weighing), estimator_table(weighing)


def _effects(table: EffectTable) -> tuple[str, Table]:
    shown, symbol = table.metric.shown, table.metric.symbol

    def value(x: float | None) -> float | None:
        return None if x is None else float(shown(np.array(x)))

    return "", Table(
        key="effects",
        caption=f"{table.metric.title}, corrected for small samples",
        columns=(
            Column(title="result"),
            Column(title="n", kind="count"),
            Column(title=f"printed {symbol}", kind="effect"),
            Column(title=f"corrected {symbol}", kind="effect"),
            Column(title="interval", kind="interval"),
            Column(title="p", kind="p"),
        ),
        rows=tuple(
            (r.label, r.n, r.printed, value(r.estimate), (value(r.low), value(r.high)), r.p)
            for r in table.rows
        ),
        notes=tuple(f"{x.label} left out: {x.reason}" for x in table.left_out),
    )


def _reading(reading: Reading) -> tuple[str, Table]:
    return "", Table(
        key="reading",
        caption="As read",
        columns=(Column(title="result"), Column(title="statistic"), Column(title="sample")),
        rows=tuple((r.label, statistic(r), r.sample) for r in reading.results),
        notes=tuple(f"line {u.line} not understood: {u.reason}" for u in reading.unread),
    )


def _document(document: Document) -> tuple[str, Table]:
    return document.answer, document.tables()["readings"]


_SHOWN: dict[type[Any], Callable[[Any], tuple[str, Table]]] = {
    Plan: _plan,
    Weighing: _weighing,
    EffectTable: _effects,
    Reading: _reading,
    Document: _document,
}
