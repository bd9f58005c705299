"""The README shows what the program prints.

Every block that starts with `$ netsize ...` is run and compared. `python tests/test_readme.py`
writes the current output into the README.
"""

import io
import re
import shlex
import sys
from contextlib import redirect_stdout
from pathlib import Path

import pytest

from netsize.cli.main import main
from netsize.rehearsal.summary import summary

ROOT = Path(__file__).parents[1]
README = ROOT / "README.md"
BLOCK = re.compile(r"```console\n\$ (netsize [^\n]*)\n(.*?)```", re.DOTALL)


def _output(command: str) -> str:
    """What a command prints, run from the repository's root, whole or its head or tail."""
    command, _, part = command.partition(" | ")
    out = io.StringIO()
    with redirect_stdout(out):
        assert main(shlex.split(command)[1:]) == 0
    lines = out.getvalue().splitlines()
    if part.startswith("head -n "):
        lines = lines[: int(part.removeprefix("head -n "))]
    elif part.startswith("tail -n "):
        lines = lines[-int(part.removeprefix("tail -n ")) :]
    return "\n".join(lines) + "\n"


def _blocks() -> list[tuple[str, str]]:
    return BLOCK.findall(README.read_text(encoding="utf-8"))


@pytest.mark.parametrize(("command", "shown"), _blocks(), ids=[c for c, _ in _blocks()])
def test_shown_output_is_what_the_program_prints(command, shown, monkeypatch):
    monkeypatch.chdir(ROOT)
    assert _output(command) == shown


def test_the_readme_shows_the_main_job():
    assert any(command.startswith("netsize plan") for command, _ in _blocks())


def test_the_check_script_runs_the_test_command_of_the_readme():
    text = README.read_text(encoding="utf-8")
    commands = [line for line in text.splitlines() if line.startswith("python3 -m venv")]
    assert len(commands) == 2
    assert commands[1].endswith("python -m pytest")


def _calibration() -> str:
    table = (ROOT / "data" / "calibration.csv").read_text(encoding="utf-8")
    return f"```text\n{summary(table)}```"


def test_the_calibration_shown_is_that_of_the_committed_table():
    assert _calibration() in README.read_text(encoding="utf-8")


def _rewrite() -> None:
    text = README.read_text(encoding="utf-8")
    text = re.sub(r"```text\nworlds\b.*?```", lambda _: _calibration(), text, flags=re.DOTALL)
    made = BLOCK.sub(lambda m: f"```console\n$ {m[1]}\n{_output(m[1])}```", text)
    README.write_text(made, encoding="utf-8")


if __name__ == "__main__":
    _rewrite()
    sys.exit(0)
