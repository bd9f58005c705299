"""Which published sources a report names: those whose methods enter its numbers."""

from __future__ import annotations

from collections.abc import Callable

from netsize.citations import Source, sources
from netsize.planning.plan import Plan
from netsize.presentation.report.material import Material

__all__ = ["cited"]

_Condition = Callable[[Plan], bool]


def _chosen(setting: str, value: str) -> _Condition:
    return lambda plan: getattr(plan.settings, setting) == value


def _shared(plan: Plan) -> bool:
    return len(plan.literature.samples) < len(plan.literature.rows)


def _clustered(plan: Plan) -> bool:
    return plan.study.modifiers.cluster_size > 1


# Sources that serve some plans only; every other one enters each report.
_CONDITIONS: dict[str, _Condition] = {
    "Anderson et al. 2017": _chosen("rule", "single-study"),
    "Borenstein et al. 2009": _shared,
    "Borm et al. 2007": lambda plan: plan.study.modifiers.covariate_r2 > 0,
    "DerSimonian & Laird 1986": _chosen("heterogeneity", "dersimonian-laird"),
    "Donner & Klar 2000": _clustered,
    "Dunn 1961": lambda plan: plan.study.modifiers.tests > 1,
    "Fleiss et al. 2003": lambda plan: False,  # proportions are not planned from evidence
    "Hartung & Knapp 2001": _chosen("interval", "hartung-knapp"),
    "Hedges & Olkin 1985": _chosen("heterogeneity", "hedges"),
    "Hotelling 1953": lambda plan: plan.metric.name == "fisher-z",
    "Kish 1965": _clustered,
    "Liang & Zeger 1986": lambda plan: False,  # the page pools composites
    "Muller & Barton 1989": lambda plan: plan.study.design.name == "repeated",
    "Owen 1965": lambda plan: False,  # neither is equivalence
    "Paule & Mandel 1982": _chosen("heterogeneity", "paule-mandel"),
    "Perugini et al. 2014": _chosen("rule", "pooled-limit"),
    "Raudenbush 2009": lambda plan: plan.settings.heterogeneity.endswith("likelihood"),
    "Schuirmann 1987": lambda plan: False,
    "Sidik & Jonkman 2002": _chosen("interval", "hartung-knapp"),
    "Sidik & Jonkman 2005": _chosen("heterogeneity", "sidik-jonkman"),
    "Steiger 2004": lambda plan: plan.metric.name == "cohen-f",
    "Taylor & Muller 1996": _chosen("rule", "single-study"),
    "Welch 1938": lambda plan: getattr(plan.study.design, "spread_ratio", 1.0) != 1.0,
}


def cited(material: Material) -> tuple[Source, ...]:
    """In alphabetical order."""
    return tuple(
        s
        for s in sources()
        if (condition := _CONDITIONS.get(s.key)) is None or condition(material.plan)
    )
