"""The planning distribution with its planning value, median and the naive reading."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.planning.curves import Density, density
from netsize.planning.plan import Plan
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, ORANGE, PALE

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["BeliefFigure", "belief_figure", "draw_belief"]


@dataclass(frozen=True, slots=True, kw_only=True)
class BeliefFigure:
    """What the figure shows, on the shown scale.

    conditional : whether the distribution is that given an effect. quantile : at 1 - assurance.
    """

    symbol: str
    conditional: bool
    density: Density
    assurance: float
    quantile: float
    value: float
    from_smallest: bool
    median: float
    low: float
    high: float
    printed: float | None
    probability_negligible: float

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        given = ", given that there is one" if self.conditional else ""
        text = (
            f"Density of the effect of the new study{given}: median "
            f"{fmt.effect(self.median)}, central 95% {fmt.interval(self.low, self.high)}. "
            f"Planning value {fmt.effect(self.value)}"
        )
        if self.from_smallest:
            text += (
                f", the smallest effect of interest; the quantile is {fmt.effect(self.quantile)}"
            )
        text += (
            f". Probability of a negligible effect {fmt.probability(self.probability_negligible)}."
        )
        if self.printed is not None:
            text += f" Mean as printed {fmt.effect(self.printed)}."
        return text


def belief_figure(plan: Plan) -> BeliefFigure:
    """The numbers of the figure for a plan."""
    a = plan.answer
    return BeliefFigure(
        symbol=plan.metric.symbol,
        conditional=plan.settings.rule == "averaged",
        density=density(plan),
        assurance=a.assurance,
        quantile=a.quantile,
        value=a.value,
        from_smallest=a.from_smallest,
        median=a.median,
        low=a.low,
        high=a.high,
        printed=plan.row("as-printed").effect,
        probability_negligible=a.probability_negligible,
    )


def draw_belief(shown: BeliefFigure, *, ax: Axes | None = None) -> Figure:
    """Draw the density; the part below the quantile is shaded, marks are named above it."""
    ax = canvas.axes(ax, height=62.0, top=2.0)
    d = shown.density
    marks = _marks(shown)
    if d.atom is not None:
        middle, reach = d.atom, max(1.5 * abs(d.atom), 0.5)
        edges, heights = np.array([middle - reach, middle + reach]), np.array([0.0])
    else:
        edges, heights = np.array(d.edges), np.array(d.heights)
    values = [0.0, *(v for v, *_ in marks), float(edges[0]), float(edges[-1])]
    low, high = min(values), max(values)
    right = max(
        (canvas.width(text) - (high - v) / (high - low) * 60 for v, text, *_ in marks), default=0
    )
    place = canvas.frame(ax, low, high, right=max(right, 0.0))
    peak = float(heights.max()) or 1.0
    ax.set_ylim(0.0, 1.62 * peak)
    ax.set_yticks([])
    if d.atom is None:
        middle_of = (edges[1:] + edges[:-1]) / 2
        ax.fill_between(middle_of, heights, color="#EEF4F8", linewidth=0)
        cautious = middle_of <= shown.quantile
        ax.fill_between(middle_of[cautious], heights[cautious], color=PALE, linewidth=0)
        ax.plot(middle_of, heights, color=BLUE, linewidth=1.2)
    else:
        ax.plot([d.atom] * 2, [0.0, peak], color=BLUE, linewidth=2.0)
    ax.axvline(0.0, ymax=0.66, color=GREY, linewidth=0.6)
    _names(ax, shown, marks, peak, low, high)
    at = canvas.steps(low, high, 6)
    canvas.ticks(ax, at, [fmt.tick(x) for x in at])
    given = ", given one" if shown.conditional else ""
    canvas.name(ax, x=f"effect of the new study{given} ({shown.symbol})", over=place)
    return canvas.root(ax)


def _marks(shown: BeliefFigure) -> list[tuple[float, str, str, object]]:
    named = "planning value" + (" (smallest of interest)" if shown.from_smallest else "")
    marks: list[tuple[float | None, str, str, object]] = [
        (shown.value, named, INK, "-"),
        (shown.median, "median", BLUE, (0, (4, 1.5))),
        (shown.printed, "as printed", ORANGE, (0, (1, 1.2))),
    ]
    return [
        (v, f"{text} {fmt.effect(v)}", colour, style)
        for v, text, colour, style in marks
        if v is not None and math.isfinite(v)
    ]


def _names(
    ax: Axes,
    shown: BeliefFigure,
    marks: list[tuple[float, str, str, object]],
    peak: float,
    low: float,
    high: float,
) -> None:
    """A line a mark, shorter from left to right, so that each name clears the lines beside it."""
    for index, (value, text, colour, style) in enumerate(sorted(marks, key=lambda m: m[0])):
        y = peak * (1.38 - 0.13 * index)
        ax.plot([value] * 2, [0.0, y], color=colour, linewidth=1.1, linestyle=style)
        canvas.write(ax, value + 0.012 * (high - low), y - 0.03 * peak, text, color=colour)
    notes = [f"P(negligible effect) {fmt.stated(shown.probability_negligible)}"]
    if shown.density.atom is None:
        notes.append(
            f"shaded: {fmt.percent(1 - shown.assurance)} below {fmt.effect(shown.quantile)}"
        )
    for share, where in (
        (shown.density.below, "below any number"),
        (shown.density.above, "above any number"),
    ):
        if share > 0.001:
            notes.append(f"{fmt.percent(share)} {where}")
    canvas.write(ax, low, 1.56 * peak, "; ".join(notes), color=GREY)
