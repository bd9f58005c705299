"""Make the files of this folder that netsize itself makes: the figures and the report.

    python examples/regenerate.py            writes them
    python examples/regenerate.py --compare  writes nothing; lists what would change (exit code 1)

The literature, reading-aloud.txt, is invented. Drawings are compared by the words and numbers in
them, since another version of matplotlib may place the same line a little differently.
"""

from __future__ import annotations

import re
import sys
from hashlib import sha256
from pathlib import Path

import netsize
from netsize.presentation.figures import FIGURES, draw
from netsize.presentation.figures.saving import rendered
from netsize.presentation.report.markdown import markdown

HERE = Path(__file__).parent
SOURCE = HERE / "reading-aloud.txt"


def made() -> dict[str, bytes]:
    """Every generated file of the folder by its name."""
    text = SOURCE.read_bytes()
    plan = netsize.plan(text.decode("utf-8"))
    figures = {f"reading-aloud-{name}.svg": rendered(draw(plan, name), "svg") for name in FIGURES}
    document = netsize.report(
        text.decode("utf-8"),
        name=SOURCE.name,
        sha256=sha256(text).hexdigest(),
        command=f"netsize report {SOURCE.name}",
    )
    return figures | {"reading-aloud-report.md": markdown(document).encode("utf-8")}


def essence(name: str, content: bytes) -> object:
    """What must not change unnoticed: the words of a drawing, all of another file."""
    return re.findall(rb"<text[^>]*>([^<]*)<", content) if name.endswith(".svg") else content


def changed() -> list[str]:
    """Names of files that are missing or differ from what netsize makes now."""
    return [
        name
        for name, content in made().items()
        if not (HERE / name).exists()
        or essence(name, (HERE / name).read_bytes()) != essence(name, content)
    ]


if __name__ == "__main__":
    if "--compare" in sys.argv[1:]:
        stale = changed()
        print("\n".join(f"differs: {name}" for name in stale) or "nothing differs")
        sys.exit(1 if stale else 0)
    for name, content in made().items():
        (HERE / name).write_bytes(content)
        print(f"{name}: {len(content):,} bytes")
