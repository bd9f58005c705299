from __future__ import annotations

import csv
import io

import pytest

from netsize.effect_sizes import effects
from netsize.presentation.effect_table import effects_csv, effects_markdown, show_effects
from netsize.reported.records import ReportedResult

HOSTILE = "=cmd()|<b>*x*_"


@pytest.fixture
def table():
    return effects(
        [
            ReportedResult(label=HOSTILE, family="t", value=2.31, df=(38,), text="t(38) = 2.31"),
            ReportedResult(
                label="b", family="f", value=5.12, df=(1, 56), sample="S", text="F(1, 56) = 5.12"
            ),
            ReportedResult(
                label="c", family="t", value=1.0, relation="<", df=(40,), text="t(40) < 1"
            ),
        ]
    )


def test_csv_is_unrounded_and_harmless(table):
    rows = list(csv.DictReader(io.StringIO(effects_csv(table))))
    assert [r["label"] for r in rows] == ["'" + HOSTILE, "b", "c"]
    assert float(rows[0]["estimate"]) == table.rows[0].estimate
    assert rows[2]["estimate"] == rows[2]["p"] == ""


def test_markdown_is_one_table_whatever_the_labels(table):
    lines = effects_markdown(table).splitlines()
    assert lines[0].startswith("| study | sample | design | n | statistic | d | g |")
    cells = [line.replace("\\|", "").count("|") for line in lines[:5]]
    assert len(set(cells)) == 1
    assert "<b>" not in effects_markdown(table)
    assert "0.73" in lines[2]
    assert "0.72" in lines[2]


def test_terminal_shows_effects_and_assumptions(table, capsys):
    show_effects(table)
    out = capsys.readouterr().out
    assert out.startswith("3 results: standardized mean difference")
    for part in ("0.73", "[0.085, 1.37]", "η² = 0.084", "equal groups of 20 assumed from df 38"):
        assert part in out


@pytest.mark.parametrize(
    ("result", "parts"),
    [
        (
            ReportedResult(label="a", family="r", value=0.31, df=(48,)),
            ("unbiased r", "0.31", "[0.034, 0.54]"),
        ),
        (
            ReportedResult(label="a", family="f", value=5.0, df=(2, 57)),
            ("η²", "ε²", "ω²", "0.15", "0.12"),
        ),
        (
            ReportedResult(label="a", family="t", value=3.0, df=(24,), design="paired"),
            ("dz", "gz", "0.60"),
        ),
    ],
)
def test_columns_of_each_metric(result, parts, capsys):
    show_effects(effects([result]))
    out = capsys.readouterr().out
    assert all(part in out for part in parts)
