"""Reading back what `netsize read --json` printed: the same results, checked field by field."""

from __future__ import annotations

import json
import math
from dataclasses import fields
from typing import Any, get_args

from netsize.errors import ReadingError
from netsize.reported.records import (
    Counts,
    Family,
    Group,
    Interval,
    Origin,
    Printed,
    Reading,
    Relation,
    ReportedResult,
    Span,
    StudyDesign,
    Unread,
)

__all__ = ["looks_like_json", "read_json"]

_FIELDS = {f.name for f in fields(ReportedResult)}
_ADDED = {"line", "column", "check"}  # what the printed form adds; recomputed, not read
_CHOICES: dict[str, tuple[Any, ...]] = {
    "family": get_args(Family),
    "relation": get_args(Relation),
    "design": (None, *get_args(StudyDesign)),
    "design_origin": get_args(Origin),
    "n_origin": (None, *get_args(Origin)),
    "direction_origin": get_args(Origin),
    "sample_origin": get_args(Origin),
    "direction": (1, -1),
    "tails": (1, 2),
}
_TEXTS = ("label", "sample", "text")
_NUMBERS = ("value", "correlation", "cut", "standard_error")


def looks_like_json(text: str) -> bool:
    """Whether the text starts as JSON does."""
    return text.lstrip("\ufeff \t\r\n")[:1] in ("{", "[") and '"' in text[:2000]


def read_json(text: str) -> Reading:
    """The reading that `text` holds.

    Raises ReadingError naming the place where the JSON or one of its fields is not as printed.
    """
    try:
        data = json.loads(text.lstrip("\ufeff"))
    except json.JSONDecodeError as error:
        raise ReadingError(
            f"line {error.lineno}, column {error.colno}: this starts like JSON and is not "
            f"({error.msg}); expected what `netsize read --json` prints"
        ) from None
    except RecursionError:
        raise ReadingError("this JSON is nested too deeply to be a reading") from None
    if not isinstance(data, dict) or not isinstance(data.get("results"), list):
        raise ReadingError(
            'expected an object with a list "results", as `netsize read --json` prints it'
        )
    results = tuple(_result(entry, i) for i, entry in enumerate(data["results"]))
    unread = tuple(_unread(entry, i) for i, entry in enumerate(data.get("unread") or ()))
    if not results and not unread:
        raise ReadingError('the list "results" is empty')
    return Reading(results, unread)


def _result(entry: Any, index: int) -> ReportedResult:
    where = f"results[{index}]"
    if not isinstance(entry, dict):
        raise ReadingError(f"{where} is not an object")
    unknown = sorted(set(entry) - _FIELDS - _ADDED)
    if unknown:
        raise ReadingError(f"{where} has unknown fields: {', '.join(unknown)[:200]}")
    for name in ("label", "family"):
        if name not in entry:
            raise ReadingError(f'{where} lacks "{name}"')
    try:
        values = {name: _value(name, entry) for name in entry if name in _FIELDS}
        _check_sense(values)
        return ReportedResult(**values)
    except (TypeError, ValueError, KeyError, IndexError, OverflowError) as error:
        raise ReadingError(f"{where} is not as `netsize read --json` prints it: {error}") from None


def _value(name: str, entry: dict[str, Any]) -> Any:
    raw = entry[name]
    if name in _CHOICES:
        if isinstance(raw, bool) or raw not in _CHOICES[name]:
            raise ValueError(f'"{name}" is {raw!r}')
        return raw
    if name in _TEXTS:
        return _kind(raw, str, name)
    if name in _NUMBERS:
        return None if raw is None else _finite(raw, name)
    if name in _STRUCTURED:
        return _STRUCTURED[name](raw, entry)
    return None if raw is None else _kind(raw, str, name)  # metric, left_out


def _span(raw: Any, entry: dict[str, Any]) -> Span:
    start, end = (_whole(r, "span") for r in raw)
    return Span(
        _whole(entry.get("line", 1), "line"), _whole(entry.get("column", 1), "column"), start, end
    )


_STRUCTURED: dict[str, Any] = {
    "decimals": lambda raw, _: None if raw is None else _whole(raw, "decimals"),
    "df": lambda raw, _: tuple(_finite(r, "df") for r in raw),
    "n": lambda raw, _: tuple(_whole(r, "n") for r in raw),
    "notes": lambda raw, _: tuple(_kind(r, str, "notes") for r in raw),
    "p": lambda raw, _: None if raw is None else _printed(raw),
    "groups": lambda raw, _: tuple(
        Group(_finite(r["mean"], "mean"), _finite(r["sd"], "sd"), _whole(r["n"], "n")) for r in raw
    ),
    "counts": lambda raw, _: tuple(
        Counts(_whole(r["events"], "events"), _whole(r["n"], "n")) for r in raw
    ),
    "interval": lambda raw, _: (
        None
        if raw is None
        else Interval(*(_finite(raw[k], "interval") for k in ("low", "high", "level")))
    ),
    "also": lambda raw, _: tuple((_kind(n, str, "also"), _printed(p)) for n, p in raw),
    "span": _span,
}


def _printed(raw: Any) -> Printed:
    if raw["relation"] not in get_args(Relation):
        raise ValueError(f"relation {raw['relation']!r}")
    decimals = raw.get("decimals")
    return Printed(
        _finite(raw["value"], "value"),
        raw["relation"],
        None if decimals is None else _whole(decimals, "decimals"),
    )


def _check_sense(values: dict[str, Any]) -> None:
    """What no printed result can be, whoever wrote the file."""
    p = values.get("p")
    if p is not None and not 0 <= p.value <= 1:
        raise ValueError(f"p = {p.value:g}")
    if any(d <= 0 for d in values.get("df", ())):
        raise ValueError("df must be above 0")
    if any(n < 1 for n in values.get("n", ())):
        raise ValueError("n must be at least 1")
    value = values.get("value")
    family = values["family"]
    if value is not None and family in ("f", "chi2") and value < 0:
        raise ValueError(f"{family} = {value:g}")
    if value is not None and family == "r" and abs(value) >= 1:
        raise ValueError(f"r = {value:g}")


def _unread(entry: Any, index: int) -> Unread:
    try:
        return Unread(
            _whole(entry["line"], "line"),
            _whole(entry["column"], "column"),
            _kind(entry["text"], str, "text"),
            _kind(entry["reason"], str, "reason"),
            _kind(entry.get("context", ""), str, "context"),
            _kind(entry.get("harmless", False), bool, "harmless"),
        )
    except (TypeError, KeyError, ValueError, AttributeError) as error:
        raise ReadingError(
            f"unread[{index}] is not as `netsize read --json` prints it: {error}"
        ) from None


def _kind(raw: Any, kind: type, name: str) -> Any:
    if not isinstance(raw, kind):
        raise ValueError(f'"{name}" is {raw!r:.80}')
    return raw


def _finite(raw: Any, name: str) -> float:
    if isinstance(raw, bool) or not isinstance(raw, int | float) or not math.isfinite(raw):
        raise ValueError(f'"{name}" is {raw!r:.80}, not a number')
    return float(raw)


def _whole(raw: Any, name: str) -> int:
    if isinstance(raw, bool) or not isinstance(raw, int) or raw < 0:
        raise ValueError(f'"{name}" is {raw!r:.80}, not a whole number')
    return raw
