"""How an `EffectTable` reads: the table a supplement would print, and its assumptions in words."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence

from netsize.effect_sizes.records import EffectSize, EffectTable
from netsize.presentation import format as fmt
from netsize.presentation.csv_cells import harmless
from netsize.presentation.terminal import Column, show_list, show_table, show_text

__all__ = ["effects_csv", "effects_markdown", "show_effects"]

# metric → columns of effects: heading, and the entry of `others` or attribute it shows
_EFFECTS: dict[str, tuple[tuple[str, str], ...]] = {
    "mean-difference": (("d", "printed"), ("g", "estimate")),
    "difference-score": (("dz", "printed"), ("gz", "estimate")),
    "fisher-z": (("r", "printed"), ("unbiased r", "r_unbiased"), ("z", "estimate")),
    "cohen-f": (
        ("f", "printed"),
        ("unbiased f", "estimate"),
        ("η²", "eta2"),
        ("ε²", "epsilon2"),
        ("ω²", "omega2"),
    ),
    "log-ratio": (("ln ratio", "estimate"),),
}
_NAMES = {
    "eta2": "η²",
    "epsilon2": "ε²",
    "omega2": "ω²",
    "f2": "f²",
    "w2": "w²",
    "r_unbiased": "unbiased r",
    "phi": "φ",
    "log_risk_ratio": "ln RR",
    "odds_ratio": "OR",
}


def show_effects(table: EffectTable) -> None:
    """Print the table, what was assumed for which results, and what is left out."""
    columns, rows = _cells(table)
    show_text(_headline(table))
    show_text("")
    show_table(columns, rows)
    show_text("")
    show_text(_legend(table))
    show_list("Assumed:", _assumptions(table))
    show_list("Note:", table.notes)
    show_list("Left out:", [f"{x.label}: {x.reason}" for x in table.left_out])


def effects_markdown(table: EffectTable) -> str:
    """The same as a Markdown table with its legend and assumptions."""
    columns, rows = _cells(table)
    lines = [
        _markdown_row([name for name, _ in columns]),
        _markdown_row(["---:" if side == "right" else "---" for _, side in columns]),
        *(_markdown_row([_escaped(cell) for cell in row]) for row in rows),
        "",
        _legend(table),
    ]
    left_out = [f"{x.label}: {x.reason}" for x in table.left_out]
    for title, items in (
        ("Assumed:", _assumptions(table)),
        ("Note:", table.notes),
        ("Left out:", left_out),
    ):
        if items:
            lines += ["", title, "", *(f"- {_escaped(item)}" for item in items)]
    return "\n".join(lines) + "\n"


def effects_csv(table: EffectTable) -> str:
    """Unrounded numbers, a row a result; labels that a spreadsheet would run are disarmed."""
    frame = table.table()
    target = io.StringIO()
    writer = csv.writer(target, lineterminator="\n")
    writer.writerow(frame.columns)
    for record in frame.itertuples(index=False):
        writer.writerow([harmless(x) if isinstance(x, str) else _number(x) for x in record])
    return target.getvalue()


def _headline(table: EffectTable) -> str:
    count = len(table.rows)
    results = "1 result" if count == 1 else f"{count} results"
    return f"{results}: {table.metric.title}"


def _cells(table: EffectTable) -> tuple[tuple[Column, ...], list[list[str]]]:
    effects = _EFFECTS[table.metric.name]
    samples = any(row.sample != row.label for row in table.rows)
    level = f"{table.rows[0].level * 100:g}%"
    columns: list[Column] = [("study", "left")]
    columns += [("sample", "left")] if samples else []
    columns += [("design", "left"), ("n", "right"), ("statistic", "left")]
    columns += [(heading, "right") for heading, _ in effects]
    columns += [("variance", "right"), (f"{level} interval", "right")]
    columns += [("p", "right"), ("weight", "right"), ("also", "left")]
    rows = []
    for row, weight in zip(table.rows, table.weights, strict=True):
        others = dict(row.others)
        cells = [row.label]
        if samples:
            cells.append(row.sample if row.sample != row.label else "")
        cells += [row.design or fmt.MISSING, _size(row)]
        cells.append(" ".join(row.result.text.split()) or row.result.family)
        for _, key in effects:
            value = getattr(row, key) if key in ("printed", "estimate") else others.get(key)
            cells.append(fmt.effect(value))
        cells += [_variance(row.variance), _interval(row), fmt.p_value(row.p)]
        cells.append(fmt.MISSING if weight is None else fmt.percent(weight))
        cells.append(_also(row, {key for _, key in effects}))
        rows.append(cells)
    return tuple(columns), rows


def _interval(row: EffectSize) -> str:
    import numpy as np

    low, high = row.metric.shown(np.array([row.low, row.high]))
    return fmt.interval(float(low), float(high))


def _size(row: EffectSize) -> str:
    """All participants; unequal groups beside them."""
    if not row.n:
        return fmt.MISSING
    unequal = len(set(row.groups)) > 1
    return fmt.count(row.n) + (f" ({fmt.counts(row.groups)})" if unequal else "")


def _variance(value: float | None) -> str:
    return fmt.MISSING if value is None else f"{value:.3g}"


def _also(row: EffectSize, shown: set[str]) -> str:
    """Further estimates that have no column of their own."""
    own = shown | {"d", "g", "r", "w"} if row.printed is not None else shown
    kept = [(name, value) for name, value in row.others if name not in own]
    return ", ".join(f"{_NAMES.get(name, name)} = {fmt.effect(value)}" for name, value in kept)


def _legend(table: EffectTable) -> str:
    variance = "variance of Fisher's z; " if table.metric.name == "fisher-z" else ""
    return (
        f"n: all participants; {variance}interval from the law of the statistic itself "
        "(noncentral t, F, χ² or exact r; normal for z and ready-made estimates); p two-sided, "
        "recomputed; weight: share of the inverse variances."
    )


def _assumptions(table: EffectTable) -> list[str]:
    """Each assumption once, with the results it touches."""
    touched: dict[str, list[str]] = {}
    for row in table.rows:
        for text in row.assumptions:
            touched.setdefault(text, []).append(row.label)
    everyone = len(table.rows)
    return [
        f"{'all' if len(labels) == everyone > 1 else ', '.join(labels)}: {text}"
        for text, labels in touched.items()
    ]


def _number(value: object) -> object:
    missing = value is None or value != value  # pandas writes a missing number as nan
    return "" if missing else value


def _markdown_row(cells: Sequence[str]) -> str:
    return "| " + " | ".join(cells) + " |"


def _escaped(text: str) -> str:
    """Labels are data: nothing in them may end a cell, start markup or make a tag."""
    for mark in ("\\", "|", "`", "*", "_", "[", "]"):
        text = text.replace(mark, f"\\{mark}")
    return text.replace("<", "&lt;").replace("\n", " ")
