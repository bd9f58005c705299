"""`netsize solve`: sentence, table, JSON, ranges, exit codes."""

from __future__ import annotations

import json
import shlex

import pytest

from netsize.cli.main import main
from netsize.cli.solve import solve
from netsize.sizing import DESIGNS


def _run(capsys: pytest.CaptureFixture[str], arguments: str) -> tuple[int, str, str]:
    code = main(["solve", *shlex.split(arguments)])
    captured = capsys.readouterr()
    return code, captured.out, captured.err


def test_json_keeps_its_contract(capsys: pytest.CaptureFixture[str]) -> None:
    code, out, err = _run(capsys, "--design two-groups --effect 0.5 --power 0.95 --json")
    found = json.loads(out)
    assert (code, err) == (0, "")
    assert found["n_per_group"] == [105, 105]
    assert found["n_total"] == 210
    assert 0.95 <= found["power"] < 0.951
    code, out, _ = _run(capsys, "--design two-groups --effect 0.5 --n 105 --json")
    assert json.loads(out)["power"] == found["power"]


def test_a_sentence_first_then_the_table_then_what_was_assumed(
    capsys: pytest.CaptureFixture[str],
) -> None:
    code, out, _ = _run(capsys, "--design two-groups --effect 0.5 --loss 0.1")
    assert code == 0
    assert out.splitlines()[0] == (
        "Plan for 128 participants (64 per group), 144 recruited: power 80% to find d = 0.50."
    )
    assert out.index("n per group") < out.index("Taken for granted") < out.index("no guarantee")


def test_a_range_gives_a_row_each(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = _run(capsys, "--design two-groups --effect 0.2:0.8:0.1")
    rows = [line.split() for line in out.splitlines() if line.strip().startswith("0.")]
    assert [row[0] for row in rows] == ["0.20", "0.30", "0.40", "0.50", "0.60", "0.70", "0.80"]
    assert [row[1] for row in rows] == ["394", "176", "100", "64", "45", "34", "26"]
    _, out, _ = _run(capsys, "--design two-groups --effect 0.5 --n 10,20:30 --json")


def test_sizes_may_be_a_list(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = _run(capsys, "--design two-groups --effect 0.5 --n 10,20,40 --json")
    assert json.loads(out)["n_total"] == [20, 40, 80]


def test_no_finite_size_is_an_answer(capsys: pytest.CaptureFixture[str]) -> None:
    code, out, _ = _run(capsys, "--design two-groups --effect 0")
    assert code == 0
    assert out.startswith("No finite sample size finds d = 0.00")
    code, out, _ = _run(capsys, "--design two-groups --effect 0 --json")
    assert json.loads(out)["n_total"] is None


def test_uncertain_effects(capsys: pytest.CaptureFixture[str]) -> None:
    code, out, _ = _run(
        capsys, "--design two-groups --effect 0.5 --effect-sd 0.2 --power 0.8 --assurance 0.8"
    )
    assert code == 0
    assert "with probability 80% the power is 80% or more" in out.splitlines()[0]
    _, out, _ = _run(
        capsys, "--design two-groups --effect 0.1 --effect-sd 0.2 --power 0.8 --assurance 0.8"
    )
    assert "A finite size exists below 69% assurance" in out
    _, out, _ = _run(
        capsys, "--design two-groups --effect 0.3 --effect-sd 0.3 --expected-power 0.9"
    )
    assert "it tends to 84%" in out


def _examples() -> list[str]:
    lines = (solve.__doc__ or "").split("\b", 1)[1].splitlines()
    return [
        f"--design {line.split()[0]} {line[line.index('--') :]}" for line in lines if "--" in line
    ]


@pytest.mark.parametrize("example", _examples())
def test_every_example_of_the_help_runs(example: str, capsys: pytest.CaptureFixture[str]) -> None:
    code, out, err = _run(capsys, example)
    assert (code, err) == (0, "")
    assert out.startswith("Plan for ")


def test_the_help_has_an_example_of_every_design() -> None:
    assert [e.split()[1] for e in _examples()] == list(DESIGNS)


def test_the_help_fits_eighty_columns(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("COLUMNS", "80")
    monkeypatch.setenv("TERMINAL_WIDTH", "80")
    _run(capsys, "--help")
    code, out, _ = _run(capsys, "--help")
    assert code == 0
    assert max(len(line) for line in out.splitlines()) <= 80
    for name in DESIGNS:
        assert f"  {name} " in out


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ("--effect nan", "--effect: nan is not a finite number"),
        ("--effect 1:2", "--effect: '1:2' is no number"),
        ("--effect 0.1:0.2:0", "--effect"),
        ("--effect 0:1:0.00001", "--effect: .* at most 10,?000"),
        ("--effect 0.5 --power 80", "--power: 80 is out of range"),
        ("--effect 0.5 --n 1", "--n: too few"),
        ("--effect 0.5 --groups 3", "--groups: the design two-groups has no such option"),
        ("--effect 0.2,0.5 --effect-sd 0.1", "--effect-sd: takes one effect"),
        ("--effect 0.5 --effect-sd 0.1", "--assurance: needed"),
        ("--effect 0.5 --effect-sd 0 --assurance .8", "--effect-sd: 0 is out of range"),
    ],
)
def test_bad_values_exit_with_3_and_one_message(
    arguments: str, message: str, capsys: pytest.CaptureFixture[str]
) -> None:
    import re

    code, out, err = _run(capsys, f"--design two-groups {arguments}")
    assert code == 3
    assert out == ""
    assert re.search(message, err)
    assert len(err.splitlines()) == 1
