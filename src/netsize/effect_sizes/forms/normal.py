"""Results with a normal statistic: z tests with n, and ready-made estimates."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Literal

from netsize.effect_sizes import estimators
from netsize.effect_sizes.conversions import convert
from netsize.effect_sizes.forms.base import equal_groups, refuse
from netsize.effect_sizes.forms.squares import ChiSquareForm
from netsize.effect_sizes.forms.student import StudentForm
from netsize.effect_sizes.observed import Observed, z_law
from netsize.effect_sizes.records import EffectSize, Evidence
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError
from netsize.reported.records import ReportedResult

__all__ = ["EstimateForm", "NormalForm"]


@dataclass(frozen=True, slots=True, kw_only=True)
class NormalForm:
    """A z statistic from n participants.

    `design` is None where nothing tells what it compares; `table` marks the root of a 2×2 table's
    chi-square, a correlation φ whose undirected effect is Cohen's w.
    """

    result: ReportedResult
    observed: Observed
    design: Literal["two-groups", "paired", "one-sample", "correlation"] | None
    n: int
    groups: tuple[int, ...]
    table: bool = False
    assumptions: tuple[str, ...] = ()

    @property
    def adaptable(self) -> bool:
        """True where nothing tells what it compares."""
        return self.design is None

    @property
    def kind(self) -> str:
        """What it is, in the plural."""
        return "z tests" if self.design is None else self._as_t("").kind

    @property
    def home(self) -> str:
        """Metric that needs no conversion."""
        return "fisher-z" if self.design is None else self._as_t("").home

    def on(self, settings: Settings) -> EffectSize:
        """z on the metric: as the large-sample limit of t, or as a correlation z/√n."""
        if self.table and settings.target.name == "cohen-f":
            return ChiSquareForm(
                result=self.result,
                observed=self.observed.squared(),
                df=1.0,
                n=self.n,
                assumptions=self.assumptions,
            ).on(settings)
        if self.design == "correlation" or settings.target.name in ("fisher-z", "cohen-f"):
            return self._as_correlation().on(settings)
        note = "" if self.design else "comparison of two equal groups assumed; [paired] if not"
        row = self._as_t(note).on(settings)
        scale = row.evidence.scale
        estimate = row.printed
        variance = None
        if estimate is not None:
            variance = float(estimators.large_sample_variance(estimate, self.n, 1 / scale**2))
        return replace(
            row,
            estimate=estimate,
            variance=variance,
            evidence=replace(row.evidence, kernel="z", df=()),
            others=() if estimate is None else (("d", estimate),),
        )

    def _as_t(self, note: str) -> StudentForm:
        # t without a limit on its degrees of freedom is z; those of n keep the notes finite
        design = self.design or "two-groups"
        return StudentForm(
            result=self.result,
            observed=self.observed,
            df=float(max(self.n - 2, 2)),
            design=design,
            n=self.n,
            groups=self.groups
            if design != "two-groups" or len(self.groups) == 2
            else equal_groups(self.n),
            assumptions=(*self.assumptions, note) if note else self.assumptions,
        )

    def _as_correlation(self) -> StudentForm:
        """z = √n r, r as a sample correlation; z² = χ² makes r the φ of a 2×2 table."""
        n, root = self.n, math.sqrt(self.n)
        if n < 4 or (self.observed.exact and abs(self.observed.low) >= root):
            raise EvidenceError(
                f"z = {self.observed.low:.4g} is too large for n = {n}: z/√n is a correlation"
            )

        def t_of(z: float) -> float:
            r = max(-1.0, min(1.0, z / root))
            rest = (1 - r) * (1 + r)
            return r * math.sqrt((n - 2) / rest) if rest > 0 else math.copysign(math.inf, r)

        return StudentForm(
            result=self.result,
            observed=self.observed.mapped(t_of),
            df=n - 2.0,
            design="correlation",
            n=n,
            groups=self.groups,
            assumptions=(*self.assumptions, "φ = √(χ²/N)" if self.table else "r = z/√n"),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class EstimateForm:
    """An estimate with a standard error on its own metric.

    `logistic` marks a log odds ratio, which the logistic law turns into a mean difference.
    """

    result: ReportedResult
    value: float
    standard_error: float
    home: str
    kind: str
    n: int
    groups: tuple[int, ...]
    printed: float | None = None
    logistic: bool = False
    adaptable: bool = False
    others: tuple[tuple[str, float], ...] = ()
    assumptions: tuple[str, ...] = ()

    def on(self, settings: Settings) -> EffectSize:
        """The estimate, converted where its metric is another one."""
        metric = settings.target
        notes = list(self.assumptions)
        value, variance = self.value, self.standard_error**2
        if metric.name != self.home:
            converted = convert(
                value, variance, source=self.home, target=metric.name, logistic=self.logistic
            )
            if converted is None:
                raise refuse(self.kind, metric, "no published conversion leads there")
            value, variance, note = converted
            notes.append(note)
        return estimate_effect(
            result=self.result,
            settings=settings,
            value=value,
            variance=variance,
            n=self.n,
            groups=self.groups,
            others=self.others,
            assumptions=tuple(notes),
        )


def estimate_effect(
    *,
    result: ReportedResult,
    settings: Settings,
    value: float,
    variance: float,
    n: int,
    groups: tuple[int, ...],
    others: tuple[tuple[str, float], ...],
    assumptions: tuple[str, ...],
) -> EffectSize:
    """A row whose estimate is normal with known variance on the metric of `settings`."""
    metric, law, scale = settings.target, z_law(), 1 / math.sqrt(variance)
    x = value * scale
    observed = Observed(
        low=x,
        high=x,
        two_sided=False,
        cuts=tuple(law.critical(c, tails=result.tails) for c in settings.cuts_of(result)),
        p=law.p_value(x),
        assumptions=(),
    )
    return EffectSize(
        result=result,
        metric=metric,
        printed=float(metric.shown(value)),  # type: ignore[arg-type]
        estimate=value,
        variance=variance,
        null_variance=variance,
        low=math.nan,
        high=math.nan,
        level=settings.level,
        p=observed.p,
        n=n,
        groups=groups,
        design=result.design,
        evidence=Evidence(
            kernel="z",
            df=(),
            scale=scale,
            low=x,
            high=x,
            cuts=observed.cuts,
            band=observed.band,
        ),
        others=others,
        assumptions=assumptions,
    )
