"""`netsize weigh`: a literature pooled, corrected and examined, side by side."""

from __future__ import annotations

import json
from typing import Annotated

import typer

from netsize.cli.options import SkipUnread, Source, numbers
from netsize.cli.source import load, usable
from netsize.cli.waiting import waiting
from netsize.errors import SettingError

__all__ = ["weigh"]


def weigh(
    source: Source = None,
    heterogeneity: Annotated[
        str,
        typer.Option(
            help="Estimator of the between-study variance: restricted-likelihood, likelihood, "
            "dersimonian-laird, paule-mandel, sidik-jonkman or hedges."
        ),
    ] = "restricted-likelihood",
    interval: Annotated[
        str, typer.Option(help="Interval of the pooled mean: hartung-knapp or wald.")
    ] = "hartung-knapp",
    level: Annotated[float, typer.Option(help="Confidence level of the intervals.")] = 0.95,
    within_sample_correlation: Annotated[
        float, typer.Option(help="Assumed correlation of results that share a sample, 0 to 1.")
    ] = 0.5,
    dependence: Annotated[
        str,
        typer.Option(
            help="Results that share a sample: composites averages them first, clustered keeps "
            "them apart and clusters the errors."
        ),
    ] = "composites",
    steps: Annotated[
        str,
        typer.Option(
            help="One-sided p-values, parted by commas, at which the step-function model lets the "
            "chance of being printed change."
        ),
    ] = "0.025",
    metric: Annotated[
        str | None, typer.Option(help="Scale to pool on, where the results allow several.")
    ] = None,
    correlation: Annotated[
        float | None,
        typer.Option(
            "--within-pair",
            help="Correlation within pairs, to convert between paired and unpaired.",
        ),
    ] = None,
    alpha: Annotated[
        float, typer.Option(help="Two-sided level at which the papers called results significant.")
    ] = 0.05,
    skip_unread: SkipUnread = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON for programs.")] = False,
    as_csv: Annotated[
        bool, typer.Option("--csv", help="Print the estimators as CSV, on the metric and as shown.")
    ] = False,
) -> None:
    """Pool the results, apply the published corrections, and look for signs of selection.

    Example: netsize weigh literature.txt --heterogeneity paule-mandel
    """
    import netsize

    if as_json and as_csv:
        raise SettingError("--json and --csv", "choose one of them")
    reading = usable(load(source), skip_unread=skip_unread)
    with waiting("weighing the evidence"):
        weighing = netsize.weigh(
            reading,
            heterogeneity=heterogeneity,
            interval=interval,
            level=level,
            within_sample_correlation=within_sample_correlation,
            dependence=dependence,
            steps=numbers("--steps", steps),
            metric=metric,
            correlation=correlation,
            alpha=alpha,
        )
    if as_json:
        typer.echo(json.dumps(weighing.to_dict(), ensure_ascii=False, allow_nan=False))
    elif as_csv:
        typer.echo(weighing.table().to_csv(index=False, lineterminator="\n"), nl=False)
    else:
        from netsize.presentation.weighing import show_weighing

        show_weighing(weighing)
