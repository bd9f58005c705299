"""One text on its way through the reader: its forms, its defaults and the labels given so far."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from netsize.reported.characters import Characters
from netsize.reported.grouping import Group
from netsize.reported.labels import Labels
from netsize.reported.places import Places
from netsize.reported.records import Origin, ReportedResult

__all__ = ["Source"]


@dataclass(frozen=True, slots=True)
class Source:
    """`text` is normalised, with comments and soft line breaks blanked; places are unchanged.

    `printed` holds the label under which the numbers of a test were met first.
    """

    original: str
    text: str
    characters: Characters
    places: Places
    defaults: dict[str, Any]
    against_words: bool
    labels: Labels = field(default_factory=Labels)
    printed: dict[tuple[Any, ...], str] = field(default_factory=dict)

    def words(self, start: int, end: int) -> str:
        """The original characters of normalised [start, end), blanks joined."""
        first, last = self.characters.cut(start, end)
        return " ".join(self.original[first:last].split())

    def result(
        self,
        group: Group,
        fields: dict[str, Any],
        *,
        label: str | None,
        sample: str | None,
        sample_origin: Origin,
    ) -> ReportedResult:
        """The finished record: `label` made unique; the sample is the label unless named."""
        span = self.places.span(group.start, group.end)
        unique = self.labels.unique(label)
        if fields.get("decimals") and fields["decimals"] > 1 and fields.get("df"):
            key = (fields["family"], fields["value"], fields["df"], fields["p"], fields["n"])
            first = self.printed.setdefault(key, unique)
            if first is not unique:
                note = f"the same numbers as {first}; if one test is printed twice, leave one out"
                fields["notes"] = (*fields.get("notes", ()), note)
        return ReportedResult(
            label=unique,
            sample=sample or label or unique,
            sample_origin=sample_origin,
            span=span,
            text=self.places.cut(span),
            **fields,
        )
