"""How a `Weighing` reads: its tables and the paragraph that judges them."""

from __future__ import annotations

import math
from collections.abc import Sequence

from netsize.presentation import format as fmt
from netsize.presentation.terminal import Column, show_list, show_table, show_text
from netsize.synthesis.records import Estimate, number_of_results
from netsize.synthesis.weighing import Weighing

__all__ = ["limits", "paragraph", "show_weighing"]

_ESTIMATORS: tuple[Column, ...] = (
    ("estimator", "left"),
    ("estimate", "right"),
    ("interval", "right"),
    ("tau", "right"),
    ("deflated", "right"),
    ("used", "right"),
    ("status", "left"),
)
_DIAGNOSTICS: tuple[Column, ...] = (
    ("sign of selection", "left"),
    ("statistic", "right"),
    ("p", "right"),
    ("finding", "left"),
)
_WITHOUT: tuple[Column, ...] = (
    ("without", "left"),
    ("mean", "right"),
    ("interval", "right"),
    ("weight", "right"),
    ("shift in SE", "right"),
)

# a small p here speaks for selection; right skew and flatness are about whether there is an effect
_SUSPICIOUS = {"regression-asymmetry", "rank-asymmetry", "excess-significance", "selection-ratio"}


def show_weighing(weighing: Weighing) -> None:
    """Print the estimators, the diagnostics, leave-one-out, what is left out, and the paragraph."""
    show_text(_headline(weighing))
    if weighing.pooled.tau2 is not None:
        show_text(_between(weighing))
    show_text("")
    show_table(_ESTIMATORS, [_estimator_row(weighing, e) for e in weighing.estimators])
    show_list("Remarks:", _remarks(weighing))
    show_text("")
    show_table(
        _DIAGNOSTICS,
        [
            [
                d.label,
                f"{d.symbol} = {fmt.effect(d.statistic)}" if d.statistic is not None else "-",
                fmt.p_value(d.p),
                d.finding or d.reason,
            ]
            for d in weighing.diagnostics
        ],
    )
    show_list("What they can and cannot show:", limits(weighing))
    if weighing.leave_one_out:
        show_text("")
        show_table(
            _WITHOUT,
            [
                [
                    w.label,
                    fmt.effect(weighing.shown(w.mean)),
                    fmt.interval(weighing.shown(w.low), weighing.shown(w.high)),
                    fmt.percent(w.share),
                    fmt.effect(w.shift) + (" *" if w.influential else ""),
                ]
                for w in weighing.leave_one_out
            ],
        )
        if any(w.influential for w in weighing.leave_one_out):
            show_text("* moves the mean by more than its standard error")
    show_text("")
    show_text(_judgement(weighing))
    show_list("Assumed:", weighing.notes)
    show_list("Left out:", [f"{x.label}: {x.reason}" for x in weighing.left_out])


def paragraph(weighing: Weighing) -> str:
    """What the estimators agree on, where they disagree and why, and which the plan uses."""
    return f"{_headline(weighing)} {_judgement(weighing)}"


def _judgement(weighing: Weighing) -> str:
    usable = weighing.running
    sentences = []
    if usable:
        sentences += [_agreement(weighing, usable), *_spread(weighing, usable)]
    else:
        sentences.append(
            "No correction can be computed from so little, so nothing here says how far "
            "the effect is inflated."
        )
    sentences.append(
        "The plan uses none of these estimates unless asked to with --corrections; it averages "
        "the exact selection model over what remains uncertain."
    )
    return " ".join(sentences)


def _headline(weighing: Weighing) -> str:
    symbol = weighing.metric.symbol
    pooled = weighing.pooled
    mean = fmt.effect(weighing.shown(pooled.mean))
    interval = fmt.interval(weighing.shown(pooled.low), weighing.shown(pooled.high))
    level = fmt.percent(pooled.level)
    literature = number_of_results(weighing.results)
    if weighing.samples < weighing.results:
        literature += f" from {weighing.samples} sample{'s' if weighing.samples > 1 else ''}"
    if weighing.as_printed is None:
        start = f"{literature}:".capitalize()
    else:
        start = (
            f"As printed the effects average {symbol} = {fmt.effect(weighing.as_printed)} "
            f"({literature});"
        )
    if weighing.results == 1:
        return f"{start} small-sample corrected {mean}, {level} interval {interval}."
    return f"{start} pooled with random effects {mean}, {level} interval {interval}."


def _between(weighing: Weighing) -> str:
    """Heterogeneity in a sentence."""
    pooled = weighing.pooled
    low, high = (None if x is None else math.sqrt(x) for x in (pooled.tau2_low, pooled.tau2_high))
    scale = " on Fisher z" if weighing.metric.name == "fisher-z" else ""
    text = (
        f"Between studies tau{scale} is {fmt.effect(math.sqrt(pooled.tau2 or 0.0))}, "
        f"{fmt.percent(pooled.level)} interval {fmt.interval(low, high)}; "
        f"Q({pooled.used - 1}) = {fmt.effect(pooled.q)}"
    )
    if pooled.i2 is not None:
        text += f", I² = {fmt.percent(pooled.i2)}, H² = {fmt.effect(pooled.h2)}"
    if pooled.prediction_low is None:
        return f"{text}."
    expected = fmt.interval(
        weighing.shown(pooled.prediction_low), weighing.shown(pooled.prediction_high)
    )
    return f"{text}. Without correction a new study's effect would be expected in {expected}."


