"""Participants needed over the effect, with every row of the plan's table marked."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.planning.curves import SizeOverEffect, size_over_effect
from netsize.planning.plan import Plan
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, ORANGE
from netsize.presentation.figures.scales import log_ticks

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["Mark", "SizesFigure", "draw_sizes", "sizes_figure"]

_NAMES = (30.0, 41.0)  # millimetres for the names at the right, at least and at most
_LEAD = 5.0  # for the lines that lead to them


@dataclass(frozen=True, slots=True, kw_only=True)
class Mark:
    """A row of the table: n None where no finite size exists."""

    label: str
    effect: float | None
    n_total: int | None
    naive: bool = False
    chosen: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class SizesFigure:
    """What the figure shows. fixed : the size a budget pays for, None for other goals."""

    symbol: str
    title: str
    curve: SizeOverEffect
    marks: tuple[Mark, ...]
    fixed: int | None

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        goal = (
            "for the interval wanted"
            if self.curve.power is None
            else f"for {fmt.percent(self.curve.power)} power"
        )
        rows = "; ".join(
            f"{m.label} {self.symbol} = {fmt.effect(m.effect)}, "
            f"{'n = ' + fmt.count(m.n_total) if m.n_total is not None else 'no finite n'}"
            for m in self.marks
        )
        return f"Participants needed {goal} over the effect, logarithmic scale. Marked: {rows}."


def sizes_figure(plan: Plan) -> SizesFigure:
    """The numbers of the figure for a plan."""
    budget = plan.settings.goal == "budget"
    curve = size_over_effect(plan)
    return SizesFigure(
        symbol=plan.metric.symbol,
        title=plan.metric.title,
        curve=curve,
        marks=tuple(
            Mark(
                label=_SHORT.get(row.key, row.label),
                effect=row.limit,
                n_total=size,
                naive=row.key in ("as-printed", "largest-printed", "pooled"),
                chosen=row.key == "planning-value",
            )
            for row, size in zip(plan.rows, curve.rows, strict=True)
            if row.limit is not None or row.effect is not None
        ),
        fixed=plan.answer.sized.n_total if budget else None,
    )


_SHORT = {
    "as-printed": "as printed",
    "largest-printed": "largest printed",
    "pooled": "pooled",
    "exact-profile": "selection model",
    "planning-median": "planning median",
}


def draw_sizes(shown: SizesFigure, *, ax: Axes | None = None) -> Figure:
    """Draw the curve and its marks; names stand in a column at the right, lines lead to them."""
    placed = [m for m in shown.marks if m.n_total is not None and m.effect is not None]
    lost = [m for m in shown.marks if m.n_total is None or m.effect is None]
    ax = canvas.axes(ax, height=max(66.0, 21.0 + 3.1 * len(shown.marks)), left=15.0, top=3.0)
    curve = np.array([shown.curve.effects, shown.curve.n_total], dtype=float)
    sizes = [float(n) for n in shown.curve.n_total] + [float(m.n_total or 1) for m in placed]
    if shown.fixed is not None:
        sizes.append(float(shown.fixed))
    effects = [0.0, *shown.curve.effects, *(m.effect or 0.0 for m in shown.marks)]
    wanted = (
        _LEAD
        + 1.0
        + max((canvas.width(_text(m, m.label[:80]), bold=True) for m in shown.marks), default=0)
    )
    names = min(max(wanted, _NAMES[0]), _NAMES[1])
    place = canvas.frame(ax, min(effects), 1.02 * max(effects), right=names)
    bottom, top = np.log10(min(sizes, default=4)) - 0.12, np.log10(max(sizes, default=1000)) + 0.15
    ax.set_ylim(bottom, top)
    ax.axvline(0.0, color=GREY, linewidth=0.6, zorder=0)
    if curve.size:
        ax.plot(curve[0], np.log10(curve[1]), color=GREY, linewidth=1.0)
    if shown.fixed is not None:
        level = float(np.log10(shown.fixed))
        ax.plot(
            [place.low, place.high], [level] * 2, color=INK, linewidth=0.8, linestyle=(0, (3, 2))
        )
    for mark in placed:
        _marker(ax, mark)
    _name_marks(ax, placed, lost, place, bottom, top, shown.fixed)
    at = canvas.steps(min(effects), max(effects), 5)
    canvas.ticks(ax, at, [fmt.tick(x) for x in at])
    where = log_ticks(bottom, top)
    canvas.ticks(ax, [float(np.log10(n)) for n in where], [fmt.tick(n) for n in where], axis="y")
    canvas.name(ax, x=f"effect ({shown.symbol})", y="participants in total", over=place)
    return canvas.root(ax)


def _text(mark: Mark, label: str) -> str:
    return f"{label} {fmt.count(mark.n_total)}" if mark.n_total is not None else f"{label}: none"


def _colour(mark: Mark) -> str:
    return INK if mark.chosen else (ORANGE if mark.naive else BLUE)


def _marker(ax: Axes, mark: Mark) -> None:
    ax.plot(
        [mark.effect or 0.0],
        [np.log10(mark.n_total or 1)],
        "D" if mark.chosen else ("o" if mark.naive else "s"),
        markersize=5.0 if mark.chosen else 3.6,
        markerfacecolor="white" if mark.naive else _colour(mark),
        markeredgecolor=_colour(mark),
        markeredgewidth=1.0,
        zorder=3,
    )


def _name_marks(
    ax: Axes,
    placed: list[Mark],
    lost: list[Mark],
    place: canvas.Frame,
    bottom: float,
    top: float,
    fixed: int | None,
) -> None:
    height = ax.bbox.height / canvas.root(ax).dpi * 25.4
    line = 3.1 * (top - bottom) / height
    named = [*lost, *placed]
    # those without a size stand on top, where the curve runs off
    heights = [top] * len(lost) + [float(np.log10(m.n_total or 1)) for m in placed]
    if fixed is not None:
        named.append(Mark(label="budget", effect=place.high, n_total=fixed, chosen=True))
        heights.append(float(np.log10(fixed)))
    where = canvas.spread(heights, line, bottom + line / 2, top - line / 2)
    for mark, y in zip(named, where, strict=True):
        start = place.high + _LEAD * place.unit
        room = (place.end - start) / place.unit - canvas.width(_text(mark, ""), bold=True) - 0.5
        canvas.write(
            ax,
            start,
            y,
            _text(mark, canvas.shorten(mark.label, room)),
            color=_colour(mark),
            fontweight="bold" if mark.chosen else "normal",
        )
        if mark.n_total is not None and mark.effect is not None:
            level = float(np.log10(mark.n_total))
            ax.plot(
                [mark.effect, place.high + 1.0 * place.unit, start - 0.7 * place.unit],
                [level, level, y],
                color=_colour(mark),
                linewidth=0.35,
                zorder=1,
            )
