"""Whatever comes in, only results or reading errors come out."""

import json
import math
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netsize.errors import ReadingError
from netsize.reported import read
from netsize.reported.check import check

LINES = Path(__file__).with_name("corpus.tsv").read_text(encoding="utf-8").splitlines()
REAL = [
    line.split("\t")[0].replace("\\n", "\n").replace("\\t", "\t")
    for line in LINES
    if not line.startswith("## ")
]
BITS = st.sampled_from(
    [
        *"tFrzpdnNMχη²=<>()[]{},.;:|-−–±%*'\"\t\n #&^_0123456789",
        "\u2009",
        "\u200b",
        "\r\n",
        "95% CI ",
        "p = ",
        "t(38) = ",
        " vs ",
        "𝑡",
        "½",
        "ﬁ",
        "e9",
        "NaN",
        "[paired]",
        "n = 20 ",
    ]
)
FEW = settings(max_examples=150, deadline=None, derandomize=True)


def examine(text):
    try:
        reading = read(text)
    except ReadingError as error:
        assert error.args[0]  # noqa: PT017  (a message; results are the usual outcome)
        return
    assert reading.results or reading.unread
    for r in reading.results:
        assert r.text == text[r.span.start : r.span.end]
        assert r.label
        assert r.sample
        assert all(math.isfinite(d) and d > 0 for d in r.df)
        assert all(n >= 1 for n in r.n)
        assert r.value is None or math.isfinite(r.value)
        assert r.p is None or 0 <= r.p.value <= 1
        assert r.family != "r" or r.value is None or abs(r.value) < 1
        assert r.family not in ("f", "chi2") or r.value is None or r.value >= 0
        for finding in check(r):
            assert finding.message
    assert len({r.label for r in reading.results}) == len(reading.results)
    assert read(json.dumps(reading.to_dict(), allow_nan=False)) == reading


@FEW
@given(st.text(max_size=200))
def test_any_text(text):
    examine(text)


@FEW
@given(st.lists(BITS, max_size=40))
def test_pieces_of_statistics(bits):
    examine("".join(bits))


@FEW
@given(
    st.lists(st.sampled_from(REAL), min_size=1, max_size=4),
    st.lists(st.tuples(st.integers(0, 10_000), st.integers(0, 3), BITS), max_size=6),
)
def test_mutated_real_lines(lines, edits):
    text = "\n".join(lines)
    for where, removed, added in edits:
        where %= len(text) + 1
        text = text[:where] + added + text[where + removed :]
    examine(text)


@pytest.mark.parametrize(
    "unit",
    ["t(((((", "1234567890", "t(38", "F(1,", "p = ", "[n ", "t ", "\n,", "12/40 vs ", "95% CI ",
     '"a",', "χ²(", "a", "M = 5 ", "&lt;", "½", "r = .3 ± ", "a:", "|", ";\n", "#", "n = 20, ",
     "t,df\n", "\u0301", "(", "12%", "1,", "{[("],
)  # fmt: skip
def test_long_runs_of_one_piece(unit):
    examine(unit * (20_000 // len(unit)))
