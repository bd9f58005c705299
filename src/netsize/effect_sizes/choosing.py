"""Which metric to pool on: settled by the user, or by the results where there is no choice."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

from netsize.effect_sizes.forms.base import GIVE_CORRELATION, Form
from netsize.effect_sizes.metrics import METRICS, Metric
from netsize.effect_sizes.settings import Settings
from netsize.errors import EvidenceError

__all__ = ["choose_metric"]

_MOST_ANSWERS = 3
_WORDS = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")


def choose_metric(forms: Sequence[Form], settings: Settings) -> tuple[Metric, tuple[str, ...]]:
    """The metric and, where it was not asked for, a note that says why.

    Raises EvidenceError with one question where results of several metrics are mixed.
    """
    if settings.metric is not None:
        return settings.metric, ()
    deciding = [f for f in forms if not f.adaptable] or list(forms)
    homes = Counter(f.home for f in deciding)
    if len(homes) == 1:
        (name,) = homes
        what = " and ".join(dict.fromkeys(f.kind for f in deciding))
        return METRICS[name], (f"metric {name}: all results are {what}",)
    if set(homes) == {"mean-difference", "difference-score"}:
        metric = METRICS["mean-difference"]
        if all(_reason(f, metric, settings) is None for f in forms):
            note = "metric mean-difference: the within-pair correlation puts all results on it"
            return metric, (note,)
    raise EvidenceError(_question(deciding, homes, settings))


def _reason(form: Form, metric: Metric, settings: Settings) -> str | None:
    """Why a result cannot go on a metric, None where it can."""
    try:
        form.on(settings.on(metric))
    except EvidenceError as error:
        return str(error)
    return None


def _question(forms: Sequence[Form], homes: Counter[str], settings: Settings) -> str:
    """Which scale? One line an answer, the one that keeps most results first."""
    kinds = Counter(f.kind for f in forms)
    mix = _joined([f"{kind} ({_number(count)})" for kind, count in kinds.most_common()])
    answers: list[tuple[int, str]] = []
    for name in homes:
        refused = Counter(f.kind for f in forms if _reason(f, METRICS[name], settings) is not None)
        used = len(forms) - sum(refused.values())
        text = f"--metric {name}: {used} of {len(forms)}"
        if refused:
            text += ", without the " + _joined(list(refused))
        answers.append((used, text))
    answers.sort(key=lambda answer: -answer[0])
    lines = [
        f"the results do not share one scale: {mix}. Which are to be pooled?",
        *(text for _, text in answers[:_MOST_ANSWERS]),
    ]
    if settings.correlation is None and "difference-score" in homes and len(homes) > 1:
        lines.append(f"Paired results join the others by their correlation; {GIVE_CORRELATION}.")
    lines.append("[leave out: REASON] beside a line leaves that one out.")
    return "\n  ".join(lines)


def _number(count: int) -> str:
    return _WORDS[count] if count < len(_WORDS) else str(count)


def _joined(parts: list[str]) -> str:
    return parts[0] if len(parts) == 1 else ", ".join(parts[:-1]) + " and " + parts[-1]
