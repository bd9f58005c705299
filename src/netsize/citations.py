"""The published sources of the methods, each under the short key that output and pages use."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Source", "sources"]


@dataclass(frozen=True, slots=True)
class Source:
    """One publication: a short key "Author year", the citation, and what netsize takes from it."""

    key: str
    citation: str
    used_for: str

    def to_dict(self) -> dict[str, str]:
        """The three fields as plain text."""
        return {"key": self.key, "citation": self.citation, "used_for": self.used_for}


def sources() -> tuple[Source, ...]:
    """Every source, in alphabetical order."""
    return tuple(sorted(_SOURCES, key=lambda s: s.key))


_SOURCES = (
    Source(
        "Hedges 1981",
        "Hedges, L. V. (1981). Distribution theory for Glass's estimator of effect size and "
        "related estimators. Journal of Educational Statistics, 6, 107-128.",
        "Hedges' g: the exact small-sample factor J(m).",
    ),
)
