"""`netsize weigh` as a user runs it."""

from __future__ import annotations

import csv
import io
import json

import pytest

import netsize
from netsize.cli.main import main

TEXT = "A: t(38) = 2.3\nB: t(58) = 2.5\nC: t(78) = 2.9\nD: t(48) = 2.2 [sample c]\nE: t(68) = 1.1\n"


@pytest.fixture
def source(tmp_path):
    path = tmp_path / "literature.txt"
    path.write_text(TEXT, encoding="utf-8")
    return str(path)


def test_tables_and_paragraph(source, capsys):
    assert main(["weigh", source]) == 0
    out = capsys.readouterr().out
    weighing = netsize.weigh(TEXT)
    for estimate in weighing.estimators:
        assert estimate.label in out
    for diagnostic in weighing.diagnostics:
        assert diagnostic.label in out
    assert "corrections that run" in out
    assert "I² = " in out
    assert "expected in [" in out
    assert "without" in out


def test_json_is_the_library_record(source, capsys):
    assert main(["weigh", source, "--json", "--heterogeneity", "paule-mandel"]) == 0
    record = json.loads(capsys.readouterr().out)
    assert record == json.loads(
        json.dumps(netsize.weigh(TEXT, heterogeneity="paule-mandel").to_dict())
    )


def test_csv_has_a_row_an_estimator(source, capsys):
    assert main(["weigh", source, "--csv"]) == 0
    rows = list(csv.DictReader(io.StringIO(capsys.readouterr().out)))
    weighing = netsize.weigh(TEXT)
    assert [row["key"] for row in rows] == [e.key for e in weighing.estimators]
    assert float(rows[1]["estimate"]) == weighing.pooled.mean


def test_every_option_reaches_the_library(source, capsys):
    options = [
        "--interval", "wald", "--level", "0.9", "--within-sample-correlation", "0.7",
        "--dependence", "clustered", "--steps", "0.025,0.5", "--alpha", "0.05",
    ]  # fmt: skip
    assert main(["weigh", source, "--json", *options]) == 0
    record = json.loads(capsys.readouterr().out)
    assert record["settings"] == {
        "heterogeneity": "restricted-likelihood",
        "interval": "wald",
        "level": 0.9,
        "within_sample_correlation": 0.7,
        "dependence": "clustered",
        "steps": [0.025, 0.5],
    }


@pytest.mark.parametrize(
    ("options", "message"),
    [
        (["--heterogeneity", "maximum"], "restricted-likelihood"),
        (["--interval", "exact"], "hartung-knapp"),
        (["--dependence", "none"], "composites"),
        (["--level", "95"], "between 0 and 1"),
        (["--within-sample-correlation", "2"], "between 0 and 1"),
        (["--steps", "a,b"], "--steps"),
        (["--steps", "0.5,0.5"], "distinct"),
        (["--metric", "furlongs"], "metric"),
        (["--json", "--csv"], "choose one"),
    ],
)
def test_wrong_settings_end_in_one_message(source, capsys, options, message):
    assert main(["weigh", source, *options]) == 3
    captured = capsys.readouterr()
    assert captured.out == ""
    assert message in captured.err
    assert "Traceback" not in captured.err


def test_nothing_to_weigh(tmp_path, capsys):
    path = tmp_path / "empty.txt"
    path.write_text("nothing here", encoding="utf-8")
    assert main(["weigh", str(path)]) == 3
    assert main(["weigh", str(tmp_path / "missing.txt")]) == 3
    path.write_text("A: p < .05, n = 40", encoding="utf-8")
    assert main(["weigh", str(path)]) == 3
    assert "point estimate" in capsys.readouterr().err


def test_labels_cannot_drive_the_terminal(tmp_path, capsys):
    path = tmp_path / "odd.txt"
    path.write_text("[red]A[/red]: t(38) = 2.3\n=cmd: t(58) = 2.5\nC: t(78) = 2.9\n", "utf-8")
    assert main(["weigh", str(path), "--skip-unread"]) == 0
    assert "\x1b" not in capsys.readouterr().out
