"""Figures: they draw for every literature, their words keep apart, the same bytes every time."""

import itertools
import subprocess
import sys
import xml.etree.ElementTree as ElementTree

import matplotlib
import numpy as np
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from netsize.presentation import format as fmt
from netsize.presentation.figures import FIGURES, canvas, draw, figure_of
from netsize.presentation.figures.saving import FORMATS, inline_svg, rendered

CASES = {
    "finite": {},
    "finite, all corrections": {"corrections": ("all",)},
    "finite, budget": {"goal": "budget", "at_most": 300},
    "finite, precision": {"goal": "precision", "half_width": 0.2},
    "no-finite-size": {},
    "correlations": {},
    "f-tests": {},
    "one": {"smallest_effect": 0.3},
    "inequalities": {},
    "hundreds": {},
    "sixty": {},
    "f-tests, fixed": {"rule": "fixed", "planning_effect": 0.2},
}


@pytest.fixture(params=CASES, ids=str)
def plan(request, plans):
    return plans(request.param.split(",")[0], **CASES[request.param])


def words(figure):
    """Every visible text of a figure with its box in pixels."""
    drawn = FigureCanvasAgg(figure)
    with canvas.quiet_glyphs():
        drawn.draw()
        return [
            (text.get_text(), text.get_window_extent(drawn.get_renderer()))
            for text in figure.findobj(matplotlib.text.Text)
            if text.get_visible() and text.get_text().strip()
        ]


def overlap(a, b):
    """Common width and height in pixels, the smaller of them; at most 0 where they are apart."""
    return min(min(a.x1, b.x1) - max(a.x0, b.x0), min(a.y1, b.y1) - max(a.y0, b.y0))


@pytest.mark.parametrize("name", FIGURES)
def test_words_stay_inside_and_apart(plan, name):
    figure = draw(plan, name)
    found = words(figure)
    assert found
    for text, box in found:
        assert box.x0 >= -1, text
        assert box.x1 <= figure.bbox.x1 + 1, text
        assert box.y0 >= -1, text
        assert box.y1 <= figure.bbox.y1 + 1, text
    for (first, a), (second, b) in itertools.combinations(found, 2):
        assert overlap(a, b) < 2.5, (first, second)


@pytest.mark.parametrize("name", FIGURES)
def test_hostile_labels_are_only_words(hostile_plan, name):
    for form in FORMATS:
        assert rendered(draw(hostile_plan, name), form)
    svg = inline_svg(draw(hostile_plan, name), name=name, title="<b>", description="</svg>&")
    tree = ElementTree.fromstring(svg)
    kinds = {element.tag.rsplit("}")[-1] for element in tree.iter()}
    assert kinds <= {"svg", "title", "desc", "g", "path", "use", "defs", "text", "rect", "clipPath",
                     "tspan"}  # fmt: skip
    assert not any(c in svg for c in "\u202e\u202c\u200f")


def test_labels_that_are_cut_stand_in_the_description(hostile_plan):
    shown = figure_of(hostile_plan, "evidence")
    texts = [text for text, _ in words(draw(shown))]
    assert any(text.startswith("xxxx") and text.endswith("…") for text in texts)
    assert "x" * 5000 in shown.description


@pytest.mark.parametrize("name", ["sixty", "finite"])
def test_study_labels_end_before_the_data(plans, name):
    figure = draw(plans(name), "evidence")
    ax = figure.axes[0]
    low, _ = ax.spines["bottom"].get_bounds()
    edge = ax.transData.transform((low, 0))[0]
    labels = {x.label for x in plans(name).literature.rows}
    found = [(t, box) for t, box in words(figure) if any(x.startswith(t[:9]) for x in labels)]
    assert len(found) == len(labels)
    assert all(box.x1 <= edge for _, box in found)


@pytest.mark.parametrize("name", FIGURES)
@pytest.mark.parametrize("form", FORMATS)
def test_the_same_numbers_give_the_same_bytes(plans, name, form):
    shown = figure_of(plans("finite"), name)
    assert rendered(draw(shown), form) == rendered(draw(shown), form)


