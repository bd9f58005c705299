"""The results of one effect table as arrays, singly and combined by sample."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from netsize.effect_sizes.metrics import Metric
from netsize.effect_sizes.records import EffectSize, EffectTable, Evidence
from netsize.errors import EvidenceError
from netsize.numerics.arrays import Array, IntArray
from netsize.synthesis.dependence import composite_variances, composites, sample_codes
from netsize.synthesis.selection import dependence_weights

__all__ = ["Results", "from_table"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Results:
    """What the classical methods work on; every array on the pooling metric.

    Attributes
    ----------
    labels, estimates, variances, null_variances, evidence : one entry a result, shape (k,).
    shares : c_i = 1/(1+(m-1)ρ) for m results of one sample, shape (k,).
    codes : which sample each result belongs to, (k,).
    sample_labels, means, mean_variances, mean_null_variances : one entry a sample, shape (s,);
        the composites that normal-theory methods pool as independent.
    """

    metric: Metric
    labels: tuple[str, ...]
    estimates: Array
    variances: Array
    null_variances: Array
    evidence: tuple[Evidence, ...]
    shares: Array
    codes: IntArray
    sample_labels: tuple[str, ...]
    means: Array
    mean_variances: Array
    mean_null_variances: Array

    @property
    def significant(self) -> tuple[int, ...]:
        """Places of exact results in the first p-band: significant as predicted."""
        return tuple(i for i, e in enumerate(self.evidence) if e.band == 0 and e.low == e.high)


def from_table(table: EffectTable, *, within_sample_correlation: float) -> Results:
    """Arrays of every row with a point estimate; EvidenceError where there is none."""
    rows = [r for r in table.rows if r.estimate is not None and r.variance is not None]
    if not rows:
        raise EvidenceError(
            "no result carries a point estimate (inequalities alone do not); add a result with its "
            "statistic, or use `plan`, whose exact model takes inequalities"
        )
    estimates = np.array([r.estimate for r in rows], dtype=float)
    variances = np.array([r.variance for r in rows], dtype=float)
    null = np.array([_null_variance(r) for r in rows])
    samples = [r.sample or r.label for r in rows]
    codes = sample_codes(samples)
    means, mean_variances = composites(
        estimates, variances, codes, correlation=within_sample_correlation
    )
    return Results(
        metric=table.metric,
        labels=tuple(r.label for r in rows),
        estimates=estimates,
        variances=variances,
        null_variances=null,
        evidence=tuple(r.evidence for r in rows),
        shares=dependence_weights(samples, correlation=within_sample_correlation),
        codes=codes,
        sample_labels=_sample_labels(rows, samples, codes),
        means=means,
        mean_variances=mean_variances,
        mean_null_variances=composite_variances(null, codes, correlation=within_sample_correlation),
    )


def _null_variance(row: EffectSize) -> float:
    chosen = row.variance if row.null_variance is None else row.null_variance
    assert chosen is not None
    return chosen


def _sample_labels(
    rows: Sequence[EffectSize], samples: Sequence[str], codes: IntArray
) -> tuple[str, ...]:
    """The study label of a sample with one result, the sample's name otherwise."""
    sizes = np.bincount(codes)
    first = [int(np.flatnonzero(codes == c)[0]) for c in range(sizes.size)]
    return tuple(rows[i].label if sizes[codes[i]] == 1 else samples[i] for i in first)
