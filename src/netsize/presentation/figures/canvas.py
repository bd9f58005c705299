"""What all figures share: colours, sizes, a frame with room for labels, text that keeps its place.

Figures are drawn on `matplotlib.figure.Figure` alone: no pyplot, no global settings. Lengths are
in millimetres. Blue and a darkened vermilion are those of Okabe & Ito (2008), which colour-blind
readers tell apart and which carry small text on white; in grey, markers and line styles differ.
"""

from __future__ import annotations

import unicodedata
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = [
    "BLUE",
    "COLUMN",
    "FONT",
    "GREY",
    "INK",
    "ORANGE",
    "PALE",
    "SIZE",
    "Frame",
    "axes",
    "clean",
    "frame",
    "name",
    "quiet_glyphs",
    "root",
    "shorten",
    "spread",
    "steps",
    "tick_step",
    "ticks",
    "width",
    "write",
]

COLUMN = 85.0  # one column of a journal
FONT = ["DejaVu Sans"]  # comes with matplotlib, so that every machine draws the same
SIZE = 6.5  # points
BLUE, ORANGE = "#0072B2", "#B84E00"
INK, GREY, PALE = "#1A1A1A", "#5F5F5F", "#C5DCEA"
_MM = 1 / 25.4
_POINT = 25.4 / 72
_ALLOWANCE = 1.07  # screens round the widths of letters, and other fonts may stand in
_ELLIPSIS = "…"


def axes(
    ax: Axes | None, *, height: float, left: float = 2.0, bottom: float = 10.0, top: float = 2.0
) -> Axes:
    """`ax` itself, or axes on a new figure one column wide; margins hold what stands outside."""
    if ax is None:
        from matplotlib.figure import Figure

        figure = Figure(figsize=(COLUMN * _MM, height * _MM), dpi=150)
        ax = figure.add_axes(
            (
                left / COLUMN,
                bottom / height,
                (COLUMN - left - 2.0) / COLUMN,
                (height - bottom - top) / height,
            )
        )
    for side in ("top", "right", "left"):
        ax.spines[side].set_visible(False)
    ax.spines["bottom"].set(color=GREY, linewidth=0.6)
    return ax


def root(ax: Axes) -> Figure:
    """The figure that holds the axes, through any subfigures."""
    figure = ax.get_figure(root=True)
    assert figure is not None
    return figure


@dataclass(frozen=True, slots=True)
class Frame:
    """Where on the axes the data may lie: between `low` and `high`, labels on both sides of it.

    start, end : the limits of the whole axes, in data units. unit : data units a millimetre.
    """

    low: float
    high: float
    start: float
    end: float
    unit: float


def frame(ax: Axes, low: float, high: float, *, left: float = 0.0, right: float = 0.0) -> Frame:
    """Set x-limits so that [low, high] leaves `left` and `right` millimetres free for labels.

    On axes too narrow for that, the data keep two fifths of them.
    """
    whole = ax.bbox.width / root(ax).dpi * 25.4
    room = max(whole - left - right, 0.4 * whole)
    shrink = (whole - room) / (left + right) if left + right > 0 else 0.0
    unit = (high - low) / room
    placed = Frame(low, high, low - left * shrink * unit, high + right * shrink * unit, unit)
    ax.set_xlim(placed.start, placed.end)
    ax.spines["bottom"].set_bounds(low, high)
    return placed


def ticks(ax: Axes, where: Sequence[float], labels: Sequence[str], axis: str = "x") -> None:
    """Tick marks with their texts, small and grey."""
    chosen = ax.xaxis if axis == "x" else ax.yaxis
    chosen.set_ticks(list(where), list(labels))
    ax.tick_params(
        axis="x" if axis == "x" else "y",
        which="both",
        labelsize=SIZE,
        color=GREY,
        labelcolor=INK,
        length=2,
        width=0.6,
        pad=1.5,
    )
    ax.minorticks_off()
    for label in (*ax.get_xticklabels(), *ax.get_yticklabels()):
        label.set(fontfamily=FONT, parse_math=False)


def tick_step(low: float, high: float, most: int = 5) -> float:
    """A step of 1, 2 or 5 times a power of ten that makes at most `most` steps."""
    span = max(high - low, 1e-9)
    power = 10.0 ** np.floor(np.log10(span / most))
    return float(next(m * power for m in (1, 2, 5, 10) if span / (m * power) <= most + 1e-9))


