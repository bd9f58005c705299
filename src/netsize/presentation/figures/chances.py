"""Power over the size of the study, as a band over what the effect may be."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.planning.curves import PowerOverN, power_over_n
from netsize.planning.plan import Plan
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, ORANGE, PALE
from netsize.presentation.figures.scales import log_ticks

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["ChancesFigure", "chances_figure", "draw_chances"]

_NAMES = 27.0


@dataclass(frozen=True, slots=True, kw_only=True)
class ChancesFigure:
    """What the figure shows. planned, printed : sizes marked, None where there is none."""

    symbol: str
    curves: PowerOverN
    wanted: float
    value: float
    median: float
    planned: int | None
    printed: int | None
    power_at_planned: float | None
    power_at_printed: float | None
    chance: float | None

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        c = self.curves
        text = (
            f"Power from {fmt.count(c.n_total[0])} to {fmt.count(c.n_total[-1])} participants: a "
            "band from the 10th to the 90th percentile of the planning distribution, with lines at "
            f"its median {self.symbol} = {fmt.effect(self.median)}"
        )
        if c.at_value is not None:
            text += f" and at the planning value {self.symbol} = {fmt.effect(self.value)}"
        text += ", and the chance of a significant result over the whole distribution."
        if self.planned is not None:
            text += f" Marked: the planned {fmt.count(self.planned)} participants"
            if self.power_at_planned is not None:
                text += f", power {fmt.probability(self.power_at_planned)} at the planning value"
            if self.chance is not None:
                text += f", overall chance {fmt.probability(self.chance)}"
            text += "."
        if self.printed is not None and self.power_at_printed is not None:
            text += (
                f" The as-printed {fmt.count(self.printed)} have power "
                f"{fmt.probability(self.power_at_printed)} there."
            )
        return text


def chances_figure(plan: Plan) -> ChancesFigure:
    """The numbers of the figure for a plan."""
    value, naive = plan.row("planning-value"), plan.row("as-printed")
    return ChancesFigure(
        symbol=plan.metric.symbol,
        curves=power_over_n(plan),
        wanted=plan.settings.power,
        value=plan.answer.value,
        median=plan.answer.median,
        planned=plan.answer.sized.n_total,
        printed=None if plan.settings.goal == "budget" else naive.sized.n_total,
        power_at_planned=value.power,
        power_at_printed=value.power_of_naive_n,
        chance=plan.answer.chance_significant,
    )


def draw_chances(shown: ChancesFigure, *, ax: Axes | None = None) -> Figure:
    """Draw the band, its lines named at their right ends, and the sizes marked from above."""
    ax = canvas.axes(ax, height=62.0, left=9.0, top=6.0)
    c = shown.curves
    x = np.log10(np.array(c.n_total, dtype=float))
    place = canvas.frame(ax, float(x[0]), float(x[-1]), right=_NAMES)
    ax.set_ylim(0.0, 1.0)
    ax.fill_between(x, c.low, c.high, color=PALE, linewidth=0)
    ends: list[tuple[float, str, str]] = [
        ((c.low[-1] + c.high[-1]) / 2, "10th-90th percentile", GREY)
    ]
    lines = [
        (c.at_median, f"median {shown.symbol} = {fmt.effect(shown.median)}", BLUE, (0, (4, 1.5))),
        (c.at_value, f"at {shown.symbol} = {fmt.effect(shown.value)}", INK, "-"),
        (c.overall, "overall chance", ORANGE, (0, (1, 1.2))),
    ]
    for values, text, colour, style in lines:
        if values is not None:
            ax.plot(x, values, color=colour, linewidth=1.2, linestyle=style)
            ends.append((values[-1], text, colour))
    height = ax.bbox.height / canvas.root(ax).dpi * 25.4
    where = canvas.spread([e[0] for e in ends], 3.2 / height, 0.03, 0.98)
    for (_, text, colour), y in zip(ends, where, strict=True):
        canvas.write(ax, place.high + 1.2 * place.unit, y, text, color=colour)
    ax.plot([place.low, place.high], [shown.wanted] * 2, color=GREY, linewidth=0.5)
    _sizes(ax, shown, place, height)
    at = log_ticks(place.low, place.high, (place.high - place.low) / place.unit)
    canvas.ticks(ax, [math.log10(n) for n in at], [fmt.tick(n) for n in at])
    canvas.ticks(ax, [0, 0.2, 0.4, 0.6, 0.8, 1], ["0", ".2", ".4", ".6", ".8", "1"], axis="y")
    canvas.name(ax, x="participants in total", y="power", over=place)
    return canvas.root(ax)


def _sizes(ax: Axes, shown: ChancesFigure, place: canvas.Frame, height: float) -> None:
    """The planned and the as-printed size: a line each, named above without touching."""
    marks = [
        (float(np.log10(n)), f"{text} {fmt.count(n)}", colour)
        for n, text, colour in (
            (shown.printed, "as printed", ORANGE),
            (shown.planned, "planned", INK),
        )
        if n is not None
    ]
    if not marks:
        return
    widths = [canvas.width(text) * place.unit for _, text, _ in marks]
    gap = max(widths) + 1.5 * place.unit
    where = canvas.spread(
        [m[0] for m in marks], gap, place.low + widths[0] / 2, place.end - widths[-1] / 2
    )
    for (at, text, colour), x in zip(marks, where, strict=True):
        ax.plot([at, at], [0.0, 1.0], color=colour, linewidth=0.9, linestyle=(0, (2, 1.5)))
        ax.plot([at, x], [1.0, 1.0 + 1.2 / height], color=colour, linewidth=0.5, clip_on=False)
        canvas.write(ax, x, 1.0 + 2.9 / height, text, color=colour, ha="center")
