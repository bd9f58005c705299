"""Small parts that several sections use."""

from __future__ import annotations

from netsize.planning.goals import Sized
from netsize.planning.plan import Plan
from netsize.presentation.figures import FIGURES, figure_of
from netsize.presentation.report.content import Cell, Picture

__all__ = ["NONE", "groups_of", "picture", "size_of"]

NONE = "none"  # in the place of a size that does not exist


def picture(plan: Plan, name: str) -> Picture:
    """One of the plan's figures."""
    shown = figure_of(plan, name)
    return Picture(
        key=name, caption=FIGURES[name].caption, description=shown.description, shown=shown
    )


def size_of(sized: Sized, *, known: bool = True) -> Cell:
    """Participants in total; "none" where no finite size exists, missing without an effect."""
    return sized.n_total if sized.n_total is not None else (NONE if known else None)


def groups_of(sized: Sized) -> Cell:
    """Group sizes, missing where there is no size."""
    return sized.n_per_group
