"""A plan to a document: the sections in the order in which a reviewer asks."""

from __future__ import annotations

import hashlib
import json
from typing import Any

import netsize
from netsize.planning.plan import Plan
from netsize.presentation.headline import headline
from netsize.presentation.report.chapters import conclusions, evidence, sizing, synthesis
from netsize.presentation.report.content import Document, Input
from netsize.presentation.report.material import gather_material
from netsize.reported.records import Reading

__all__ = ["compose", "digest"]


def compose(
    plan: Plan,
    reading: Reading | None = None,
    *,
    name: str = "results",
    sha256: str | None = None,
    skip_unread: bool = False,
    command: str = "",
    version: str = netsize.__version__,
) -> Document:
    """The document of a plan.

    Parameters
    ----------
    reading : what the plan was made from, for recomputing; None takes the results it used.
    name, sha256 : of the input (a file's name and digest), shown and kept.
    skip_unread : whether unread places of the reading were left out. command : that was typed.
    version : of netsize, as the report states it.
    """
    if reading is None:
        reading = Reading(results=tuple(row.result for row in plan.literature.rows))
    results = [r.to_dict() for r in reading.results]
    source = Input(
        name=name,
        sha256=sha256,
        results_sha256=digest(results),
        results=tuple(results),
        unread=tuple(u.to_dict() for u in reading.unread),
        skip_unread=skip_unread,
    )
    material = gather_material(plan)
    return Document(
        title=f"Sample size for a study of {plan.study.design.title}",
        answer=headline(plan),
        sections=(
            conclusions.answer(material),
            sizing.naive(material),
            evidence.evidence(material),
            synthesis.corrections(material),
            synthesis.belief(material),
            sizing.sizes(material),
            conclusions.moves(material),
            conclusions.justification(material, version),
            conclusions.methods(material),
            conclusions.cautions(material),
            conclusions.reproducibility(material, source, command, version),
        ),
        input=source,
        settings=plan.settings.to_dict(),
        numbers=material.to_dict(),
        command=command,
        version=version,
    )


def digest(results: list[Any]) -> str:
    """SHA-256 of results in one canonical spelling of JSON."""
    text = json.dumps(results, sort_keys=True, ensure_ascii=False, separators=(",", ":"))
    return hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest()