def steps(low: float, high: float, most: int = 5) -> list[float]:
    """The multiples of `tick_step` inside [low, high]."""
    step = tick_step(low, high, most)
    first, last = int(np.ceil(low / step - 1e-9)), int(np.floor(high / step + 1e-9))
    return [step * i for i in range(first, last + 1)]


def write(ax: Axes, x: float, y: float, text: str, **style: Any) -> None:
    """A label; never read as mathematics, whatever characters it has."""
    options: dict[str, Any] = {"fontsize": SIZE, "color": INK, "va": "center"} | style
    ax.text(x, y, clean(text), parse_math=False, clip_on=False, fontfamily=FONT, **options)


def name(ax: Axes, x: str, y: str = "", over: Frame | None = None) -> None:
    """Names of the axes; that of x under the middle of the data where a frame is given."""
    for text, setter in ((x, ax.set_xlabel), (y, ax.set_ylabel)):
        if text:
            setter(text, fontsize=SIZE, color=INK, labelpad=2, parse_math=False, fontfamily=FONT)
    if over is not None:
        middle = ((over.low + over.high) / 2 - over.start) / (over.end - over.start)
        height = ax.bbox.height / root(ax).dpi * 25.4
        ax.xaxis.set_label_coords(middle, -5.0 / height)


def clean(text: str) -> str:
    """Labels are data: line breaks become blanks; control and direction marks go."""
    text = " ".join(text.split())
    return "".join(c for c in text if unicodedata.category(c) not in ("Cc", "Cf", "Cs", "Co", "Cn"))


def width(text: str, size: float = SIZE, *, bold: bool = False) -> float:
    """Millimetres that a text takes; characters the font lacks count as a full square."""
    from matplotlib.font_manager import FontProperties
    from matplotlib.textpath import text_to_path

    wide = sum(unicodedata.east_asian_width(c) in "WF" for c in text)
    weight = "bold" if bold else "normal"
    with quiet_glyphs():
        points, _, _ = text_to_path.get_text_width_height_descent(
            text, FontProperties(family=FONT, size=size, weight=weight), ismath=False
        )
    return float(points) * _POINT * _ALLOWANCE + 0.5 * wide * size * _POINT


def shorten(text: str, most: float, size: float = SIZE) -> str:
    """The text, or as much of its beginning as fits `most` millimetres with an ellipsis."""
    text = clean(text)
    if len(text) <= 200 and width(text, size) <= most:
        return text
    low, high = 0, min(len(text), 200)
    while low < high:
        middle = (low + high + 1) // 2
        if width(text[:middle].rstrip() + _ELLIPSIS, size) <= most:
            low = middle
        else:
            high = middle - 1
    return text[:low].rstrip() + _ELLIPSIS


def spread(places: Sequence[float], gap: float, low: float, high: float) -> list[float]:
    """Places at least `gap` apart within [low, high], each as near its own as the others allow.

    Where they cannot all fit, they are spaced evenly. Keeps the order of `places`.
    """
    count = len(places)
    if not count:
        return []
    if (count - 1) * gap >= high - low:
        even = np.linspace(low, high, count)
        order = np.argsort(places, kind="stable")
        out = np.empty(count)
        out[order] = even
        return [float(x) for x in out]
    order = np.argsort(places, kind="stable")
    # isotonic regression of what is left after the gaps (pool adjacent violators)
    wanted = np.asarray(places, dtype=float)[order] - gap * np.arange(count)
    blocks: list[list[float]] = []
    for value in wanted:
        blocks.append([float(value), 1.0])
        while len(blocks) > 1 and blocks[-2][0] > blocks[-1][0]:
            (a, n), (b, m) = blocks[-2], blocks[-1]
            blocks[-2:] = [[(a * n + b * m) / (n + m), n + m]]
    flat = np.concatenate([np.full(int(n), value) for value, n in blocks])
    flat = np.clip(flat, low, high - gap * (count - 1))
    out = np.empty(count)
    out[order] = flat + gap * np.arange(count)
    return [float(x) for x in out]


@contextmanager
def quiet_glyphs() -> Iterator[None]:
    """No warning for characters that the font lacks: an empty square stands for them."""
    import warnings

    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="(?s).*Glyph .* missing from")
        yield
