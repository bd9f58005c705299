"""The figures of a plan: for each, the numbers it shows, taken from a plan, and its drawing.

`evidence(plan)` and its like draw at once; `figures_of(plan)` gives the numbers, which a page can
hold, and `draw(numbers)` draws them later. All take `ax=` to draw on axes of one's own.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, TypeAlias

from netsize.planning.plan import Plan
from netsize.presentation.figures import canvas
from netsize.presentation.figures.belief import BeliefFigure, belief_figure, draw_belief
from netsize.presentation.figures.chances import ChancesFigure, chances_figure, draw_chances
from netsize.presentation.figures.evidence import EvidenceFigure, draw_evidence, evidence_figure
from netsize.presentation.figures.funnel import FunnelFigure, draw_funnel, funnel_figure
from netsize.presentation.figures.significant_p import (
    SignificantPFigure,
    draw_significant_p,
    significant_p_figure,
)
from netsize.presentation.figures.sizes import SizesFigure, draw_sizes, sizes_figure

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["FIGURES", "FigureNumbers", "Kind", "draw", "figure_of"]

FigureNumbers: TypeAlias = (
    EvidenceFigure | FunnelFigure | SignificantPFigure | BeliefFigure | SizesFigure | ChancesFigure
)


@dataclass(frozen=True, slots=True)
class Kind:
    """A figure: its numbers' record, how a plan gives them, how they are drawn, its caption."""

    numbers: type[Any]
    of: Callable[[Plan], Any]
    draw: Callable[..., Any]
    caption: str


FIGURES: dict[str, Kind] = {
    "evidence": Kind(
        EvidenceFigure,
        evidence_figure,
        draw_evidence,
        "The evidence. Squares: small-sample corrected estimates, larger for more precise ones, "
        "with exact intervals. Open diamonds: readings that take the literature at its word; "
        "filled: corrected for selective printing.",
    ),
    "funnel": Kind(
        FunnelFigure,
        funnel_figure,
        draw_funnel,
        "Funnel. Estimates against the standard error they would have at no effect, over the "
        "regions of two-sided p (normal approximation); filled: significant as predicted.",
    ),
    "significant-p": Kind(
        SignificantPFigure,
        significant_p_figure,
        draw_significant_p,
        "The significant p-values. Bars with counts: seen; line: expected of the averaged fit; "
        "dashed: were there no effect.",
    ),
    "planning-distribution": Kind(
        BeliefFigure,
        belief_figure,
        draw_belief,
        "The planning distribution: what is believed about the effect of the new study. Shaded: "
        "the part below the planning quantile.",
    ),
    "sizes": Kind(
        SizesFigure,
        sizes_figure,
        draw_sizes,
        "Participants needed over the effect, every row of the table marked. Open circles: taken "
        "at its word; squares: corrected; diamond: planning value.",
    ),
    "power": Kind(
        ChancesFigure,
        chances_figure,
        draw_chances,
        "Power over the size of the study. Band: from the 10th to the 90th percentile of the "
        "planning distribution.",
    ),
}


def figure_of(plan: Plan, name: str) -> FigureNumbers:
    """The numbers that the figure called `name` shows; KeyError for an unknown name."""
    numbers: FigureNumbers = FIGURES[name].of(plan)
    return numbers


def draw(shown: Plan | FigureNumbers, name: str | None = None, *, ax: Axes | None = None) -> Figure:
    """Draw a figure from its numbers, or the one called `name` of a plan."""
    if isinstance(shown, Plan):
        if name is None:
            raise TypeError("a plan has several figures; say which one with its name")
        shown = figure_of(shown, name)
    kind = next(k for k in FIGURES.values() if isinstance(shown, k.numbers))
    with canvas.quiet_glyphs():
        figure: Figure = kind.draw(shown, ax=ax)
    return figure
