"""Frozen records to JSON and back, guided by their type hints.

Members of a union of records carry the name of their class under "is". Numbers that JSON lacks are
the texts "inf", "-inf" and "nan". Reading checks every field and says which one is wrong.
"""

from __future__ import annotations

import math
import types
import typing
from dataclasses import fields, is_dataclass
from functools import cache
from typing import Any, Literal, TypeVar

from netsize.errors import ReadingError

__all__ = ["decode", "encode"]

_NOT_FINITE = {"inf": math.inf, "-inf": -math.inf, "nan": math.nan}
_TAG = "is"
T = TypeVar("T")


def encode(value: Any) -> Any:
    """Plain JSON types."""
    if is_dataclass(value) and not isinstance(value, type):
        record = {f.name: encode(getattr(value, f.name)) for f in fields(value)}
        return {_TAG: type(value).__name__, **record}
    if isinstance(value, dict):
        return {str(k): encode(v) for k, v in value.items()}
    if isinstance(value, list | tuple):
        return [encode(v) for v in value]
    if isinstance(value, float) and not math.isfinite(value):
        return "nan" if math.isnan(value) else ("inf" if value > 0 else "-inf")
    return value


def decode(kind: type[T], data: Any) -> T:
    """The record of class `kind` that `data` holds; ReadingError naming the field at fault."""
    made: T = _read(kind, data, "the report")
    return made


def _read(kind: Any, data: Any, where: str) -> Any:
    if isinstance(kind, type) and is_dataclass(kind):
        return _record(kind, data, where)
    origin, arguments = typing.get_origin(kind), typing.get_args(kind)
    if origin in (typing.Union, types.UnionType):
        return _union(arguments, data, where)
    if origin is tuple:
        if not isinstance(data, list):
            raise _wrong(where, "a list", data)
        if arguments[-1] is Ellipsis:
            return tuple(_read(arguments[0], v, f"{where}[{i}]") for i, v in enumerate(data))
        raise TypeError(f"{kind} is not read")
    if origin is dict:
        if not isinstance(data, dict):
            raise _wrong(where, "an object", data)
        return {k: _read(arguments[1], v, f"{where}.{k}") for k, v in data.items()}
    if origin is Literal:
        if data not in arguments:
            raise _wrong(where, f"one of {', '.join(map(str, arguments))}", data)
        return data
    return _simple(kind, data, where)


def _simple(kind: Any, data: Any, where: str) -> Any:
    if kind is Any:
        return data
    if kind is float:
        if isinstance(data, str) and data in _NOT_FINITE:
            return _NOT_FINITE[data]
        if isinstance(data, int | float) and not isinstance(data, bool):
            return float(data)
        raise _wrong(where, "a number", data)
    if kind is type(None):
        kind = types.NoneType
    if not isinstance(data, kind) or (isinstance(data, bool) and kind is not bool):
        raise _wrong(
            where, {"str": "a text", "int": "a whole number"}.get(kind.__name__, "it"), data
        )
    return data


def _record(kind: Any, data: Any, where: str) -> Any:
    if not isinstance(data, dict):
        raise _wrong(where, "an object", data)
    hints = _hints(kind)
    extra = set(data) - set(hints) - {_TAG}
    missing = set(hints) - set(data)
    if extra or missing:
        names = ", ".join(sorted(extra or missing))[:200]
        raise ReadingError(f"{where} {'has unknown' if extra else 'lacks the'} fields: {names}")
    return kind(**{n: _read(hint, data[n], f"{where}.{n}") for n, hint in hints.items()})


def _union(arguments: tuple[Any, ...], data: Any, where: str) -> Any:
    records = {a.__name__: a for a in arguments if isinstance(a, type) and is_dataclass(a)}
    if isinstance(data, dict) and records:
        chosen = data.get(_TAG)
        if chosen is None and len(records) == 1:
            chosen = next(iter(records))
        if chosen not in records:
            raise _wrong(where, f"one of {', '.join(records)}", chosen)
        return _record(records[chosen], data, where)
    if data is None and type(None) in arguments:
        return None
    last: ReadingError | None = None
    # whole numbers before floats, and numbers before texts, so that "inf" is a number where it may
    for argument in sorted((a for a in arguments if a not in records.values()), key=_precedence):
        try:
            return _read(argument, data, where)
        except ReadingError as error:
            last = error
    raise last or _wrong(where, "it", data)


def _precedence(kind: Any) -> int:
    return {int: 0, float: 1, str: 3}.get(kind, 2)


@cache
def _hints(kind: Any) -> dict[str, Any]:
    return typing.get_type_hints(kind)


def _wrong(where: str, expected: str, data: Any) -> ReadingError:
    text = repr(data)
    shown = text if len(text) <= 60 else text[:57] + "..."
    return ReadingError(f"{where} should be {expected}, not {shown}")