@pytest.mark.parametrize("name", FIGURES)
def test_a_column_wide_and_readable_at_that_width(plans, name):
    figure = draw(plans("finite"), name)
    assert figure.get_figwidth() * 25.4 == pytest.approx(85)
    for text in figure.findobj(matplotlib.text.Text):
        if text.get_text().strip():
            assert text.get_fontsize() >= 5.5


@pytest.mark.parametrize("name", FIGURES)
def test_draws_on_given_axes(plans, name):
    figure = Figure(figsize=(8, 4))
    left, right = figure.subplots(1, 2)
    assert draw(plans("finite"), name, ax=right) is figure
    assert not left.texts
    assert not left.lines


def test_settings_of_the_user_are_neither_used_nor_changed(plans):
    plan = plans("finite")
    before = rendered(draw(plan, "evidence"), "svg")
    with matplotlib.rc_context({"font.size": 30, "font.family": "monospace", "svg.hashsalt": "x"}):
        held = dict(matplotlib.rcParams)
        assert rendered(draw(plan, "evidence"), "svg") == before
        assert dict(matplotlib.rcParams) == held


def test_drawing_leaves_pyplot_alone():
    code = (
        "import sys, netsize\n"
        "from netsize.presentation.figures import draw\n"
        "assert 'matplotlib' not in sys.modules\n"
        "draw(netsize.plan('Study 1: t(38) = 2.31'), 'evidence')\n"
        "assert 'matplotlib' in sys.modules and 'matplotlib.pyplot' not in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_numbers_beside_the_marks_are_those_of_the_plan(plans):
    plan = plans("finite")
    texts = " ".join(text for text, _ in words(draw(plan, "sizes")))
    for row in plan.rows:
        assert fmt.count(row.sized.n_total) in texts
    texts = " ".join(text for text, _ in words(draw(plan, "planning-distribution")))
    for value in (plan.answer.value, plan.answer.median, plan.row("as-printed").effect):
        assert fmt.effect(value) in texts
    texts = " ".join(text for text, _ in words(draw(plan, "evidence")))
    for row in plan.literature.rows:
        assert f"{fmt.effect(row.estimate)} {fmt.interval(row.low, row.high)}" in texts


def test_no_finite_size_is_said_in_words(plans):
    texts = " ".join(text for text, _ in words(draw(plans("no-finite-size"), "sizes")))
    assert "planning value: none" in texts


def test_text_colours_have_the_contrast_of_small_print():
    """At least 4.5 to 1 against white (Web Content Accessibility Guidelines 2.2, 1.4.3)."""
    for colour in (canvas.INK, canvas.GREY, canvas.BLUE, canvas.ORANGE):
        rgb = np.array(matplotlib.colors.to_rgb(colour))
        linear = np.where(rgb <= 0.04045, rgb / 12.92, ((rgb + 0.055) / 1.055) ** 2.4)
        luminance = linear @ [0.2126, 0.7152, 0.0722]
        assert 1.05 / (luminance + 0.05) >= 4.5, colour


@pytest.mark.parametrize(
    ("places", "gap"),
    [((0, 0, 0), 1), ((5, 1, 1.2, 9.9), 2), ((3,), 4), (tuple(range(30)), 1), ((2, 2, 8, 8), 1.5)],
)
def test_spread_keeps_order_gap_and_bounds(places, gap):
    out = canvas.spread(places, gap, 0.0, 10.0)
    ordered = [out[i] for i in np.argsort(places, kind="stable")]
    assert min(out) >= 0
    assert max(out) <= 10
    room = 10.0 / max(len(places) - 1, 1)
    assert all(b - a >= min(gap, room) - 1e-9 for a, b in itertools.pairwise(ordered))


def test_spread_leaves_what_is_apart_where_it_is():
    assert canvas.spread([1.0, 4.0, 7.0], 2.0, 0.0, 10.0) == [1.0, 4.0, 7.0]
