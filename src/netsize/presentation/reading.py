"""What the reader understood, a row a result, with disagreements and unread places below."""

from __future__ import annotations

import csv
import io
import shutil
import sys
from collections.abc import Sequence

from netsize.presentation.csv_cells import harmless
from netsize.presentation.format import MISSING
from netsize.presentation.terminal import Column, show_list, show_table, show_text
from netsize.reported.check import Finding
from netsize.reported.records import Printed, Reading, ReportedResult
from netsize.reported.summaries import is_negative
from netsize.reported.unread import unread_place

__all__ = ["show_reading", "statistic", "write_reading_csv"]

Findings = Sequence[tuple[Finding, ...]]

_SYMBOLS = {"f": "F", "chi2": "χ²", "odds-ratio": "OR", "coefficient": "b", "smd": "d"}
_COLUMNS: tuple[Column, ...] = (
    ("label", "left"),
    ("statistic", "left"),
    ("p", "left"),
    ("n", "left"),
    ("design", "left"),
    ("effect on", "left"),
    ("check", "left"),
)
_NARROW = 100  # columns of text below which seven table columns cannot be read


def show_reading(reading: Reading, findings: Findings) -> None:
    """Rows as understood, disagreements in words, notes, what is left out; unread places last."""
    results = reading.results
    if results:
        rows = [
            (
                r.label,
                statistic(r),
                _p(r),
                _sizes(r),
                _design(r),
                _scale(r),
                _verdict(r, found),
            )
            for r, found in zip(results, findings, strict=True)
        ]
        if sys.stdout.isatty() and shutil.get_terminal_size().columns < _NARROW:
            show_list("As understood:", [_in_words(row) for row in rows])
        else:
            show_table(_COLUMNS, rows)
            show_text("")
    show_list("Printed numbers that disagree:", _disagreements(results, findings))
    show_list("Assumed while reading:", _notes(results))
    show_list(
        "Left out as asked:",
        [f"{r.label}: {r.left_out}" for r in results if r.left_out is not None],
    )
    show_text(_summary(reading))
    for title, passed in (("Passed over, being no statistic:", True), ("Not understood:", False)):
        show_list(title, [unread_place(u) for u in reading.unread if u.harmless is passed])


def write_reading_csv(reading: Reading, findings: Findings) -> None:
    """The rows as CSV on standard output; unread places follow as rows with a reason."""
    target = io.StringIO()
    writer = csv.writer(target, lineterminator="\n")
    writer.writerow(
        ("line", "label", "statistic", "p", "n", "design", "design from", "direction", "tails",
         "sample", "effect on", "check", "notes", "left out", "not understood")
    )  # fmt: skip
    for r, found in zip(reading.results, findings, strict=True):
        direction = "as predicted" if _positive(r) else "against"
        cells = (
            str(r.span.line), r.label, statistic(r), _p(r), _sizes(r), r.design or "",
            r.design_origin if r.design else "", direction, str(r.tails), r.sample, _scale(r),
            "; ".join(f.message for f in found), "; ".join(r.notes), r.left_out or "", "",
        )  # fmt: skip
        writer.writerow([_harmless(c) for c in cells])
    for u in reading.unread:
        row = [str(u.line), "", u.text, *[""] * 11, u.reason]
        writer.writerow([_harmless(c) for c in row])
    sys.stdout.write(target.getvalue())


def statistic(result: ReportedResult) -> str:
    """The statistic in one spelling, whatever the paper's."""
    if result.family == "means":
        return " vs ".join(f"M = {g.mean:g}, SD = {g.sd:g}, n = {g.n}" for g in result.groups)
    if result.family == "counts":
        return " vs ".join(f"{c.events}/{c.n}" for c in result.counts)
    symbol = _SYMBOLS.get(result.family, result.family)
    if result.family in ("smd", "eta2", "estimate"):
        symbol = result.metric or symbol
    df = f"({', '.join(f'{d:g}' for d in result.df)})" if result.df else ""
    text = f"{symbol}{df}"
    if result.value is not None:
        text += f" {result.relation} {_number(result.value, result.decimals)}"
    if result.standard_error is not None:
        text += f", SE = {result.standard_error:.3g}"
    if result.interval is not None:
        low, high = result.interval.low, result.interval.high
        text += f", {result.interval.level:.0%} interval {low:.3g} to {high:.3g}"
    return text


