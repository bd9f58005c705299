"""What the significant results look like: how many there are, and how their p-values are spread."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from scipy.special import chdtrc, gammaincc

from netsize.effect_sizes import curves
from netsize.effect_sizes.records import Evidence
from netsize.numerics.arrays import Array
from netsize.synthesis.conditional import Domain, tail_shares
from netsize.synthesis.records import Diagnostic, number_of_results

__all__ = [
    "effects_for_power",
    "excess_significance",
    "expected_significant",
    "significant_shape",
    "two_sided_power",
]

_LOW_POWER = 1 / 3  # the power against which flatness is tested (Simonsohn et al. 2014)


def two_sided_power(evidence: Sequence[Evidence], effect: float) -> Array:
    """Exact chance of each result being significant in either direction at `effect`, (k,)."""
    both = [replace(e, cuts=(e.cuts[0], -e.cuts[0]), band=None) for e in evidence]
    bands = curves.band_probabilities(both, np.array([effect]))[:, :, 0]
    # F and chi-square are never negative, so their last band is empty
    return np.asarray(bands[:, 0] + bands[:, 2])


def expected_significant(observed: int, power: Array) -> tuple[float, float]:
    """Chi-square of observed against expected significant results, and its p (1 df).

    (O-E)²/E + (O-E)²/(k-E), E = Σ power (Ioannidis & Trikalinos 2007).
    """
    expected, k = float(power.sum()), power.size
    gap = (observed - expected) ** 2
    with np.errstate(divide="ignore", invalid="ignore"):
        chi2 = float(np.divide(gap, expected) + np.divide(gap, k - expected))
    return chi2, float(chdtrc(1, chi2))


def excess_significance(evidence: Sequence[Evidence], effect: float) -> Diagnostic:
    """More significant results than their power at `effect` (the common-effect mean) allows."""
    exact = [e for e in evidence if e.low == e.high]
    key, label, used = "excess-significance", "Excess of significant results", len(exact)
    limits = (
        f"With {number_of_results(used)} it has little power; it takes the mean, itself inflated "
        "by selection, as the truth, so it errs towards silence."
        if used < 20
        else "It takes the mean, itself inflated by selection, as the truth, so it errs towards "
        "silence; heterogeneity can make an excess too."
    )
    if used < 2:
        return Diagnostic(
            key=key, label=label, used=used, status="too few results",
            reason="needs at least two results with a statistic", limits=limits,
        )  # fmt: skip
    power = two_sided_power(exact, effect)
    observed = sum(abs(e.low) > e.cuts[0] for e in exact)
    chi2, p = expected_significant(observed, power)
    expected = float(power.sum())
    excess = observed > expected
    clear = p < 0.1 and excess
    finding = f"{observed} of {used} are significant where {expected:.1f} would be expected"
    if clear:
        finding += ": more than chance explains"
    return Diagnostic(
        key=key, label=label, used=used, statistic=chi2, symbol="chi2(1)", p=p, finding=finding,
        limits=limits,
    )  # fmt: skip


def significant_shape(
    evidence: Sequence[Evidence], domain: Domain
) -> tuple[Diagnostic, Diagnostic]:
    """Right skew and flatness of the significant p-values (Simonsohn, Nelson & Simmons 2014).

    Parameters
    ----------
    evidence : exact results significant in the predicted direction.
    domain : effects searched for the one that gives each result 33 % power.

    Notes
    -----
    At no effect the conditional tail shares q_i are uniform; evidence for an effect piles them up
    near 0: -2Σ log q_i on 2k degrees of freedom (Fisher's combination). At 33 % power 1 - q_i is
    uniform in turn; p-values flatter than that pile 1 - q_i up near 0.
    """
    used = len(evidence)
    limits = _shape_limits(used)
    skew_names = ("right-skew", "Right skew of significant p")
    flat_names = ("flatness", "Flatness of significant p")
    if used == 0:
        none = [
            Diagnostic(
                key=key, label=label, used=0, status="too few results",
                reason="no exact significant result", limits=limits,
            )
            for key, label in (skew_names, flat_names)
        ]  # fmt: skip
        return none[0], none[1]
    skew = _fisher(tail_shares(evidence, np.zeros(1))[:, 0])
    weak = effects_for_power(evidence, _LOW_POWER, domain)
    shares = np.array([tail_shares([e], weak[i : i + 1])[0, 0] for i, e in enumerate(evidence)])
    flat = _fisher(1 - shares)
    symbol = f"chi2({2 * used})"
    return (
        Diagnostic(
            key=skew_names[0], label=skew_names[1], used=used, statistic=skew[0], symbol=symbol,
            p=skew[1], limits=limits,
            finding="more small p-values than without an effect: there is something"
            if skew[1] < 0.05
            else "not clearly right-skewed: an effect of zero cannot be ruled out",
        ),
        Diagnostic(
            key=flat_names[0], label=flat_names[1], used=used, statistic=flat[0], symbol=symbol,
            p=flat[1], limits=limits,
            finding="flatter than studies of 33% power would give: little evidential value"
            if flat[1] < 0.05
            else "not flatter than studies of 33% power would give",
        ),
    )  # fmt: skip


def effects_for_power(evidence: Sequence[Evidence], power: float, domain: Domain) -> Array:
    """The effect at which each result is significant as predicted with chance `power`, (k,)."""
    out = np.empty(len(evidence))
    for i, e in enumerate(evidence):
        low, high = 0.0, max(domain.high, 1e-9)
        while _chance(e, np.array([high]))[0] < power:
            high *= 2
        for _ in range(4):
            points = np.linspace(low, high, 41)
            chance = _chance(e, points)
            place = int(np.clip(np.searchsorted(chance, power), 1, points.size - 1))
            low, high = float(points[place - 1]), float(points[place])
        out[i] = np.interp(power, _chance(e, np.array([low, high])), [low, high])
    return out


def _chance(e: Evidence, theta: Array) -> Array:
    chance: Array = curves.band_probabilities([replace(e, cuts=e.cuts[:1], band=None)], theta)[0, 0]
    return chance


def _fisher(shares: Array) -> tuple[float, float]:
    statistic = float(-2 * np.log(np.clip(shares, 1e-300, 1.0)).sum())
    return statistic, float(gammaincc(shares.size, statistic / 2))


def _shape_limits(used: int) -> str:
    if used < 5:
        return (
            f"With {number_of_results(used, 'significant')} only overwhelming evidence shows; it "
            "says nothing about how many results went unprinted."
        )
    return (
        "It asks whether the significant results hold any effect, not how large it is, and is "
        "misled by results picked among several of the same study."
    )