def _agreement(weighing: Weighing, usable: Sequence[Estimate]) -> str:
    values = [_shown(weighing, e) for e in usable]
    symbol = weighing.metric.symbol
    if len(usable) == 1:
        text = f"The only correction that runs puts it at {symbol} = {fmt.effect(values[0])}"
    else:
        text = (
            f"The {len(usable)} corrections that run put it between {symbol} = "
            f"{fmt.effect(min(values))} and {fmt.effect(max(values))}"
        )
    middle = weighing.middle_deflation
    if middle is not None and len(usable) > 1:
        text += f"; the middle one {_deflated(middle)}"
    text += "."
    if not weighing.metric.signed:
        return text
    return f"{text} {_against_zero(usable)}"


def _against_zero(usable: Sequence[Estimate]) -> str:
    """Whether the intervals exclude an effect of 0, and on which side."""
    above = sum(e.low is not None and e.low > 0 for e in usable)
    below = sum(e.high is not None and e.high < 0 for e in usable)
    total, excluding = len(usable), above + below
    side = ""
    if below:
        side = " against the prediction" if not above else f" ({below} against the prediction)"
    if excluding == 0:
        return (
            "None of their intervals excludes 0."
            if total > 1
            else "Its interval does not exclude 0."
        )
    if total == 1:
        return f"Its interval excludes 0{side}."
    if excluding == total:
        return f"Their intervals all exclude 0{side}."
    verb = "excludes" if excluding == 1 else "exclude"
    return f"{excluding} of their {total} intervals {verb} 0{side}, the others do not."


def _spread(weighing: Weighing, usable: Sequence[Estimate]) -> list[str]:
    """Whether the corrections disagree by more than the pooled interval is wide, and why."""
    values = [_shown(weighing, e) for e in usable]
    reference = weighing.as_printed or weighing.shown(weighing.pooled.mean) or 0.0
    gap = max(values) - min(values)
    apart = len(usable) > 1 and gap > 0.25 * abs(reference)
    reasons = _reasons(weighing)
    sentences = []
    if apart:
        why = f": {'; '.join(reasons)}" if reasons else ""
        sentences.append(
            f"They differ by {fmt.effect(gap)}, too much to pick one by its result{why}."
        )
    elif len(usable) > 1:
        sentences.append("They are close to each other.")
        if reasons:
            sentences.append(f"That is weak comfort: {'; '.join(reasons)}.")
    tested = [d for d in weighing.diagnostics if d.p is not None and d.key in _SUSPICIOUS]
    signs = [d for d in tested if d.p is not None and d.p < 0.1]
    if signs:
        names = _join([_lower(d.label) for d in signs])
        sentences.append(f"Signs of selective printing (p < .10): {names}.")
    return sentences


def _reasons(weighing: Weighing) -> list[str]:
    reasons = []
    if weighing.samples < 10:
        noun = "sample" if weighing.samples < weighing.results else "result"
        if weighing.samples == 1:
            reasons.append(f"a single {noun} is too little for any of these methods")
        else:
            reasons.append(f"{weighing.samples} {noun}s are few for any of these methods")
    if weighing.exact > 0 and weighing.significant == weighing.exact:
        reasons.append(
            "no printed result is non-significant, so how strong the selection was cannot be "
            "learned from them"
        )
    i2 = weighing.pooled.i2
    if i2 is not None and i2 >= 0.5:
        reasons.append(
            f"the effects differ between studies (I² = {fmt.percent(i2)}), which most of the "
            "corrections do not allow for"
        )
    heavy = [w.label for w in weighing.leave_one_out if w.influential]
    if heavy and weighing.samples > 2:
        reasons.append(f"much hangs on {_join(heavy[:3])}")
    return reasons


def _estimator_row(weighing: Weighing, e: Estimate) -> list[str]:
    deflation = weighing.deflation(e)
    tau = None if e.tau2 is None else math.sqrt(e.tau2)
    return [
        e.label,
        fmt.effect(weighing.shown(e.estimate)),
        fmt.interval(weighing.shown(e.low), weighing.shown(e.high)),
        fmt.effect(tau),
        "-" if deflation is None or e.key == "as-printed" else f"{deflation:.0%}",
        str(e.used),
        e.status,
    ]


def _remarks(weighing: Weighing) -> list[str]:
    """The reasons in the rows."""
    return _together([(e.label, x) for e in weighing.estimators for x in e.reason.split("; ") if x])


def limits(weighing: Weighing) -> list[str]:
    """The caution of each diagnostic, with the names of those that it concerns."""
    return _together([(d.label, _lower(d.limits)) for d in weighing.diagnostics if d.limits])


def _together(pairs: Sequence[tuple[str, str]]) -> list[str]:
    """Labels that share a text in front of it, each text once."""
    labels: dict[str, list[str]] = {}
    for label, text in pairs:
        labels.setdefault(text, []).append(label)
    return [f"{', '.join(names)}: {text}" for text, names in labels.items()]


def _lower(sentence: str) -> str:
    return sentence[0].lower() + sentence[1:]


def _deflated(share: float) -> str:
    if share >= 1:
        return "leaves nothing of the printed effect"
    if share < 0:
        return f"is {fmt.percent(-share)} above the printed effect"
    return f"is {fmt.percent(share)} below the printed effect"


def _shown(weighing: Weighing, e: Estimate) -> float:
    value = weighing.shown(e.estimate)
    assert value is not None
    return value


def _join(parts: Sequence[str]) -> str:
    return parts[0] if len(parts) == 1 else ", ".join(parts[:-1]) + " and " + parts[-1]
