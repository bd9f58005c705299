"""Step-function selection model by maximum likelihood, normal theory.

A result in p-interval j gets printed with chance w_j relative to the first interval, so

    log L = Σ_i c_i { log w_{j(i)} + log φ((y_i-μ)/η_i)/η_i - log Σ_j w_j B_ij },  η_i² = v_i + τ²,

B_ij being the probability that y_i falls in interval j (Hedges 1992; Vevea & Hedges 1995). p is
one-sided from y/σ, σ the effect-free standard error.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.optimize import minimize
from scipy.special import gammaincc, ndtr, ndtri

from netsize.errors import SettingError
from netsize.numerics.arrays import Array, IntArray
from netsize.synthesis.confidence import symmetric, unusable
from netsize.synthesis.heterogeneity import tau_squared
from netsize.synthesis.records import Diagnostic, Estimate, number_of_results

__all__ = ["StepFit", "check_cuts", "fit_step_function", "selection_test", "step_function"]

_REACH = 3.0  # how far beyond the estimates μ is searched, in their range
_LOG_WEIGHT = 12.0  # weights are searched within e^±12


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class StepFit:
    """Maximum of the likelihood.

    mean, se, tau2 : μ, its standard error from the curvature (nan where that fails), τ².
    weights : (J,) relative to the first interval that holds a result. An empty interval has
        weight 0: there the likelihood only rises as its weight falls.
    counts : (J,) results an interval. log_likelihood : at the maximum.
    ratio, p : likelihood-ratio statistic against equal weights and its chi-square p.
    converged : whether the gradient vanished inside the bounds. runaway : whether μ went to one.
    """

    mean: float
    se: float
    tau2: float
    weights: Array
    counts: IntArray
    log_likelihood: float
    ratio: float
    p: float
    converged: bool
    runaway: bool


@dataclass(frozen=True, slots=True, eq=False)
class _Model:
    """Data in units of their typical standard error, and which weights are free."""

    y: Array
    v: Array
    edges: Array  # (J-1, k) decreasing
    interval: IntArray
    shares: Array
    free: IntArray  # intervals whose log-weight is searched
    base: int  # the interval of weight 1

    def weights(self, logs: Array) -> Array:
        w = np.zeros(self.edges.shape[0] + 1)
        w[self.base] = 1.0
        w[self.free] = np.exp(logs)
        return w

    def loss(self, parameters: Array) -> tuple[float, Array]:
        """Negative log-likelihood and its gradient by (μ, τ², log w)."""
        mu, tau2, logs = parameters[0], parameters[1], parameters[2:]
        w = self.weights(logs)
        eta = np.sqrt(self.v + tau2)
        z = (self.y - mu) / eta
        a = (self.edges - mu) / eta
        above = np.concatenate([np.zeros((1, eta.size)), ndtr(-a), np.ones((1, eta.size))])
        bands = np.diff(above, axis=0)
        density = np.exp(-0.5 * a * a) / np.sqrt(2 * np.pi)
        pad = np.zeros((1, eta.size))
        # derivatives of P(y > edge): φ(a)/η by μ and aφ(a)/(2η²) by τ²
        by_mu = np.diff(np.concatenate([pad, density / eta, pad]), axis=0)
        by_tau2 = np.diff(np.concatenate([pad, a * density / (2 * eta**2), pad]), axis=0)
        printed = np.maximum(w @ bands, 1e-300)
        c = self.shares
        log_w = np.zeros_like(w)
        log_w[self.free] = logs
        value = c @ (
            log_w[self.interval] - 0.5 * z * z - np.log(eta) - 0.5 * np.log(2 * np.pi)
            - np.log(printed)
        )  # fmt: skip
        gradient = np.empty_like(parameters)
        gradient[0] = c @ (z / eta - (w @ by_mu) / printed)
        gradient[1] = c @ ((z * z - 1) / (2 * eta**2) - (w @ by_tau2) / printed)
        held = np.bincount(self.interval, weights=c, minlength=w.size)
        gradient[2:] = held[self.free] - w[self.free] * ((bands[self.free] / printed) @ c)
        return -float(value), -gradient


def check_cuts(cuts: Sequence[float]) -> tuple[float, ...]:
    """The cut points in increasing order; SettingError unless distinct and inside (0, 1)."""
    ordered = tuple(sorted(float(c) for c in cuts))
    if not ordered or len(set(ordered)) < len(ordered) or not all(0 < c < 1 for c in ordered):
        raise SettingError(
            "--steps", f"{list(cuts)} are not distinct one-sided p-values in (0, 1); try 0.025"
        )
    return ordered


def fit_step_function(
    estimates: Array,
    variances: Array,
    *,
    null_variances: Array | None = None,
    cuts: Sequence[float] = (0.025,),
    heterogeneous: bool = True,
    shares: Array | None = None,
) -> StepFit:
    """Fit μ, τ² and the weights.

    Parameters
    ----------
    estimates, variances : y_i and v_i, shape (k,), k ≥ 2.
    null_variances : squares of the effect-free standard errors that p-values use; v_i by default.
    cuts : one-sided p-values that part the intervals, the smallest first.
    heterogeneous : False fixes τ² at 0. shares : c_i, 1 by default.
    """
    y, v = np.asarray(estimates, dtype=float), np.asarray(variances, dtype=float)
    null = v if null_variances is None else np.asarray(null_variances, dtype=float)
    ordered = check_cuts(cuts)
    unit = float(np.sqrt(np.median(v)))
    edges = -ndtri(np.array(ordered))[:, None] * np.sqrt(null) / unit
    interval = (y / unit <= edges).sum(axis=0)
    counts = np.bincount(interval, minlength=len(ordered) + 1)
    held = np.flatnonzero(counts)
    model = _Model(
        y / unit, v / unit**2, edges, interval,
        np.ones(y.size) if shares is None else shares, held[1:], int(held[0]),
    )  # fmt: skip
    spread = float(np.ptp(model.y)) + float(np.sqrt(model.v.max()))
    bounds = [
        (model.y.min() - _REACH * spread, model.y.max() + _REACH * spread),
        (0.0, spread**2 if heterogeneous else 0.0),
        *[(-_LOG_WEIGHT, _LOG_WEIGHT)] * model.free.size,
    ]
    best, loss, gradient, unselected = _search(model, bounds, heterogeneous)
    low, high = np.array(bounds).T
    held_back = ((best <= low) & (gradient > 0)) | ((best >= high) & (gradient < 0))
    ratio = max(0.0, 2 * (unselected - loss))
    return StepFit(
        mean=float(best[0]) * unit,
        se=_standard_error(model, best, bounds) * unit,
        tau2=float(best[1]) * unit**2,
        weights=model.weights(best[2:]),
        counts=counts,
        log_likelihood=float(-loss - model.shares.sum() * np.log(unit)),
        ratio=ratio,
        p=float(gammaincc(len(ordered) / 2, ratio / 2)),
        converged=bool(np.abs(np.where(held_back, 0.0, gradient)).max() < 1e-3),
        runaway=bool(best[0] <= low[0] or best[0] >= high[0]),
    )


def step_function(
    estimates: Array,
    variances: Array,
    *,
    null_variances: Array | None = None,
    cuts: Sequence[float] = (0.025,),
    shares: Array | None = None,
    level: float = 0.95,
) -> Estimate:
    """The model as one row; needs k ≥ 3."""
    key, label, used = "step-function", "Step-function model", int(np.size(estimates))
    if used < 3:
        return unusable(
            key, label, level=level, used=used, reason="three parameters need three results"
        )
    fit = fit_step_function(
        estimates, variances, null_variances=null_variances, cuts=cuts, shares=shares
    )
    if fit.runaway:
        return unusable(
            key, label, level=level, used=used, status="did not converge",
            reason="the likelihood is highest far outside the results: they cannot tell "
            "selection from no effect",
        )  # fmt: skip
    if not fit.converged or not np.isfinite(fit.se):
        return unusable(
            key, label, level=level, used=used, status="did not converge",
            reason="the likelihood has no clear maximum",
        )  # fmt: skip
    empty = int((fit.counts == 0).sum())
    at_bound = bool((np.abs(np.log(fit.weights[fit.counts > 0])) > 0.99 * _LOG_WEIGHT).any())
    reason = "few results: the weights are hardly known" if used < 20 else ""
    if empty:
        reason = "no result in " + (
            "one p-interval" if empty == 1 else f"{empty} p-intervals"
        ) + ", taken as never printed"  # fmt: skip
    return symmetric(
        key,
        label,
        estimate=fit.mean,
        se=fit.se,
        df=float("inf"),
        level=level,
        used=used,
        tau2=fit.tau2,
        status="at a boundary" if empty or at_bound else "fine",
        reason=reason,
    )


def _search(
    model: _Model, bounds: list[tuple[float, float]], heterogeneous: bool
) -> tuple[Array, float, Array, float]:
    """Best parameters, their loss and its gradient over several starts; the loss without selection.

    The maximum without selection is the first start, so the best is never below it.
    """
    tau2 = 0.0
    if heterogeneous:
        tau2 = float(tau_squared(model.y, model.v, method="likelihood").value)
    eta = np.sqrt(model.v + tau2)
    w = model.shares / eta**2
    plain = float((w * model.y).sum() / w.sum())
    z = (model.y - plain) / eta
    unselected = float(model.shares @ (0.5 * z * z + np.log(eta) + 0.5 * np.log(2 * np.pi)))
    starts = ((plain, tau2, 0.0), (0.5 * plain, tau2, -1.0), (0.0, 0.25 * tau2, -2.0))
    rough = [
        _descend(model, bounds, np.array([mu, spread, *[log_w] * model.free.size]), precision=1e-7)
        for mu, spread, log_w in starts
    ]
    best = min(rough, key=lambda end: end[1])
    final = _descend(model, bounds, best[0], precision=1e-15)
    return *min(best, final, key=lambda end: end[1]), unselected


def _descend(
    model: _Model, bounds: list[tuple[float, float]], start: Array, *, precision: float
) -> tuple[Array, float, Array]:
    """Parameters, loss and gradient where a quasi-Newton search stops."""
    fit = minimize(
        model.loss,
        start,
        jac=True,
        bounds=bounds,
        method="L-BFGS-B",
        options={"maxiter": 500, "ftol": precision, "gtol": 1e-9},
    )
    return fit.x, float(fit.fun), np.asarray(fit.jac)


def _standard_error(model: _Model, at: Array, bounds: list[tuple[float, float]]) -> float:
    """Of μ, from the numerical Hessian over the parameters strictly inside their bounds."""
    inside = [i for i, (low, high) in enumerate(bounds) if low < at[i] < high]
    if 0 not in inside:
        return float("nan")
    hessian = np.empty((len(inside), len(inside)))
    for row, i in enumerate(inside):
        # small enough to stay right of τ² = 0
        step = min(1e-4, 0.5 * at[i]) if i == 1 else 1e-4
        ends = []
        for sign in (1, -1):
            moved = at.copy()
            moved[i] += sign * step
            ends.append(model.loss(moved)[1][inside])
        hessian[row] = (ends[0] - ends[1]) / (2 * step)
    hessian = (hessian + hessian.T) / 2
    if not np.isfinite(hessian).all() or np.linalg.eigvalsh(hessian)[0] <= 0:
        return float("nan")
    place = inside.index(0)
    return float(np.sqrt(np.linalg.inv(hessian)[place, place]))


def selection_test(
    estimates: Array,
    variances: Array,
    *,
    null_variances: Array | None = None,
    cuts: Sequence[float] = (0.025,),
    shares: Array | None = None,
) -> Diagnostic:
    """Likelihood-ratio test of equal weights (Vevea & Hedges 1995) as one diagnostic."""
    key, label, used = "selection-ratio", "Step function against no selection", np.size(estimates)
    limits = (
        "The chi-square law behind it needs many results on either side of each step; with "
        f"{number_of_results(used)} a high p is no all-clear."
    )
    if used < 3:
        return Diagnostic(
            key=key, label=label, used=used, status="too few results",
            reason="three parameters need three results", limits=limits,
        )  # fmt: skip
    fit = fit_step_function(
        estimates, variances, null_variances=null_variances, cuts=cuts, shares=shares
    )
    one_sided = bool((fit.counts == 0).any())
    return Diagnostic(
        key=key, label=label, used=used, statistic=fit.ratio, symbol=f"LR({len(cuts)})", p=fit.p,
        status="fine" if fit.converged and not (one_sided or fit.runaway) else "at a boundary",
        reason="some p-interval holds no result, so p is only a rough guide" if one_sided else "",
        finding="results on the two sides of a step seem to be printed with different chances"
        if fit.p < 0.1
        else "unequal chances of being printed are not shown",
        limits=limits,
    )  # fmt: skip
