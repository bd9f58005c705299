"""Numbers as papers print them: lost leading zeros, decimal commas, thousands, powers of ten."""

from __future__ import annotations

import re

from netsize.reported.faults import Fault

__all__ = ["NUMBER", "decimal", "whole"]

# One number. Every repetition is bounded: a longer run of digits is a fault, not a number.
NUMBER = (
    r"[-+]?[ ]?(?:[0-9]{1,25}(?:[.,][0-9]{1,25}){0,3}|[.,][0-9]{1,25})"
    r"(?:[eE][-+]?[0-9]{1,4}(?![0-9A-Za-z])|[ ]?[x*][ ]?10(?:\^[-+]?|-)[0-9]{1,4})?"
)
_PLAIN = re.compile(r"-?[0-9]{0,12}\.?[0-9]{1,12}\Z")
_PARTS = re.compile(
    r"(?P<sign>[-+]?)(?P<mantissa>[.,]?[0-9][0-9.,]*)(?:[eE](?P<e>[-+]?[0-9]+)|[x*]10\^?(?P<ten>[-+]?[0-9]+))?\Z"
)
_ENGLISH = re.compile(r"[1-9][0-9]{0,2}(?:,[0-9]{3}){1,8}(?:\.[0-9]+)?\Z")
_CONTINENTAL = re.compile(r"[1-9][0-9]{0,2}(?:\.[0-9]{3}){1,8},[0-9]+\Z")
_COULD_BE_EITHER = re.compile(r"[1-9][0-9]{0,2},[0-9]{3}\Z")
_DOT = re.compile(r"[0-9]?\.[0-9]")
_COMMA = re.compile(r"[0-9],[0-9]{1,2}(?![0-9])|[0-9],[0-9]{4}")
_LARGEST = 1e7


def decimal(token: str, context: str = "") -> tuple[float, int]:
    """Value and printed decimals of one number matched by `NUMBER`.

    `context` is the line it stands on: where "1,234" could be 1.234 or 1234, other numbers of the
    line decide, and where they do not, it is a fault.
    """
    if _PLAIN.match(token):
        return float(token), len(token) - token.index(".") - 1 if "." in token else 0
    parts = _PARTS.match(token.replace(" ", ""))
    if parts is None:
        raise Fault(f'"{token.strip()}" is not a number')
    mantissa = _with_decimal_point(parts["mantissa"], context)
    exponent = int(parts["e"] or parts["ten"] or 0)
    value = float(f"{parts['sign']}{mantissa}e{exponent}")
    if abs(value) > _LARGEST:
        raise Fault(f"{token.strip()} is too large to be a test statistic or an effect")
    places = len(mantissa) - mantissa.index(".") - 1 if "." in mantissa else 0
    return value, max(places - exponent, 0)


def whole(token: str) -> int:
    """A number of participants; commas part thousands, since people come whole."""
    digits = token.replace(" ", "")
    if _ENGLISH.match(digits) and "." not in digits:
        digits = digits.replace(",", "")
    if not digits.isdecimal():
        raise Fault(f"a number of participants must be a whole number, not {token.strip()}")
    value = int(digits[:20])
    if value == 0:
        raise Fault("a number of participants cannot be 0")
    if value > _LARGEST:
        raise Fault(f"{digits[:30]} is too large for a number of participants")
    return value


def _with_decimal_point(mantissa: str, context: str) -> str:
    if "," not in mantissa:
        if mantissa.count(".") > 1:
            raise Fault(f'"{mantissa}" is not a number: it has more than one decimal point')
        return mantissa
    if _COULD_BE_EITHER.match(mantissa):
        around = context.replace(mantissa, " ")
        dots, commas = bool(_DOT.search(around)), bool(_COMMA.search(around))
        if dots == commas:
            point, joined = mantissa.replace(",", "."), mantissa.replace(",", "")
            raise Fault(f"{mantissa} could be {point} or {joined}; write the one you mean")
        return mantissa.replace(",", "" if dots else ".")
    if _ENGLISH.match(mantissa):
        return mantissa.replace(",", "")
    if _CONTINENTAL.match(mantissa):
        return mantissa.replace(".", "").replace(",", ".")
    if mantissa.count(",") == 1 and "." not in mantissa:
        return mantissa.replace(",", ".")
    raise Fault(f'"{mantissa}" is not one number')
