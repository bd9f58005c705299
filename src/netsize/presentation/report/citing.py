"""Which published sources a report names: those whose methods enter its numbers."""

from __future__ import annotations

from netsize.citations import Source, sources
from netsize.presentation.report.material import Material

__all__ = ["cited"]

# Sources that serve one choice only: (setting, the choice, beginning of the source's key).
_BY_CHOICE = (
    ("heterogeneity", "dersimonian-laird", "DerSimonian & Laird 1986"),
    ("heterogeneity", "paule-mandel", "Paule & Mandel 1982"),
    ("heterogeneity", "sidik-jonkman", "Sidik & Jonkman 2005"),
    ("heterogeneity", "hedges", "Hedges & Olkin 1985"),
    ("interval", "hartung-knapp", "Hartung & Knapp 2001"),
    ("interval", "hartung-knapp", "Sidik & Jonkman 2002"),
    ("rule", "pooled-limit", "Perugini et al. 2014"),
    ("rule", "single-study", "Taylor & Muller 1996"),
    ("rule", "single-study", "Anderson et al. 2017"),
)


def cited(material: Material) -> tuple[Source, ...]:
    """In alphabetical order."""
    settings = material.plan.settings
    unused = {key for name, choice, key in _BY_CHOICE if getattr(settings, name) != choice}
    return tuple(s for s in sources() if s.key not in unused)
