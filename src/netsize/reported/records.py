"""What a paper printed, as frozen records; no arithmetic here.

A `ReportedResult` holds one test or estimate exactly as it was read, with its place in the text.
Nothing in it is computed: what a value implies is the business of `netsize.effect_sizes`.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any, Literal, TypeAlias

__all__ = [
    "Counts",
    "Family",
    "Group",
    "Interval",
    "LeftOut",
    "Origin",
    "Printed",
    "Reading",
    "Relation",
    "ReportedResult",
    "Span",
    "StudyDesign",
    "Unread",
]

Family: TypeAlias = Literal[
    "t",  # t(df), two groups, paired, one sample; Welch when df is fractional
    "f",  # F(df1, df2)
    "r",  # Pearson or partial correlation
    "z",  # normal test statistic with n (also U and W through their printed z)
    "chi2",  # chi-square(df, N)
    "p",  # a p-value with n and nothing else
    "smd",  # printed d or g with n
    "eta2",  # printed (partial) eta or omega squared or R² change with n and no F
    "means",  # means and SDs per group
    "counts",  # events of n per group (2×2)
    "odds-ratio",  # odds ratio with interval
    "coefficient",  # regression b with SE and df
    "estimate",  # ready-made effect with variance, SE or interval on a named metric
]
Relation: TypeAlias = Literal["=", "<", ">"]
Origin: TypeAlias = Literal["printed", "tag", "default", "assumed"]
StudyDesign: TypeAlias = Literal["two-groups", "paired", "one-sample", "correlation", "factorial"]


@dataclass(frozen=True, slots=True)
class Span:
    """A place in the text: 1-based line and column, and the half-open range text[start:end]."""

    line: int
    column: int
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Printed:
    """A number as printed: its value, its relation (`<` for "p < .05") and printed decimals."""

    value: float
    relation: Relation = "="
    decimals: int | None = None


@dataclass(frozen=True, slots=True)
class Interval:
    """A printed interval at confidence `level` (0.95 unless printed otherwise)."""

    low: float
    high: float
    level: float = 0.95


@dataclass(frozen=True, slots=True)
class Group:
    """Mean, standard deviation and size of one group."""

    mean: float
    sd: float
    n: int


@dataclass(frozen=True, slots=True)
class Counts:
    """Events among n participants of one group."""

    events: int
    n: int


@dataclass(frozen=True, slots=True, kw_only=True)
class ReportedResult:
    """One statistic as a paper printed it.

    Attributes
    ----------
    label : study label, unique in a reading. family : which statistic (see `Family`).
    value : the statistic as printed; None where none is (means, counts, "n.s." alone).
    relation : "=" for a value; "<" or ">" for evidence known only as an inequality ("F < 1").
    decimals : printed decimals of `value`, for checks within rounding.
    df : degrees of freedom as printed, (), (df,) or (df1, df2); may be fractional.
    n : () unknown, (total,) or the group sizes (n1, n2, ...). n_origin : where they come from.
    p : the p-value as printed; "n.s." is read as p > .05.
    tails : 2, or 1 where the paper's test was one-tailed.
    design, design_origin : the study's design and where that comes from; None where neither
        printed, tagged nor implied by the family.
    direction : 1, or -1 where a tag or the paper's words turn the sign: `direction * value` is
        positive in the predicted direction. `[against]` beside a value that is printed negative
        leaves 1, since the value already carries the sign.
    direction_origin : "assumed" where neither a printed sign nor a tag gives it.
    sample, sample_origin : name of the set of participants, and whether a tag or a table gives it
        ("printed") or the label of the line does ("assumed").
    correlation : within-pair correlation of a paired design, where given.
    cut : significance level of that paper, where it is not the usual one.
    groups, counts, interval, standard_error, metric : the parts of families that need them.
    also : further statistics printed for the same test, as (name, number), e.g. ("d", ...);
        they are checked against the statistic, never pooled beside it.
    left_out : the reason the user gave for leaving this result out, or None.
    notes : what the reader had to take as meant, each in words.
    span, text : where it stands and the very characters read.
    """

    label: str
    family: Family
    value: float | None = None
    relation: Relation = "="
    decimals: int | None = None
    df: tuple[float, ...] = ()
    n: tuple[int, ...] = ()
    n_origin: Origin | None = None
    p: Printed | None = None
    tails: Literal[1, 2] = 2
    design: StudyDesign | None = None
    design_origin: Origin = "assumed"
    direction: Literal[1, -1] = 1
    direction_origin: Origin = "assumed"
    sample: str = ""
    sample_origin: Origin = "assumed"
    correlation: float | None = None
    cut: float | None = None
    groups: tuple[Group, ...] = ()
    counts: tuple[Counts, ...] = ()
    interval: Interval | None = None
    standard_error: float | None = None
    metric: str | None = None
    also: tuple[tuple[str, Printed], ...] = ()
    left_out: str | None = None
    notes: tuple[str, ...] = ()
    span: Span = Span(line=1, column=1, start=0, end=0)
    text: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names; `line` and `span` as a program wants them."""
        record = {f.name: _plain(getattr(self, f.name)) for f in fields(self)}
        record["line"] = self.span.line
        record["column"] = self.span.column
        record["span"] = [self.span.start, self.span.end]
        return record


@dataclass(frozen=True, slots=True)
class Unread:
    """A place that looks like a statistic and cannot be used, with the reason and the mend.

    `text` is the faulty part as printed, `context` its line with that part, cut short ("...")
    where the line is long. `harmless` marks what no careful person takes for a result (a quantity
    with its unit, a function of a variable, a word with a number in brackets, the mean of one
    group): it is listed like the others, and does not stop an analysis.
    """

    line: int
    column: int
    text: str
    reason: str
    context: str = ""
    harmless: bool = False

    def to_dict(self) -> dict[str, Any]:
        """Plain JSON types under the field names."""
        return {f.name: getattr(self, f.name) for f in fields(self)}


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A result that was read and does not enter the analysis, with the reason in words."""

    label: str
    reason: str


@dataclass(frozen=True, slots=True)
class Reading:
    """Everything found in one source."""

    results: tuple[ReportedResult, ...]
    unread: tuple[Unread, ...] = ()

    def to_dict(self) -> dict[str, Any]:
        """`results` and `unread` as lists of plain records."""
        return {
            "results": [r.to_dict() for r in self.results],
            "unread": [u.to_dict() for u in self.unread],
        }


def _plain(value: Any) -> Any:
    if isinstance(value, tuple):
        return [_plain(v) for v in value]
    if hasattr(value, "__dataclass_fields__"):
        return {f.name: _plain(getattr(value, f.name)) for f in fields(value)}
    return value
