"""The calibration table in a few lines.

`python -m netsize.rehearsal.summary FILE` prints it for a table that
`netsize.rehearsal.calibration` wrote.
"""

from __future__ import annotations

import csv
import sys
from collections.abc import Iterable
from pathlib import Path

__all__ = ["summary"]

_SHARES = ("new_cautious", "mean_cautious", "profile_cautious", "pooled_cautious")
_LINE = "{:<34}{:>5}   {}"


def summary(table: str) -> str:
    """Mean and lowest share of cautious planning values, by world; `table` is the CSV text."""
    lines = (line for line in table.splitlines() if not line.startswith("#"))
    rows = list(csv.DictReader(lines))
    plain = [r for r in rows if r["habit"] == "plain"]
    head = "new study     mean          profile       uncorrected   finite n"
    out = [_LINE.format("worlds", "rows", head)]
    for spread in ("0", "0.2", "0.4"):
        for low, label in ((True, "ω = .05"), (False, "ω = .2 to 1")):
            chosen = [
                r for r in plain if r["spread"] == spread and (float(r["printing"]) < 0.1) == low
            ]
            out.append(_row(f"between-study SD {spread}, {label}", chosen))
    out += [
        _row(f"k = {k}, all of the above", [r for r in plain if r["k"] == k])
        for k in ("1", "3", "8", "20")
    ]
    out += [
        _row(f"assumption broken: {habit}", [r for r in rows if r["habit"] == habit])
        for habit in ("lenient", "stopping", "dropping")
    ]
    return "\n".join(out) + "\n"


def _row(label: str, rows: Iterable[dict[str, str]]) -> str:
    rows = list(rows)
    cells = []
    for name in _SHARES:
        values = [float(r[name]) for r in rows]
        cells.append(f"{sum(values) / len(values):.2f} ({min(values):.2f})".ljust(14))
    finite = sum(float(r["finite"]) for r in rows) / len(rows)
    return _LINE.format(label, len(rows), "".join(cells) + f"{finite:.2f}")


if __name__ == "__main__":
    print(summary(Path(sys.argv[1]).read_text(encoding="utf-8")), end="")
