"""netsize: how many participants, net of publication bias.

The functions bear the names of the commands and load their libraries on first use:

    netsize.read(text)          pasted statistics → Reading
    netsize.effects(source)     → EffectTable: unbiased effect sizes with exact intervals
    netsize.weigh(source)       → Weighing: pooled and corrected estimates, diagnostics
    netsize.plan(source, ...)   → Plan: planning distribution, planning value, n
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
    "solve": "netsize.sizing",
    "sources": "netsize.citations",
}

__all__ = ["__version__", *_HOMES]


def __getattr__(name: str) -> Any:
    if name in _HOMES:
        return getattr(import_module(_HOMES[name]), name)
    raise AttributeError(f"module 'netsize' has no attribute {name!r}")


def __dir__() -> list[str]:
    return sorted(__all__)
