"""Funnel: estimates against their standard errors, over the regions of significance.

The regions follow the effect-free standard error: a result with estimate x and standard error s
lies where its normal p-value is 2 P(Z > |x|/s) (contours: Peters et al. 2008). A literature printed
for its significance crowds against the edge of the .05 region.
"""

from __future__ import annotations

import itertools
import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from netsize.effect_sizes.metrics import METRICS
from netsize.planning.plan import Plan
from netsize.presentation import format as fmt
from netsize.presentation.figures import canvas
from netsize.presentation.figures.canvas import BLUE, GREY, INK, ORANGE

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["FunnelFigure", "Point", "draw_funnel", "funnel_figure"]

# two-sided p and its normal quantile; the shades lighten with significance
_CONTOURS = ((0.10, 1.6449), (0.05, 1.9600), (0.01, 2.5758))
_SHADES = ("#FFFFFF", "#E3E3E3", "#CDCDCD", "#F1F1F1")  # p > .10, .05-.10, .01-.05, < .01


@dataclass(frozen=True, slots=True, kw_only=True)
class Point:
    """One result on the pooling metric; significant as predicted or not."""

    estimate: float
    se: float
    significant: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class FunnelFigure:
    """What the funnel shows. mean : pooled, None without one; centre : median of the planning
    distribution, both on the pooling metric."""

    metric: str
    points: tuple[Point, ...]
    mean: float | None
    centre: float | None
    left_out: int

    @property
    def description(self) -> str:
        """For readers who cannot see it."""
        k, inside = len(self.points), sum(p.significant for p in self.points)
        shown = METRICS[self.metric].shown
        if not k:
            return "Funnel plot without points: no result has a point estimate."
        text = (
            f"Funnel plot of {k} estimate{'s' if k != 1 else ''} against standard error, from "
            f"{fmt.effect(min(p.se for p in self.points))} to "
            f"{fmt.effect(max(p.se for p in self.points))}; {inside} significant in the predicted "
            "direction."
        )
        for name, value in (("pooled mean", self.mean), ("planning median", self.centre)):
            if value is not None:
                text += f" Line at the {name}, {fmt.effect(float(shown(np.array(value))))}."
        if self.left_out:
            text += f" Without a point estimate and not shown: {self.left_out}."
        return text


def funnel_figure(plan: Plan) -> FunnelFigure:
    """The numbers of the funnel of a plan."""
    rows = plan.literature.rows
    points = tuple(
        Point(
            estimate=row.estimate,
            se=math.sqrt(row.null_variance),
            significant=row.evidence.band == 0,
        )
        for row in rows
        if row.estimate is not None and row.null_variance is not None
    )
    pooled = plan.literature.pooled
    centre = float(plan.metric.pooled(np.array(plan.answer.median)))
    return FunnelFigure(
        metric=plan.metric.name,
        points=points,
        mean=None if pooled is None else pooled.mean,
        centre=centre if math.isfinite(centre) else None,
        left_out=len(rows) - len(points),
    )


def draw_funnel(shown: FunnelFigure, *, ax: Axes | None = None) -> Figure:
    """Draw it; regions of significance only where effects have a sign."""
    metric = METRICS[shown.metric]
    ax = canvas.axes(ax, height=70.0, left=11.0, top=3.0)
    deepest = 1.12 * max((p.se for p in shown.points), default=0.5)
    low, high = _limits(shown, deepest, metric.signed)
    over = canvas.frame(ax, low, high)
    ax.set_ylim(deepest, -0.09 * deepest)
    if metric.signed:
        _regions(ax, low, high, deepest)
    else:
        ax.plot([0.0, 0.0], [0.0, deepest], color=GREY, linewidth=0.6)
    crowded = len(shown.points) > 60
    for point in shown.points:
        ax.plot(
            [point.estimate],
            [point.se],
            "o",
            markersize=2.2 if crowded else 3.6,
            markerfacecolor=INK if point.significant else "white",
            markeredgecolor=INK,
            markeredgewidth=0.7,
        )
    _lines(ax, shown, deepest, low, high)
    at = [
        x
        for x in _ticks(low, high, shown.metric)
        if low <= float(metric.pooled(np.array(x))) <= high
    ]
    canvas.ticks(ax, [float(metric.pooled(np.array(x))) for x in at], [fmt.tick(x) for x in at])
    depth = canvas.steps(0.0, deepest, 4)
    canvas.ticks(ax, depth, [fmt.tick(s) for s in depth], axis="y")
    canvas.name(
        ax, x=f"{metric.title} ({metric.symbol})", y="standard error at no effect", over=over
    )
    return canvas.root(ax)


def _limits(shown: FunnelFigure, deepest: float, signed: bool) -> tuple[float, float]:
    values = [p.estimate for p in shown.points]
    values += [x for x in (shown.mean, shown.centre, 0.0) if x is not None]
    if signed:
        values += [2.9 * deepest, -1.3 * deepest]
    low, high = min(values), max(values)
    pad = 0.04 * (high - low or 1.0)
    return low - pad, high + pad


def _regions(ax: Axes, low: float, high: float, deepest: float) -> None:
    """Shaded wedges of two-sided p, named at the foot of the right side."""
    depth = np.array([0.0, deepest])
    edges = [0.0, *(z for _, z in _CONTOURS), 10 * max(abs(low), high) / deepest]
    for side in (1, -1):
        for inner, outer, shade in zip(edges[:-1], edges[1:], _SHADES, strict=True):
            ax.fill_betweenx(
                depth,
                np.clip(side * inner * depth, low, high),
                np.clip(side * outer * depth, low, high),
                color=shade,
                linewidth=0,
                zorder=0,
            )
    ax.plot([0.0, 0.0], [0.0, deepest], color=GREY, linewidth=0.6, zorder=1)
    foot = 0.965 * deepest
    middle = [(a + b) / 2 for (_, a), (_, b) in itertools.pairwise(_CONTOURS)]
    names = [
        ("p > .10", -0.8, "center"),
        ("<.10", middle[0], "center"),
        ("<.05", middle[1], "center"),
    ]
    names.append(("<.01", 2.62, "left"))
    for text, z, side_of in names:
        canvas.write(ax, z * foot, foot, text, ha=side_of, color=GREY, fontsize=5.5)


def _lines(ax: Axes, shown: FunnelFigure, deepest: float, low: float, high: float) -> None:
    """The two centres, named at the top where they do not touch."""
    ends = [
        (value, colour, style, text)
        for value, colour, style, text in (
            (shown.mean, ORANGE, (0, (4, 2)), "pooled"),
            (shown.centre, BLUE, "-", "planning median"),
        )
        if value is not None and low <= value <= high
    ]
    ends.sort(key=lambda x: x[0])
    for index, (value, colour, style, text) in enumerate(ends):
        ax.plot([value] * 2, [0.0, deepest], color=colour, linewidth=1.1, linestyle=style)
        # the left name ends at its line, the right one begins there
        left = index == 0 and len(ends) == 2
        gap = 0.012 * (high - low) * (-1 if left else 1)
        canvas.write(
            ax,
            value + gap,
            -0.05 * deepest,
            text,
            ha="right" if left else "left",
            color=colour,
        )


def _ticks(low: float, high: float, metric: str) -> list[float]:
    """Round values of the shown scale across the metric's range."""
    if metric != "fisher-z":
        return canvas.steps(low, high, 6)
    return canvas.steps(float(np.tanh(low)), float(np.tanh(high)), 6)
