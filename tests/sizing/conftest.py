"""Designs and effects for tests that hold for every design."""

from __future__ import annotations

from typing import Any

import pytest

from netsize.sizing.study import Study, make_study

# name, options, effects of moderate power for a few dozen participants
CASES: list[tuple[str, dict[str, Any], tuple[float, float]]] = [
    ("two-groups", {}, (0.1, 2.0)),
    ("two-groups", {"ratio": 2.5}, (0.1, 2.0)),
    ("two-groups", {"ratio": 0.6, "spread_ratio": 2.0}, (0.1, 2.0)),
    ("two-groups", {"sides": 1, "alpha": 0.01}, (0.1, 2.0)),
    ("two-groups", {"cluster_size": 5, "cluster_correlation": 0.1, "loss": 0.2}, (0.2, 2.0)),
    ("paired", {"covariate_r2": 0.3, "covariates": 2}, (0.1, 2.0)),
    ("one-sample", {"tests": 4}, (0.1, 2.0)),
    ("correlation", {}, (0.05, 0.9)),
    ("anova", {"groups": 4}, (0.05, 1.0)),
    ("factorial", {"df1": 2, "cells": 6}, (0.05, 1.0)),
    ("repeated", {"occasions": 3, "groups": 2, "tested": "interaction"}, (0.05, 1.0)),
    ("repeated", {"occasions": 4, "sphericity": 0.6}, (0.05, 1.0)),
    ("regression", {"added_terms": 2, "all_terms": 5}, (0.01, 1.0)),
    ("two-proportions", {"baseline": 0.3}, (0.05, 0.65)),
    ("two-proportions", {"baseline": 0.3, "test": "corrected", "ratio": 2.0}, (0.05, 0.65)),
    ("two-proportions", {"baseline": 0.3, "test": "arcsine"}, (0.05, 0.65)),
    ("one-proportion", {"baseline": 0.4}, (0.05, 0.55)),
    ("contingency", {"rows": 3, "columns": 4}, (0.05, 1.0)),
    ("two-correlations", {}, (0.1, 1.5)),
    ("non-inferiority", {"margin": 0.3, "alpha": 0.025}, (-0.1, 1.0)),
]


def _label(case: tuple[str, dict[str, Any], tuple[float, float]]) -> str:
    return "-".join([case[0], *map(str, case[1].values())])


@pytest.fixture(params=CASES, ids=_label)
def case(request: pytest.FixtureRequest) -> tuple[Study, float, float]:
    """A study and the ends of a range of effects for it."""
    name, settings, (low, high) = request.param
    return make_study(name, **settings), low, high
