"""`netsize report`: forms by suffix, rebuilt and checked from JSON, refusals before computing."""

import hashlib
import json
from pathlib import Path

import pytest

from netsize.cli.main import main

LITERATURE = "Study 1: t(38) = 2.31, p = .026\nStudy 2: t(60) = 2.9\nStudy 3: t(90) = 2.4\n"


@pytest.fixture
def source(tmp_path):
    path = tmp_path / "papers.txt"
    path.write_text(LITERATURE, encoding="utf-8")
    return path


@pytest.fixture(scope="session")
def made(tmp_path_factory):
    """A report as JSON, made once."""
    folder = tmp_path_factory.mktemp("report")
    (folder / "papers.txt").write_text(LITERATURE, encoding="utf-8")
    path = folder / "report.json"
    arguments = ["--power", "0.9", "--cut-points", "0.05,0.1", "--within-pair", "0.6"]
    assert main(["report", str(folder / "papers.txt"), "-o", str(path), *arguments]) == 0
    return path


def test_json_holds_input_choices_and_command(made):
    record = json.loads(made.read_bytes())
    assert record["input"]["name"] == "papers.txt"
    assert record["input"]["sha256"] == hashlib.sha256(LITERATURE.encode()).hexdigest()
    assert record["settings"]["power"] == 0.9
    assert record["command"] == (
        "netsize report papers.txt --power 0.9 --within-pair 0.6 --cut-points 0.05,0.1"
    )
    assert str(made.parent) not in made.read_text(encoding="utf-8")


def test_rebuilds_every_form(made, tmp_path, capsys):
    assert main(["report", "--from", str(made), "-o", str(tmp_path / "page.html")]) == 0
    assert (tmp_path / "page.html").read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    assert main(["report", "--from", str(made), "-o", str(tmp_path / "again.json")]) == 0
    assert (tmp_path / "again.json").read_bytes() == made.read_bytes()
    assert main(["report", "--from", str(made), "-o", str(tmp_path / "page.md")]) == 0
    assert main(["report", "--from", str(made)]) == 0
    assert capsys.readouterr().out == (tmp_path / "page.md").read_text(encoding="utf-8")


def test_writes_figures(made, tmp_path, capsys):
    assert main(["report", "--from", str(made), "--figures", str(tmp_path / "figures")]) == 0
    names = {p.name for p in (tmp_path / "figures").iterdir()}
    assert {"evidence.svg", "funnel.png", "power.pdf"} <= names
    assert len(names) == 18
    assert capsys.readouterr().out == ""


def test_plan_writes_figures(source, tmp_path):
    assert main(["plan", str(source), "--figures", str(tmp_path / "new" / "figures")]) == 0
    folder = tmp_path / "new" / "figures"
    assert (folder / "sizes.png").read_bytes().startswith(b"\x89PNG")
    assert (folder / "sizes.pdf").read_bytes().startswith(b"%PDF")


def test_check_agrees_with_itself(made, capsys):
    assert main(["report", "--check", str(made)]) == 0
    assert capsys.readouterr().out.startswith("Nothing differs")


def test_check_lists_what_differs(made, tmp_path, capsys):
    record = json.loads(made.read_bytes())
    record["numbers"]["plan"]["planning"]["n_total"] = 20
    (tmp_path / "changed.json").write_text(json.dumps(record), encoding="utf-8")
    assert main(["report", "--check", str(tmp_path / "changed.json")]) == 1
    out = capsys.readouterr().out
    assert out.startswith("1 difference")
    assert "numbers.plan.planning.n_total: 20, recomputed" in out


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["-o", "page.docx"], "ends in none of .html"),
        (["-o", "nowhere/page.html"], "there is no folder 'nowhere'"),
        (["-o", "folder.html"], "is a folder"),
        (["--from", "papers.txt"], "leave the source out"),
        (["--power", "2"], "--power"),
    ],
)
def test_refuses_before_computing(source, monkeypatch, capsys, arguments, message):
    monkeypatch.chdir(source.parent)
    Path("folder.html").mkdir()
    before = sorted(p.name for p in source.parent.iterdir())
    assert main(["report", str(source), *arguments]) == 3
    said = capsys.readouterr()
    assert message in said.err
    assert said.out == ""
    assert sorted(p.name for p in source.parent.iterdir()) == before


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["--from", "papers.txt"], "not JSON"),
        (["--check", "missing.json"], "cannot be read"),
        (["--from", "papers.txt", "--power", "0.9"], "leave --power out"),
        (["--check", "papers.txt", "--from", "papers.txt"], "choose one of them"),
    ],
)
def test_refuses_what_is_no_report(source, monkeypatch, capsys, arguments, message):
    monkeypatch.chdir(source.parent)
    assert main(["report", *arguments]) == 3
    assert message in capsys.readouterr().err
