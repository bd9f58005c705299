from __future__ import annotations

from collections.abc import Callable

import pytest

from netsize.effect_sizes import EffectSize, effects
from netsize.reported.records import ReportedResult


@pytest.fixture(scope="session")
def result() -> Callable[..., ReportedResult]:
    """result("t", 2.3, df=(38,)) → a reported result labelled "a"."""

    def build(family: str, value: float | None = None, **fields) -> ReportedResult:
        return ReportedResult(**({"label": "a", "family": family, "value": value} | fields))

    return build


@pytest.fixture(scope="session")
def row(result) -> Callable[..., EffectSize]:
    """row("t", 2.3, df=(38,)) → the only row of its table; settings=... are those of effects."""

    def build(family: str, value: float | None = None, settings=None, **fields) -> EffectSize:
        (only,) = effects([result(family, value, **fields)], **(settings or {})).rows
        return only

    return build
