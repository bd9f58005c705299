"""One line of text for a reading, so that a corpus can be a table."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from netsize.reported.records import Printed, Reading, ReportedResult


def _number(value: float | None) -> str:
    return "-" if value is None else f"{value:.6g}"


def _printed(number: Printed) -> str:
    return f"{number.relation}{_number(number.value)}"


def _result(r: ReportedResult) -> str:
    df = f"({','.join(_number(d) for d in r.df)})" if r.df else ""
    parts = [f"{r.family}{df} {r.relation} {_number(r.value)}"]
    parts += [f"p{_printed(r.p)}"] if r.p else []
    parts += [f"n={'+'.join(map(str, r.n))}/{r.n_origin}"] if r.n else []
    parts += [f"{r.design}/{r.design_origin}"] if r.design else []
    parts += ["one-tailed"] if r.tails == 1 else []
    if r.direction == -1 or r.direction_origin in ("tag", "default"):
        parts.append(f"direction={r.direction}/{r.direction_origin}")
    parts += [f"groups={g.mean:g},{g.sd:g},{g.n}" for g in r.groups]
    parts += [f"counts={c.events}/{c.n}" for c in r.counts]
    if r.interval:
        parts.append(f"[{r.interval.low:.6g}, {r.interval.high:.6g}]@{r.interval.level:g}")
    parts += [f"se={_number(r.standard_error)}"] if r.standard_error is not None else []
    parts += [f"metric={r.metric}"] if r.metric else []
    parts += [f"also {name}{_printed(number)}" for name, number in r.also]
    parts += [f"within-pair={_number(r.correlation)}"] if r.correlation is not None else []
    parts += [f"cut={_number(r.cut)}"] if r.cut is not None else []
    parts += [f"left out: {r.left_out}"] if r.left_out is not None else []
    parts += [f'label "{r.label}"'] if not r.label.startswith("result ") else []
    parts += [f'sample "{r.sample}"'] if r.sample != r.label else []
    return "; ".join(parts)


def _summary(reading: Reading) -> str:
    lines = [_result(r) for r in reading.results]
    lines += [
        f"{'PASSED OVER' if u.harmless else 'UNREAD'} {' '.join(u.text.split())!r}: {u.reason[:60]}"
        for u in reading.unread
    ]
    return " || ".join(lines)


@pytest.fixture(scope="session")
def summary() -> Callable[[Reading], str]:
    """The whole reading on one line: results, then unread places with their reason."""
    return _summary
