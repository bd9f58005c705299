"""The significant p-values against what the fit expects of them, and against no effect."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.planning.curves import ExpectedP, expected_p
from netsize.planning.plan import Plan
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, PALE

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["SignificantPFigure", "draw_significant_p", "significant_p_figure"]

_NAMES = 26.0


@dataclass(frozen=True, slots=True, kw_only=True)
class SignificantPFigure:
    """What the figure shows; `p` None where no significant result has an exact p."""

    p: ExpectedP | None

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        if self.p is None:
            return "No significant result has an exact p-value, so there is nothing to show."
        total = sum(self.p.observed)
        rows = "; ".join(
            f"up to {fmt.p_limit(limit)}: {seen} seen, {fmt.percent(fit)} expected"
            for limit, seen, fit in zip(
                self.p.limits, self.p.observed, self.p.expected, strict=True
            )
        )
        return (
            f"Bars: {total} significant p-value{'s' if total != 1 else ''} in "
            f"{len(self.p.limits)} bins, with the shares the fit expects ({rows}); were there no "
            f"effect, each bin would hold {fmt.percent(self.p.no_effect[0])}."
        )


def significant_p_figure(plan: Plan) -> SignificantPFigure:
    """The numbers of the figure for a plan."""
    return SignificantPFigure(p=expected_p(plan))


def draw_significant_p(shown: SignificantPFigure, *, ax: Axes | None = None) -> Figure:
    """Draw bars of what was seen, a line of what the fit expects, and the level of no effect."""
    ax = canvas.axes(ax, height=60.0, left=11.0, top=4.0)
    p = shown.p
    if p is None:
        canvas.frame(ax, 0.0, 1.0)
        ax.set_axis_off()
        canvas.write(ax, 0.5, 0.5, "no significant result has an exact p", ha="center", color=GREY)
        return canvas.root(ax)
    total = sum(p.observed)
    share = np.array(p.observed) / total
    place = canvas.frame(ax, 0.0, p.limits[-1], right=_NAMES)
    step = p.limits[0]
    middle = np.array(p.limits) - step / 2
    top = 1.2 * max(share.max(), max(p.expected), max(p.no_effect))
    ax.set_ylim(0.0, top)
    ax.bar(middle, share, width=0.86 * step, color=PALE, edgecolor=GREY, linewidth=0.5)
    ax.plot(middle, p.expected, "-o", color=BLUE, linewidth=1.3, markersize=3.0)
    ax.plot(
        [0.0, p.limits[-1]], [p.no_effect[0]] * 2, color=INK, linewidth=0.9, linestyle=(0, (3, 2))
    )
    for x, seen in zip(middle, p.observed, strict=True):
        canvas.write(ax, float(x), 0.965 * top, fmt.count(seen), ha="center", color=GREY)
    canvas.write(ax, p.limits[-1] + 1.2 * place.unit, 0.965 * top, "results seen", color=GREY)
    ends = [
        (float(p.expected[-1]), "expected by the fit", BLUE),
        (float(p.no_effect[-1]), "if there were none", INK),
    ]
    height = ax.bbox.height / canvas.root(ax).dpi * 25.4
    where = canvas.spread([e[0] for e in ends], 3.2 * top / height, 0.03 * top, 0.9 * top)
    for (_, text, colour), y in zip(ends, where, strict=True):
        canvas.write(ax, p.limits[-1] + 1.2 * place.unit, y, text, color=colour)
    canvas.ticks(ax, (0.0, *p.limits), ["0", *(fmt.p_limit(x) for x in p.limits)])
    shares = canvas.steps(0.0, top, 4)
    canvas.ticks(ax, shares, [f"{s:.0%}" for s in shares], axis="y")
    canvas.name(
        ax, x="two-sided p of the significant results", y="share of these results", over=place
    )
    return canvas.root(ax)
