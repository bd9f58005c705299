"""Invented literatures, and what is made of them, once a run."""

import random
from pathlib import Path

import pytest

import netsize

ROOT = Path(__file__).parents[2]

_RANDOM = random.Random(20)
LITERATURES = {
    "finite": (ROOT / "examples" / "reading-aloud.txt").read_text(encoding="utf-8"),
    "no-finite-size": (
        "Study 1: t(38) = 2.05, p = .047\nStudy 2: p < .05, n = 40\nStudy 3: F(1, 40) < 1\n"
    ),
    "correlations": (
        "Cohort 1: r(48) = .31\nCohort 2: r(98) = .22\nCohort 3: r(61) = .35\n"
        "Cohort 4: r(150) = .17\nCohort 5: r(33) = .12\n"
    ),
    "f-tests": (
        "Field 1: F(2, 57) = 4.40\nField 2: F(2, 87) = 3.60\nField 3: F(2, 45) = 5.20\n"
        "Field 4: F(2, 117) = 2.10\n"
    ),
    "one": "Alone: t(38) = 2.31, p = .026\n",
    "inequalities": "Study 1: p < .05, n = 40\nStudy 2: p < .01, n = 60\n",
    "hundreds": "".join(
        f"Study number {i}: t({_RANDOM.randint(20, 200)}) = {_RANDOM.gauss(2.2, 1):.2f}\n"
        for i in range(1, 201)
    ),
    "sixty": "".join(
        f"A study with a rather long name, number {i}: t({_RANDOM.randint(20, 200)}) = "
        f"{_RANDOM.gauss(2.2, 1):.2f}\n"
        for i in range(1, 61)
    ),
}
HOSTILE = (
    "<script>alert(1)</script>",
    "\"double\" & 'single' $\\frac{a$",
    "\u202eright to left\u202c \u200f",
    "😀 漢字 عربي",
    "=HYPERLINK(1)",
    "@SUM(A1)",
    "</svg><img src=x onerror=alert(1)>",
    "*bold* [link](javascript:alert(1)) `code` | cell",
    "1. item",
    "]]>&lt;!--",
)


@pytest.fixture(scope="session")
def plans():
    """A function: name of a literature (and choices) → its plan, made once."""
    made = {}

    def get(name, **choices):
        key = (name, tuple(sorted(choices.items())))
        if key not in made:
            made[key] = netsize.plan(LITERATURES[name], **choices)
        return made[key]

    return get


@pytest.fixture(scope="session")
def hostile_plan():
    """Results whose labels, given as records, try to break out of where they are shown."""
    from dataclasses import replace

    results = netsize.read("".join(f"S {i}: t({30 + i}) = 2.{i}1\n" for i in range(10))).results
    labels = (*HOSTILE[:-1], "x" * 5000)
    return netsize.plan(
        [replace(r, label=x, sample=x, text=x) for r, x in zip(results, labels, strict=True)]
    )


@pytest.fixture(scope="session")
def documents(plans):
    """A function: name of a literature (and choices) → its document, made once."""
    from netsize.presentation.report import compose

    made = {}

    def get(name, **choices):
        key = (name, tuple(sorted(choices.items())))
        if key not in made:
            made[key] = compose(plans(name, **choices), netsize.read(LITERATURES[name]), name=name)
        return made[key]

    return get


@pytest.fixture(scope="session")
def hostile_document(hostile_plan):
    from netsize.presentation.report import compose

    return compose(hostile_plan, name=HOSTILE[0], command=HOSTILE[1])
