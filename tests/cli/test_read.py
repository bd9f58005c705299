"""`netsize read` as a user runs it."""

from __future__ import annotations

import csv
import io
import json
import re
import subprocess
import sys

import pytest

import netsize
from netsize.cli.main import main
from netsize.cli.read import read as command
from netsize.cli.source import load, usable
from netsize.errors import ReadingError
from netsize.reported.unread import unread_place

TEXT = (
    "Lab A: t(38) = 2.31, p = .026, d = 0.73\n"
    "Lab B: F(1, 56) = 5.12, p = .28\n"
    "Lab C: t(19) = -2.1, n = 20\n"
    "Lab D: t(0) = 3.2\n"
    "=cmd(): r(48) = .31 [leave out: the pilot]\n"
)


@pytest.fixture
def source(tmp_path):
    path = tmp_path / "literature.txt"
    path.write_text(TEXT, encoding="utf-8")
    return str(path)


def pipe(monkeypatch, text):
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(io.BytesIO(text.encode()), encoding="utf-8"))


def test_rows_disagreements_notes_and_unread_places(source, capsys):
    assert main(["read", source]) == 0
    out = capsys.readouterr().out
    for expected in (
        "two-groups (assumed)",
        "significance disagrees",
        "paired (assumed)",
        "Lab B: p is printed as .28, but F(1, 56) = 5.12 gives p = .027 to .028",
        "Lab C: counts as against the prediction",
        "the pilot",
        "4 results read, from 4 samples; 1 place not understood.",
    ):
        assert expected in out
    last = out.splitlines()[-2:]
    assert "line 4, column 8: Lab D: >>t(0)<< = 3.2" in last[0]
    assert "degrees of freedom must be above 0" in last[1]


def test_json_is_the_reading_with_its_check(source, capsys, tmp_path):
    assert main(["read", source, "--json"]) == 0
    printed = capsys.readouterr().out
    record = json.loads(printed)
    assert set(record) == {"results", "unread"}
    first, second = record["results"][:2]
    assert first["check"] == []
    assert second["check"][0]["changes_significance"] is True
    assert (first["line"], first["span"], first["p"]) == (
        1,
        [7, 39],
        {"value": 0.026, "relation": "=", "decimals": 3},
    )
    assert set(record["unread"][0]) >= {"line", "column", "text", "reason"}
    again = tmp_path / "again.json"
    again.write_text(printed, encoding="utf-8")
    assert main(["read", str(again), "--json"]) == 0
    assert capsys.readouterr().out == printed


def test_csv_has_a_row_a_result_and_no_formula(source, capsys):
    assert main(["read", source, "--csv"]) == 0
    rows = list(csv.DictReader(io.StringIO(capsys.readouterr().out)))
    assert [r["label"] for r in rows] == ["Lab A", "Lab B", "Lab C", "'=cmd()", ""]
    assert rows[2]["direction"] == "against"
    assert rows[-1]["not understood"] == "degrees of freedom must be above 0"


def test_template(capsys):
    assert main(["read", "--template"]) == 0
    assert capsys.readouterr().out.splitlines()[-1].startswith("label,result,t,F,r,z,chi2,df")


@pytest.mark.parametrize(
    ("text", "code", "says"),
    [
        ("t(38) = 2.31", 0, "1 result read"),
        ("t(0) = 2.31", 3, "1 place not understood"),
        ("nothing", 3, ""),
        ("", 3, ""),
    ],
)
@pytest.mark.parametrize("arguments", [["read", "-"], ["read"]])
def test_standard_input(text, code, says, arguments, monkeypatch, capsys):
    pipe(monkeypatch, text)
    assert main(arguments) == code
    out, err = capsys.readouterr()
    assert says in out
    assert "Traceback" not in err


def test_faulty_files_end_in_a_message(tmp_path, capsys):
    assert main(["read", str(tmp_path / "none.txt")]) == 3
    assert "there is no file" in capsys.readouterr().err
    assert main(["read", str(tmp_path)]) == 3
    assert "directory" in capsys.readouterr().err


def test_a_terminal_is_told_how_to_end(monkeypatch, capsys):
    class Terminal(io.StringIO):
        def isatty(self):
            return True

    monkeypatch.setattr("sys.stdin", Terminal("A: t(38) = 2.31\n"))
    assert load(None).results[0].label == "A"
    assert "Ctrl-" in capsys.readouterr().err


def test_unread_places_stop_other_commands_unless_skipped():
    reading = netsize.read(TEXT)
    with pytest.raises(ReadingError) as caught:
        usable(reading, skip_unread=False)
    message = str(caught.value)
    assert "line 4, column 8: Lab D: >>t(0)<< = 3.2" in message
    assert "--skip-unread" in message
    assert caught.value.places == reading.unread
    assert usable(reading, skip_unread=True) is reading
    with pytest.raises(ReadingError):
        usable(netsize.read("t(0) = 1"), skip_unread=True)


def test_every_example_of_the_help_page_is_read():
    blocks = [b for b in (command.__doc__ or "").split("\n\n") if "\b" in b]
    statistics = blocks[0].split("\n")[2:]
    examples = [e for line in statistics for e in re.split(r"\s{4,}", line.strip())]
    assert len(examples) > 20
    for example in examples:
        reading = netsize.read(example.removesuffix(" is Welch's"))
        assert len(reading.results) == 1, example
        assert not reading.unread, example
    tags = re.findall(r"\[[^\]]+\]", blocks[1])
    assert len(tags) > 10
    for tag in tags:
        assert not netsize.read(f"t(38) = 2.31 {tag}").unread, tag


def test_help_loads_no_heavy_library():
    program = (
        "import sys; from netsize.cli.main import main; main(['--help']); "
        "sys.exit(bool({'numpy', 'scipy', 'netsize.reported'} & set(sys.modules)))"
    )
    assert subprocess.run([sys.executable, "-c", program], capture_output=True).returncode == 0


def test_the_faulty_part_is_marked_where_it_stands():
    """Not at the first place of the line with the same characters."""
    (place,) = netsize.read("Here r = .31, n = 50. But r = .31. Elsewhere r(48) = .2.").unread
    assert "n = 50. But >>r = .31<<. Elsewhere" in unread_place(place)


def test_what_is_no_statistic_is_listed_and_stops_nothing(tmp_path, capsys):
    path = tmp_path / "literature.txt"
    path.write_text("A: t(38) = 2.31\nThe best(38) = 2.3 of all, at t = 3 s\n", encoding="utf-8")
    assert main(["read", str(path)]) == 0
    out = capsys.readouterr().out
    assert "1 result read, from 1 sample." in out
    assert "Passed over, being no statistic:" in out
    assert "The >>best(38)<< = 2.3 of all" in out
    assert main(["effects", str(path)]) == 0
    assert "best" in capsys.readouterr().out
