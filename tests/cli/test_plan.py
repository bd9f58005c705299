import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import netsize
from netsize.cli.main import main

EXAMPLE = Path(__file__).parents[2] / "examples" / "reading-aloud.txt"


def test_json_is_the_record_of_the_plan(capsys):
    assert main(["plan", str(EXAMPLE), "--json", "--power", "0.9", "--ratio", "2"]) == 0
    printed = json.loads(capsys.readouterr().out)
    made = netsize.plan(EXAMPLE.read_text(encoding="utf-8"), power=0.9, ratio=2)
    assert printed == json.loads(json.dumps(made.to_dict()))


def test_the_answer_comes_first(capsys):
    assert main(["plan", str(EXAMPLE)]) == 0
    out = capsys.readouterr().out
    assert out.startswith("Plan for ")
    made = netsize.plan(EXAMPLE.read_text(encoding="utf-8"))
    assert f"{made.answer.sized.n_total:,}" in out.splitlines()[0]
    assert "Estimates are no guarantee" in out


def test_pasted_lines_come_through_a_pipe():
    run = subprocess.run(
        [sys.executable, "-m", "netsize.cli.main", "plan", "-"],
        input="t(38) = 2.31\nt(50) = 2.9\n",
        capture_output=True,
        text=True,
        check=False,
    )
    assert run.returncode == 0, run.stderr
    assert "2 results" in run.stdout
    assert "\x1b" not in run.stdout


def test_sensitivity_is_added_on_request(capsys):
    assert main(["plan", str(EXAMPLE), "--sensitivity", "--json"]) == 0
    record = json.loads(capsys.readouterr().out)
    assert record["sensitivity"][0]["n_total"] == record["planning"]["n_total"]
    assert main(["plan", str(EXAMPLE), "--sensitivity"]) == 0
    assert "without Lab E 2016" in capsys.readouterr().out


def test_lists_are_joined_by_commas(capsys):
    assert main(["plan", str(EXAMPLE), "--json", "--cut-points", "0.05,0.5"]) == 0
    record = json.loads(capsys.readouterr().out)
    assert record["settings"]["cut_points"] == [0.05, 0.5]
    assert len(record["selection"]["printing"]) == 2


@pytest.mark.parametrize(
    ("arguments", "named"),
    [
        (["--alpha", "2"], "--alpha"),
        (["--alpha", "nan"], "--alpha"),
        (["--power", "one"], "--power"),
        (["--cut-points", "0.05;0.1"], "--cut-points"),
        (["--corrections", "magic"], "magic"),
        (["--design", "nothing"], "--design"),
        (["--within-pair", "3"], "--within-pair"),
    ],
)
def test_bad_values_end_with_exit_code_3_and_one_message(arguments, named, capsys):
    assert main(["plan", str(EXAMPLE), *arguments]) == 3
    captured = capsys.readouterr()
    assert captured.out == ""
    assert named in captured.err
    assert "Traceback" not in captured.err


@pytest.mark.parametrize(
    "content",
    [
        b"",
        b"\x00\x01\x02",
        b"no statistics here",
        b"t(-3) = 2\n",
        b"t(38) = nan\n",
        b"\xff\xfe\x00",
    ],
)
def test_bad_sources_end_with_exit_code_3(content, tmp_path, capsys):
    source = tmp_path / "source.txt"
    source.write_bytes(content)
    assert main(["plan", str(source)]) == 3
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith("netsize: ")


def test_a_missing_file_is_named(capsys):
    assert main(["plan", "no-such-file.txt"]) == 3
    assert "no-such-file.txt" in capsys.readouterr().err


def test_unread_places_stop_the_plan_unless_skipped(tmp_path, capsys):
    source = tmp_path / "source.txt"
    source.write_text("A: t(38) = 2.9\nB: t(0) = 2.2\nC: t(60) = 3.1\n", encoding="utf-8")
    assert main(["plan", str(source)]) == 3
    assert "line 2" in capsys.readouterr().err
    assert main(["plan", str(source), "--skip-unread"]) == 0
    assert "Left out:" in capsys.readouterr().out


def test_unknown_options_are_usage_errors(capsys):
    assert main(["plan", str(EXAMPLE), "--hope"]) == 2
    assert "--hope" in capsys.readouterr().err


def test_a_reader_that_goes_away_causes_no_noise():
    command = f'"{sys.executable}" -m netsize.cli.main plan "{EXAMPLE}" | head -n 1'
    run = subprocess.run(
        ["bash", "-c", command],
        capture_output=True,
        text=True,
        check=True,
        env=os.environ | {"PYTHONUNBUFFERED": "1"},
    )
    assert run.stdout.startswith("Plan for")
    assert run.stderr == ""
