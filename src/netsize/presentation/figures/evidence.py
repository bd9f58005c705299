"""Interval plot: every result with its exact interval, then what the readings make of them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.planning.plan import Plan
from netsize.planning.rows import Row
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, ORANGE

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["EvidenceFigure", "Line", "draw_evidence", "ends_of", "evidence_figure"]

_MOST_LABELLED = 60
_PITCH = 3.5  # millimetres a labelled row
_LABELS, _NUMBERS = 29.0, 27.0  # widest columns of words and of numbers
_DENSE_HEIGHT = 110.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """One interval: `value` None where there is no point estimate; ±inf ends allowed."""

    label: str
    value: float | None
    low: float | None
    high: float | None
    weight: float = 1.0
    corrected: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class EvidenceFigure:
    """What the interval plot shows, on the shown scale."""

    symbol: str
    title: str
    level: float
    results: tuple[Line, ...]
    summaries: tuple[Line, ...]

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        ends = [x.value for x in self.results if x.value is not None]
        k = len(self.results)
        text = f"Interval plot of {k} result{'s' if k != 1 else ''}"
        if ends:
            text += f", estimates from {fmt.effect(min(ends))} to {fmt.effect(max(ends))}"
        rows = "; ".join(
            f"{s.label} {fmt.effect(s.value)} {fmt.interval(s.low, s.high)}" for s in self.summaries
        )
        text += f". Below them: {rows}."
        cut = [x.label for x in self.results if canvas.shorten(x.label, _LABELS - 1) != x.label]
        return text + (f" Labels in full: {'; '.join(cut)}." if cut else "")


def evidence_figure(plan: Plan) -> EvidenceFigure:
    """The numbers of the interval plot of a plan."""
    metric = plan.metric

    def shown(value: float | None) -> float | None:
        return None if value is None else float(metric.shown(np.array(value)))

    precisions = [1 / r.variance if r.variance else 0.0 for r in plan.literature.rows]
    most = max(precisions) or 1.0
    corrected = {"exact-profile", "planning-median"} | {c.key for c in plan.corrections}
    return EvidenceFigure(
        symbol=metric.symbol,
        title=metric.title,
        level=plan.settings.level,
        results=tuple(
            Line(
                label=r.label,
                value=shown(r.estimate),
                low=shown(r.low),
                high=shown(r.high),
                weight=w / most,
            )
            for r, w in zip(plan.literature.rows, precisions, strict=True)
        ),
        summaries=tuple(
            Line(
                label=_SHORT.get(row.key, row.label),
                value=row.effect,
                low=ends_of(row)[0],
                high=ends_of(row)[1],
                corrected=row.key in corrected,
            )
            for row in plan.rows
            if row.key not in ("largest-printed", "planning-value")
        ),
    )


def ends_of(row: Row) -> tuple[float | None, float | None]:
    """The interval of a row; where only one end is finite the other is infinite."""
    if row.low is None and row.high is None:
        return None, None
    return (
        -math.inf if row.low is None else row.low,
        math.inf if row.high is None else row.high,
    )


_SHORT = {
    "as-printed": "as printed",
    "pooled": "pooled",
    "exact-profile": "selection model",
    "planning-median": "planning distribution",
}


def draw_evidence(shown: EvidenceFigure, *, ax: Axes | None = None) -> Figure:
    """Draw it: results in their order with labels, or sorted and unlabelled beyond 60."""
    labelled = len(shown.results) <= _MOST_LABELLED
    results = shown.results if labelled else _sorted(shown.results)
    rows = len(results) + len(shown.summaries) + 1
    below = len(shown.summaries) * _PITCH
    height = (rows * _PITCH if labelled else _DENSE_HEIGHT + below) + 13.0
    ax = canvas.axes(ax, height=height)
    low, high = _limits(shown)
    lines = (*(results if labelled else ()), *shown.summaries)
    left = min(max(canvas.width(canvas.clean(x.label)[:80]) for x in lines) + 2.0, _LABELS)
    right = min(max(canvas.width(_numbers(x)) for x in lines) + 1.5, _NUMBERS)
    place = canvas.frame(ax, low, high, left=left, right=right)
    pitch = 1.0 if labelled else _DENSE_HEIGHT / _PITCH / len(results)
    y = 0.0
    ax.axvline(0.0, color=GREY, linewidth=0.6, zorder=0)
    for line in results:
        _interval(ax, line, y, place, INK, labelled)
        if labelled:
            _words(ax, line, y, place, left)
        y += pitch
    if not labelled:
        k = len(results)
        for row, text in enumerate((f"{k} results", "sorted by estimate")):
            canvas.write(ax, place.start, y / 2 + 1.1 * row, text, color=GREY)
    y += 0.2 if labelled else 0.8
    ax.plot([place.start, place.end], [y - 0.4] * 2, color=GREY, linewidth=0.5)
    y += 0.4
    for line in shown.summaries:
        _interval(ax, line, y, place, BLUE if line.corrected else ORANGE, True, summary=True)
        _words(ax, line, y, place, left)
        y += 1.0
    ax.set_ylim(y - 0.2, -0.9)
    ax.set_yticks([])
    at = canvas.steps(low, high, 5)
    canvas.ticks(ax, at, [fmt.tick(x) for x in at])
    canvas.name(ax, x=f"{shown.title} ({shown.symbol}), {shown.level:.0%} intervals", over=place)
    return canvas.root(ax)


def _sorted(results: tuple[Line, ...]) -> tuple[Line, ...]:
    return tuple(sorted(results, key=lambda x: -math.inf if x.value is None else x.value))


def _limits(shown: EvidenceFigure) -> tuple[float, float]:
    """Every value and most ends; ends far out are cut and end in an arrow."""
    lines = (*shown.results, *shown.summaries)
    values = [0.0] + [x.value for x in lines if x.value is not None]
    ends = np.array(
        [e for x in lines for e in (x.low, x.high) if e is not None and math.isfinite(e)] or [0.0]
    )
    low, high = min(values), max(values)
    reach = 1.2 * max(high - low, 0.2)
    low = max(float(ends.min()), low - reach) if ends.min() < low else low
    high = min(float(ends.max()), high + reach) if ends.max() > high else high
    pad = 0.04 * (high - low)
    return low - pad, high + pad


def _interval(
    ax: Axes,
    line: Line,
    y: float,
    place: canvas.Frame,
    colour: str,
    large: bool,
    *,
    summary: bool = False,
) -> None:
    thick = 1.1 if summary else (0.8 if large else 0.4)
    if line.low is not None and line.high is not None:
        inside = (max(line.low, place.low), min(line.high, place.high))
        if line.value is None and not summary:
            ax.plot(inside, [y, y], color=GREY, linewidth=thick, linestyle=(0, (1, 1.5)))
        else:
            ax.plot(inside, [y, y], color=colour, linewidth=thick, solid_capstyle="butt")
        for end, limit, mark in ((line.low, place.low, "<"), (line.high, place.high, ">")):
            if (end < limit) if mark == "<" else (end > limit):
                ax.plot([limit], [y], mark, color=colour, markersize=2.4 if large else 1.2)
    if line.value is None:
        return
    if summary:
        ax.plot(
            [line.value],
            [y],
            "D",
            markersize=4.2,
            markerfacecolor=colour if line.corrected else "white",
            markeredgecolor=colour,
            markeredgewidth=1.0,
        )
        return
    size = (1.6 + 2.6 * math.sqrt(line.weight)) if large else 1.2
    ax.plot([line.value], [y], "s", color=colour, markersize=size, markeredgewidth=0)


def _numbers(line: Line) -> str:
    if line.value is None:
        return "no estimate"
    return f"{fmt.effect(line.value)} {fmt.interval(line.low, line.high)}"


def _words(ax: Axes, line: Line, y: float, place: canvas.Frame, room: float) -> None:
    canvas.write(ax, place.start, y, canvas.shorten(line.label, room - 1.0))
    colour = GREY if line.value is None else INK
    canvas.write(ax, place.end, y, _numbers(line), ha="right", color=colour)
