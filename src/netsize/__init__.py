"""netsize: how many participants, net of publication bias.

The functions bear the names of the commands and load their libraries on first use:

    netsize.read(text)          pasted statistics → Reading
    netsize.effects(source)     → EffectTable: unbiased effect sizes with exact intervals
    netsize.weigh(source)       → Weighing: pooled and corrected estimates, diagnostics
    netsize.plan(source, ...)   → Plan: planning distribution, planning value, n
    netsize.report(source, ...) → Document: the plan with all that speaks for and against it
    netsize.solve(design, ...)  → Sizing: n for power, power for n
    netsize.sources()           → the published methods
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

__version__ = "0.1.0"

_HOMES = {
    "read": "netsize.reported",
    "effects": "netsize.effect_sizes",
    "weigh": "netsize.synthesis",
    "plan": "netsize.planning",
    "report": "netsize.presentation.report",
    "solve": "netsize.sizing",
    "sources": "netsize.citations",
}

# What the functions return is shown by notebooks as tables. The records live below the floor that
# formats numbers and may not import it, so they get their `_repr_html_` at this door.
_RECORDS = {
    "read": ("netsize.reported.records", "Reading"),
    "effects": ("netsize.effect_sizes.records", "EffectTable"),
    "weigh": ("netsize.synthesis.weighing", "Weighing"),
    "plan": ("netsize.planning.plan", "Plan"),
    "report": ("netsize.presentation.report.content", "Document"),
}

__all__ = ["__version__", *_HOMES]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'netsize' has no attribute {name!r}")
    if name in _RECORDS:
        module, record = _RECORDS[name]
        getattr(import_module(module), record)._repr_html_ = _repr_html_
    return getattr(import_module(_HOMES[name]), name)


def _repr_html_(record: Any) -> str:
    """What a notebook shows of a record."""
    shown: str = import_module("netsize.presentation.notebook").show(record)
    return shown


def __dir__() -> list[str]:
    return sorted(__all__)
