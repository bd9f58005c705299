"""Recompute a report from the results and settings that it holds, and say what differs."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator
from dataclasses import fields
from typing import Any

from netsize.errors import ReadingError
from netsize.planning.plan import plan
from netsize.planning.settings import PlanSettings
from netsize.presentation.report.codec import encode
from netsize.presentation.report.compose import compose, digest
from netsize.presentation.report.content import Document
from netsize.reported.json_source import read_json

__all__ = ["differences", "recomputed"]

# Sums in another order, as another processor may take them, move the last digits.
_RELATIVE, _ABSOLUTE = 1e-6, 1e-9


def recomputed(document: Document) -> Document:
    """The same report made anew from the document's results and settings alone."""
    held = {"results": list(document.input.results), "unread": list(document.input.unread)}
    reading = read_json(json.dumps(held))
    known = {f.name for f in fields(PlanSettings)}
    unknown = sorted(set(document.settings) - known)
    if unknown:
        raise ReadingError(f"the report has settings that this version lacks: {', '.join(unknown)}")
    settings = {
        k: tuple(v) if isinstance(v, list) else v
        for k, v in document.settings.items()
        if k != "design_options"
    }
    options = document.settings.get("design_options") or {}
    try:
        made = plan(reading, skip_unread=document.input.skip_unread, **(settings | options))
    except TypeError as error:
        raise ReadingError(f"the report's settings cannot be used: {error}") from None
    return compose(
        made,
        reading,
        name=document.input.name,
        sha256=document.input.sha256,
        skip_unread=document.input.skip_unread,
        command=document.command,
        version=document.version,
    )


def differences(document: Document) -> list[str]:
    """What differs between a document and its recomputation, a line each; [] where nothing does."""
    found = []
    if digest(list(document.input.results)) != document.input.results_sha256:
        found.append("the results are not those that the digest was taken of")
    return found + list(_compare(encode(document), encode(recomputed(document)), ""))


def _compare(held: Any, made: Any, where: str) -> Iterator[str]:
    if isinstance(held, dict) and isinstance(made, dict):
        for name in dict.fromkeys((*made, *held)):
            inside = f"{where}.{name}" if where else name
            if name not in held or name not in made:
                which = "missing" if name not in held else "not made by this version"
                yield f"{inside}: {which}"
            else:
                yield from _compare(held[name], made[name], inside)
    elif isinstance(held, list) and isinstance(made, list):
        if len(held) != len(made):
            yield f"{where}: {len(held)} entries, recomputed {len(made)}"
        for index, (a, b) in enumerate(zip(held, made, strict=False)):
            yield from _compare(a, b, f"{where}[{_name(b, index)}]")
    elif not _equal(held, made):
        yield f"{where}: {_short(held)}, recomputed {_short(made)}"


def _name(entry: Any, index: int) -> str:
    """What an entry is called, where it says so."""
    if isinstance(entry, dict):
        for field in ("key", "label", "title", "name"):
            if isinstance(entry.get(field), str) and entry[field]:
                return str(entry[field])
    if isinstance(entry, list) and entry and isinstance(entry[0], str):
        return entry[0]
    return str(index)


def _equal(a: Any, b: Any) -> bool:
    numbers = all(isinstance(x, int | float) and not isinstance(x, bool) for x in (a, b))
    if numbers:
        return math.isclose(a, b, rel_tol=_RELATIVE, abs_tol=_ABSOLUTE)
    return type(a) is type(b) and a == b


def _short(value: Any) -> str:
    text = repr(value)
    return text if len(text) <= 100 else text[:97] + "..."
