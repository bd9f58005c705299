"""Fifth stage: fields common to all families, and what no printed statistic can be."""

from __future__ import annotations

import re
from typing import Any

from netsize.reported import patterns
from netsize.reported.effect_names import also
from netsize.reported.families import family_fields
from netsize.reported.family_parts import Context
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.records import Origin, Printed
from netsize.reported.sizes import sizes_of
from netsize.reported.summaries import is_negative
from netsize.reported.tags import Settings

__all__ = ["fields_of"]


def fields_of(
    group: Group,
    *,
    tags: Settings,
    defaults: Settings,
    text: str,
    begin: int,
    against_words: bool = False,
) -> dict[str, Any] | None:
    """Fields of the result in `group` except label, sample and place; None where it holds none.

    `tags` are the settings of the line and of this statistic, `defaults` those of the file;
    `text` is the normalised text, whose words from `begin` on may tell the design.
    """
    if group.faults:
        item = group.faults[0]
        place = item.marked or (item.start, item.end)
        raise Fault(item.fault or "", *place, harmless=item.harmless and len(group.items) == 1)
    _refuse_other_purposes(group, text, begin)
    design, design_origin = _design(tags, defaults)
    context = Context(
        group=group,
        sizes=sizes_of(group, tags, defaults),
        design=design,
        design_origin=design_origin,
        preceding=_preceding_design(group, text, begin),
    )
    fields = family_fields(context)
    if fields is None:
        return None
    p = group.p()
    fields["p"] = p.number if p is not None else None
    fields["also"] = also(group, fields)
    fields["tails"] = _tails(group, tags, defaults, text, begin)
    fields["correlation"] = tags.get("correlation", defaults.get("correlation"))
    fields["cut"] = tags.get("cut", defaults.get("cut"))
    fields["left_out"] = tags.get("left_out")
    _set_direction(fields, tags, defaults, against_words)
    _refuse_impossible(fields)
    return fields


def _refuse_other_purposes(group: Group, text: str, begin: int) -> None:
    """What is printed like a result and is none: plans for a sample size, tests of assumptions."""
    effect = group.first("smd", "eta", "r2") if group.primary is None else group.primary
    planned = effect is not None and effect.kind in _EFFECTS and not effect.arguments
    if effect is not None and planned:
        before = text[max(begin, effect.start - 110) : effect.start]
        if patterns.PLANNED_BEFORE.search(before):
            raise Fault("an effect that a study was planned for, no result", harmless=True)
    kind = group.primary.kind if group.primary is not None else "p" if group.p() else ""
    if kind not in ("F", "chi", "rank", "z", "p"):
        return
    before = text[max(begin, group.start - 110) : group.start]
    fit = kind == "chi" and patterns.MODEL_FIT.search(
        text, max(begin, group.start - 60), group.end + 60
    )
    if fit or patterns.ASSUMPTION_BEFORE.search(before):
        what = "the fit of a model" if fit else "an assumption"
        raise Fault(f"a test of {what}, no result of the study", harmless=True)


_EFFECTS = frozenset(("smd", "eta", "r2", "r", "odds"))


def _design(tags: Settings, defaults: Settings) -> tuple[str | None, Origin]:
    if "design" in tags:
        return tags["design"], "tag"
    if "design" in defaults:
        return defaults["design"], "default"
    return None, "assumed"


def _preceding_design(group: Group, text: str, begin: int) -> str | None:
    item = group.primary
    if item is None or item.kind not in ("t", "F") or item.start - begin < 3:
        return None
    before = text[max(begin, item.start - 100) : item.start].replace("\n", " ")
    words = nearer = patterns.DESIGN_WORDS.search(before)
    while nearer:
        words = nearer
        nearer = patterns.DESIGN_WORDS.search(before, nearer.start() + 1)
    if words is None:
        return None
    return "paired" if words["paired"] else "one-sample" if words["one"] else "two-groups"


def _tails(group: Group, tags: Settings, defaults: Settings, text: str, begin: int) -> int:
    if "tails" in tags:
        return int(tags["tails"])
    for item in group.items:
        if "one-tailed" in item.flags:
            return 1
        if "two-tailed" in item.flags:
            return 2
    around = text[max(group.start - 20, begin) : group.end + 40]
    if "critical" in around and patterns.CRITICAL_VALUE.search(around):
        raise Fault("a critical value is no result", harmless=True)
    if "tail" in around or "sided" in around:
        said = _tails_said(group, text, begin)
        if said:
            return 1 if said[1].lower() in ("one", "1") else 2
    return int(defaults.get("tails", 2))


def _tails_said(group: Group, text: str, begin: int) -> re.Match[str] | None:
    """Words within the test or right after it, unless they open the next one; else before it."""
    line_end = text.find("\n", group.end, group.end + 25)
    end = line_end if line_end >= 0 else group.end + 25
    said = patterns.TAILS_WORDS.search(text, group.start, end)
    if said and (said.start() < group.end or not patterns.TEST_FOLLOWS.match(text, said.end())):
        return said
    return patterns.TAILS_WORDS.search(text, max(group.start - 20, begin), group.start)


def _set_direction(
    fields: dict[str, Any],
    tags: Settings,
    defaults: Settings,
    against_words: bool,
) -> None:
    negative = is_negative(
        fields["family"], fields.get("value"), fields.get("groups", ()), fields.get("counts", ())
    )
    origin: Origin = "tag" if "against" in tags else "default"
    said = tags.get("against", defaults.get("against"))
    if said is None and against_words:
        said, origin = True, "printed"
    if said is None:
        fields["direction"], fields["direction_origin"] = 1, "printed" if negative else "assumed"
        return
    fields["direction"] = 1 if bool(said) == negative else -1
    fields["direction_origin"] = origin


def _refuse_impossible(fields: dict[str, Any]) -> None:
    p: Printed | None = fields["p"]
    if p is not None:
        if p.value > 1:
            raise Fault(f"p cannot be above 1; it reads {p.value:g}")
        if p.value < 0:
            raise Fault("p cannot be negative")
        if p.value == 0 and (p.relation == "<" or not p.decimals):
            raise Fault("p cannot be 0; write p < .001")
        if p.relation == ">" and p.value == 1:
            raise Fault("p cannot be above 1")
    n = fields.get("n", ())
    if n and sum(n) < 2:
        raise Fault("a study needs at least 2 participants")
    if fields.get("df") and any(d > 1e7 for d in fields["df"]):
        raise Fault("these degrees of freedom are too large to be meant")
