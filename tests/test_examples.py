"""The generated files under examples/ are those that the program makes now."""

import subprocess
import sys
from pathlib import Path

SCRIPT = Path(__file__).parents[1] / "examples" / "regenerate.py"


def test_examples_are_up_to_date():
    """After a wanted change: python examples/regenerate.py, and look at what it made."""
    run = subprocess.run(
        [sys.executable, str(SCRIPT), "--compare"],
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=300,
        check=False,
    )
    assert run.returncode == 0, run.stdout + run.stderr
    assert run.stdout.strip() == "nothing differs"
