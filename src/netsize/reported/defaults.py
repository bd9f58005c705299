"""The block of defaults at the top of a file: settings for every line that says nothing else.

    defaults: [paired] [one-tailed]
    [within-pair r .5]

The word opens the block; lines of nothing but settings go on with it.
"""

from __future__ import annotations

import re
from typing import Any

from netsize.reported.faults import Fault
from netsize.reported.tags import merged, parse_settings

__all__ = ["read_defaults"]

_BLANK = re.compile(r"[ \t]*(?:\n|\Z)")
_OPENS = re.compile(r"[ \t]*(?:defaults?|settings)[ \t]*(?::|(?=\[))", re.IGNORECASE)
_TAG = re.compile(r"[ \t,;]*\[([^\[\]\n]{1,300})\]")


def read_defaults(text: str) -> tuple[dict[str, Any], int, list[Fault]]:
    """Settings of the block, where the text goes on after it, and what is wrong with it."""
    position = _skip_blank(text, 0)
    opening = _OPENS.match(text, position)
    if opening is None:
        return {}, 0, []
    settings: dict[str, Any] = {}
    faults: list[Fault] = []
    position = opening.end()
    while True:
        tag = _TAG.match(text, position)
        if tag is None:
            rest = _BLANK.match(text, position)
            if rest is None:
                end = text.find("\n", position)
                end = len(text) if end < 0 else end
                faults.append(
                    Fault("defaults are settings in square brackets, as in [paired]", position, end)
                )
                return settings, end, faults
            position = _skip_blank(text, rest.end())
            if not _TAG.match(text, position) or not _only_tags(text, position):
                return settings, position, faults
            continue
        try:
            found = parse_settings(tag[1], tag.start(1))
            if "left_out" in found:
                raise Fault("[leave out] belongs on one line, not among the defaults", *tag.span())
            settings = merged(settings, found)
        except Fault as fault:
            faults.append(fault)
        position = tag.end()


def _skip_blank(text: str, position: int) -> int:
    while position < len(text):
        blank = _BLANK.match(text, position)
        if blank is None or blank.end() == position:
            break
        position = blank.end()
    return position


def _only_tags(text: str, position: int) -> bool:
    while tag := _TAG.match(text, position):
        position = tag.end()
    return _BLANK.match(text, position) is not None
