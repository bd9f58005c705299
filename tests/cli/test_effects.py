from __future__ import annotations

import json

import pytest

from netsize.cli.main import main

TEXT = "A: t(38) = 2.31, p = .026\nB: F(1, 56) = 5.12\nC: t(30) = 1.1, n.s. [sample S1]\n"


@pytest.fixture
def run(tmp_path, capsys):
    """run(text, *options) → (exit code, stdout, stderr) of `netsize effects` on a file."""

    def go(text: str, *options: str) -> tuple[int, str, str]:
        source = tmp_path / "literature.txt"
        source.write_text(text, encoding="utf-8")
        code = main(["effects", str(source), *options])
        captured = capsys.readouterr()
        return code, captured.out, captured.err

    return go


def test_table(run):
    code, out, err = run(TEXT)
    assert (code, err) == (0, "")
    assert out.splitlines()[0] == "3 results: standardized mean difference"
    assert "F(1, 56) = 5.12" in out


def test_json(run):
    code, out, _ = run(TEXT, "--json", "--level", "0.9", "--variance", "large-sample")
    record = json.loads(out)
    assert code == 0
    assert [r["label"] for r in record["rows"]] == ["A", "B", "C"]
    assert record["rows"][2]["sample"] == "S1"
    assert record["rows"][0]["level"] == 0.9
    g = record["rows"][0]["estimate"]
    assert record["rows"][0]["variance"] == pytest.approx(0.1 + g * g / 80)


@pytest.mark.parametrize(
    ("option", "start"), [("--csv", "label,sample"), ("--markdown", "| study")]
)
def test_other_formats(run, option, start):
    code, out, _ = run(TEXT, option)
    assert code == 0
    assert out.startswith(start)


def test_question_and_its_answers(run):
    mixed = TEXT + "D: t(19) = 2.5 [paired]\n"
    code, out, err = run(mixed)
    assert (code, out) == (3, "")
    assert "Which are to be pooled?" in err
    assert run(mixed, "--within-pair", ".5")[0] == 0
    code, out, _ = run(mixed, "--metric", "mean-difference")
    assert code == 0
    assert "Left out:" in out


@pytest.mark.parametrize(
    ("options", "named"),
    [
        (("--level", "95"), "level"),
        (("--metric", "cohen-d"), "metric"),
        (("--json", "--csv"), "choose one"),
        (("--cut-points", "a,b"), "--cut-points"),
    ],
)
def test_bad_options_are_named(run, options, named):
    code, out, err = run(TEXT, *options)
    assert (code, out) == (3, "")
    assert named in err
    assert "Traceback" not in err
