"""Columns that a table may have: plain trade terms, each with what it holds."""

from __future__ import annotations

import re
from dataclasses import dataclass
from difflib import get_close_matches

__all__ = ["COLUMNS", "PASSED_OVER", "Column", "column_named", "template", "unknown_column"]


@dataclass(frozen=True, slots=True)
class Column:
    """One column: `name` as the template spells it, other spellings, and its meaning.

    `evidence` marks columns that can hold a statistic; a table needs at least one.
    """

    name: str
    meaning: str
    spellings: tuple[str, ...] = ()
    evidence: bool = False


def _column(name: str, meaning: str, spellings: str = "", *, evidence: bool = False) -> Column:
    return Column(name, meaning, tuple(s for s in spellings.split("|") if s), evidence)


COLUMNS = (
    _column("label", "study label", "study|paper|experiment|source|reference|study label|id"),
    _column("result", "statistic as printed, such as t(38) = 2.31, p = .026",
            "statistic|statistics|result as printed|as printed|reported", evidence=True),
    _column("t", "value of t", "t value|t statistic", evidence=True),
    _column("F", "value of F", "f value|f statistic", evidence=True),
    _column("r", "correlation", "pearson r|correlation coefficient", evidence=True),
    _column("z", "value of z", "z value|z statistic", evidence=True),
    _column("chi2", "value of chi-square", "χ2|χ^2|x2|chi square|chi squared|chisq", evidence=True),
    _column("df", "degrees of freedom; two for F, as 1, 56", "degrees of freedom|error df"),
    _column("df1", "numerator df of F", "df numerator|numerator df|df effect"),
    _column("df2", "denominator df of F", "df denominator|denominator df|df error"),
    _column("n", "participants in all", "n total|total n|sample size|participants"),
    _column("n1", "size of group 1", "n 1|n group 1"),
    _column("n2", "size of group 2", "n 2|n group 2"),
    _column("n per group", "size of each group", "n each|n group|group size"),
    _column("p", "p as printed, such as .026, < .05 or n.s.", "p value", evidence=True),
    _column("d", "printed d", "cohen's d|cohens d|cohen d", evidence=True),
    _column("g", "printed g", "hedges g|hedges' g|hedges's g", evidence=True),
    _column("partial eta2", "printed partial eta squared",
            "partial eta squared|partial η2|ηp2|η2p|ηp^2|η^2p|partial η^2", evidence=True),
    _column("eta2", "printed eta squared", "eta squared|η2|η^2", evidence=True),
    _column("omega2", "printed omega squared", "omega squared|ω2|ω^2", evidence=True),
    _column("mean1", "mean of group 1", "mean 1|m1|m 1", evidence=True),
    _column("sd1", "SD of group 1", "sd 1"),
    _column("mean2", "mean of group 2", "mean 2|m2|m 2"),
    _column("sd2", "SD of group 2", "sd 2"),
    _column("events1", "events in group 1", "events 1", evidence=True),
    _column("events2", "events in group 2", "events 2"),
    _column("odds ratio", "odds ratio, with low and high", "or", evidence=True),
    _column("b", "regression coefficient, with its se and df", "slope|coefficient", evidence=True),
    _column("effect", "ready-made estimate on the metric named in metric, with its variance, se "
            "or low and high", "estimate|effect size", evidence=True),
    _column("metric", "mean-difference, difference-score, fisher-z, cohen-f or log-ratio", "scale"),
    _column("variance", "variance of effect", "var|v"),
    _column("se", "standard error of effect or b", "standard error|std error"),
    _column("low", "lower end of the interval", "ci low|lower|ci lower|lower limit|lower ci"),
    _column("high", "upper end of the interval", "ci high|upper|ci upper|upper limit|upper ci"),
    _column("level", "level of the interval, 95 unless given", "ci level|confidence level"),
    _column("design", "two-groups, paired, one-sample or correlation", "study design"),
    _column("direction", "as predicted (the default) or against", "sign"),
    _column("tails", "2 (the default) or 1", "sides|tailed"),
    _column("within-pair r", "correlation of the paired scores", "within pair correlation|pair r"),
    _column("sample", "name of the set of participants, where rows share one", "cohort"),
    _column("cut", "significance level of that paper", "cut point|alpha|α"),
    _column("leave out", "reason for not using the row", "left out|exclude|omit"),
    _column("settings", "any settings in square brackets", "setting|tags"),
    _column("notes", "anything; not read", "note|comment|comments|remark|remarks|year|doi|page|"
            "pages|url|authors|author|title|journal|country"),
)  # fmt: skip
PASSED_OVER = "notes"

_BY_SPELLING = {
    spelling: column
    for column in COLUMNS
    for spelling in (column.name.replace("-", " "), *column.spellings)
}


def column_named(cell: str) -> Column | None:
    """The column that a header cell names, or None. Case does not matter, except for F."""
    text = re.sub(r"[\s_.*-]+", " ", cell).strip()
    if text == "f":
        return None  # Cohen's f or the statistic
    if text != "F":
        text = text.lower()
    return _BY_SPELLING.get(text)


def unknown_column(cell: str) -> str:
    """Why a header cell is not understood, with the nearest name and all known ones."""
    close = get_close_matches(cell.lower(), list(_BY_SPELLING), n=1, cutoff=0.7)
    meant = f' Did you mean "{close[0]}"?' if close else ""
    known = ", ".join(c.name for c in COLUMNS)
    return (
        f'unknown column "{cell[:40]}", which is not read.{meant} Known: {known}; '
        f'call it "{PASSED_OVER}" to have it passed over'
    )


def template() -> str:
    """An empty table: a line of explanation for each column, then the header."""
    width = max(len(c.name) for c in COLUMNS)
    lines = [
        "# A table for netsize. Fill a row for each result; leave cells empty, delete columns you",
        '# do not need. Lines that start with "#" are not read.',
        "#",
        *(f"# {c.name.ljust(width)}  {c.meaning}" for c in COLUMNS),
        ",".join(c.name for c in COLUMNS),
    ]
    return "\n".join(lines) + "\n"
