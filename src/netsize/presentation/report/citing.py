"""Which published sources a report names: those whose methods enter its numbers."""

from __future__ import annotations

from collections.abc import Callable

from netsize.citations import Source, sources
from netsize.planning.plan import Plan
from netsize.presentation.report.material import Material

__all__ = ["CONDITIONS", "cited"]

_Condition = Callable[[Plan], bool]


def _chosen(setting: str, value: str) -> _Condition:
    return lambda plan: getattr(plan.settings, setting) == value


def _shared(plan: Plan) -> bool:
    return len(plan.literature.samples) < len(plan.literature.rows)


def _read_as(*families: str) -> _Condition:
    return lambda plan: any(row.result.family in families for row in plan.literature.rows)


def _metric(*names: str) -> _Condition:
    return lambda plan: plan.metric.name in names


def _clustered(plan: Plan) -> bool:
    return plan.study.modifiers.cluster_size > 1


# Sources that serve some plans only; every other one enters each report.
_MEANS = _metric("mean-difference", "difference-score")
_VARIANCE = _read_as("f", "eta2")  # shares of variance are shown beside their tests
CONDITIONS: dict[str, _Condition] = {
    "Anderson et al. 2017": _chosen("rule", "single-study"),
    "Borenstein et al. 2009": _shared,
    "Borm et al. 2007": lambda plan: plan.study.modifiers.covariate_r2 > 0,
    "Chinn 2000": _read_as("odds-ratio", "counts"),
    "DerSimonian & Laird 1986": _chosen("heterogeneity", "dersimonian-laird"),
    "Donner & Klar 2000": _clustered,
    "Dunn 1961": lambda plan: plan.study.modifiers.tests > 1,
    "Fleiss et al. 2003": lambda plan: False,  # proportions are not planned from evidence
    "Haldane 1956": _read_as("counts"),
    "Hartung & Knapp 2001": _chosen("interval", "hartung-knapp"),
    "Hasselblad & Hedges 1995": _read_as("odds-ratio", "counts"),
    "Hays 1963": _VARIANCE,
    "Hedges & Olkin 1985": _chosen("heterogeneity", "hedges"),
    "Hedges 1981": _MEANS,
    "Hedges 1983": _MEANS,
    "Hotelling 1953": _metric("fisher-z"),
    "Kelley 1935": _VARIANCE,
    "Kish 1965": _clustered,
    "Liang & Zeger 1986": lambda plan: False,  # the page pools composites
    "Muller & Barton 1989": lambda plan: plan.study.design.name == "repeated",
    "Okada 2017": _VARIANCE,
    "Olkin & Pratt 1958": _metric("fisher-z"),
    "Owen 1965": lambda plan: False,  # neither is equivalence
    "Paule & Mandel 1982": _chosen("heterogeneity", "paule-mandel"),
    "Perugini et al. 2014": _chosen("rule", "pooled-limit"),
    "Peters et al. 2008": lambda plan: plan.metric.signed,
    "Raudenbush 2009": lambda plan: plan.settings.heterogeneity.endswith("likelihood"),
    "Rosenthal & Rubin 2003": _read_as("p"),
    "Schuirmann 1987": lambda plan: False,
    "Sidik & Jonkman 2002": _chosen("interval", "hartung-knapp"),
    "Sidik & Jonkman 2005": _chosen("heterogeneity", "sidik-jonkman"),
    "Steiger 2004": _metric("cohen-f"),
    "Taylor & Muller 1996": _chosen("rule", "single-study"),
    "Welch 1938": lambda plan: getattr(plan.study.design, "spread_ratio", 1.0) != 1.0,
    "Woolf 1955": _read_as("counts", "odds-ratio"),
}


def cited(material: Material) -> tuple[Source, ...]:
    """In alphabetical order."""
    return tuple(
        s
        for s in sources()
        if (condition := CONDITIONS.get(s.key)) is None or condition(material.plan)
    )