def _in_words(row: Sequence[str]) -> str:
    """A row for narrow terminals: the label, then what its columns say."""
    label, printed, p, n, design, scale, check = row
    parts = [printed]
    parts += [f"p {p}" if p[0] in "<>" else f"p = {p}"] if p != MISSING else []
    parts += [f"n = {n}"] if n != MISSING else []
    parts += [design] if design != MISSING else []
    parts += [f"effect: {scale}"] if scale != MISSING else []
    parts += [f"check: {check}"] if check != MISSING else []
    return f"{label}: {'; '.join(parts)}"


def _number(value: float | None, decimals: int | None) -> str:
    if value is None:
        return MISSING
    return f"{value:.4g}" if decimals is None else f"{value:.{min(decimals, 12)}f}"


def _p(result: ReportedResult) -> str:
    if result.p is None:
        return MISSING
    tails = " (one-tailed)" if result.tails == 1 else ""
    return f"{_printed(result.p)}{tails}"


def _printed(number: Printed) -> str:
    text = _number(number.value, number.decimals).replace("0.", ".", 1)
    return text if number.relation == "=" else f"{number.relation} {text}"


def _sizes(result: ReportedResult) -> str:
    return " + ".join(str(n) for n in result.n) if result.n else MISSING


def _design(result: ReportedResult) -> str:
    if result.design is None:
        two_groups = result.family in ("t", "smd") or (
            result.df[:1] == (1.0,) and result.family == "f"
        )
        return "two-groups (assumed)" if two_groups else MISSING
    return f"{result.design} ({result.design_origin})"


def _scale(result: ReportedResult) -> str:
    """The scale on which this result's effect is most directly expressed."""
    family = result.family
    if family == "estimate":
        return result.metric or MISSING
    if family in ("counts", "odds-ratio"):
        return "log ratio"
    if family in ("r", "coefficient") or result.design == "correlation":
        return "correlation"
    if family in ("chi2", "eta2") or (family == "f" and result.df[:1] != (1.0,)):
        return "Cohen's f" if family != "chi2" else "w"
    if family in ("z", "p") and result.design is None:
        return MISSING
    if result.design in ("paired", "one-sample"):
        return "mean of differences"
    return "mean difference"


def _verdict(result: ReportedResult, findings: tuple[Finding, ...]) -> str:
    if result.family == "p" or (result.value is None and not result.groups):
        return MISSING
    if not findings:
        return "agrees" if result.p is not None or result.also else MISSING
    if any(f.changes_significance for f in findings):
        return "significance disagrees"
    return f"{' and '.join(dict.fromkeys(f.kind for f in findings))} disagrees"


def _disagreements(results: Sequence[ReportedResult], findings: Findings) -> list[str]:
    return [
        f"{r.label}: {f.message}" for r, found in zip(results, findings, strict=True) for f in found
    ]


def _notes(results: Sequence[ReportedResult]) -> list[str]:
    by_note: dict[str, list[str]] = {}
    for r in results:
        for note in r.notes:
            by_note.setdefault(note, []).append(r.label)
    negative = [r.label for r in results if not _positive(r)]
    if negative:
        by_note["counts as against the prediction; [as predicted] or [against] says otherwise"] = (
            negative
        )
    return [f"{_names(labels)}: {note}" for note, labels in by_note.items()]


def _names(labels: list[str]) -> str:
    shown = ", ".join(labels[:6])
    return shown if len(labels) <= 6 else f"{shown} and {len(labels) - 6} more"


def _positive(result: ReportedResult) -> bool:
    negative = is_negative(result.family, result.value, result.groups, result.counts)
    return negative == (result.direction == -1)


def _summary(reading: Reading) -> str:
    results = len(reading.results)
    samples = len({r.sample for r in reading.results})
    unread = sum(not place.harmless for place in reading.unread)
    text = (
        f"{results} result{'' if results == 1 else 's'} read, "
        f"from {samples} sample{'' if samples == 1 else 's'}"
    )
    places = f"{unread} place{'' if unread == 1 else 's'} not understood"
    return f"{text}; {places}." if unread else f"{text}."


def _harmless(cell: str) -> str:
    """Nothing for what is missing; spreadsheets must not run a label as a formula."""
    return "" if cell == MISSING else harmless(cell)
