r"""Every pattern of the reader, named by what it matches.

The reporting style behind them is that of the behavioural and medical literature (American
Psychological Association, Publication Manual, 7th ed., ch. 6: symbol, degrees of freedom in round
brackets, value, p); notes say where real papers break it. All work on normalised text. No pattern
nests one repetition in another and every repetition is bounded, so matching is linear.
"""

from __future__ import annotations

import re

from netsize.reported.numbers import NUMBER

__all__ = [
    "ABBREVIATION",
    "AGAINST_WORDS",
    "ASSUMPTION_BEFORE",
    "BARE_ARGUMENTS",
    "BARE_INTERVAL",
    "BRACKETS",
    "CHAINED",
    "CONNECTORS",
    "COORDINATE",
    "COUNT_PAIR",
    "CRITICAL_VALUE",
    "DESIGN_WORDS",
    "ESTIMATE_THEN_INTERVAL",
    "HEADS",
    "INTERVAL",
    "LABEL_WITHIN_LINE",
    "LEGEND",
    "LEGEND_RELATION",
    "LEVEL_AFTER",
    "LEVEL_BEFORE",
    "MARKS",
    "MODEL_FIT",
    "NOT_FINITE",
    "NUMBER_HERE",
    "OTHER_HEAD",
    "PERCENT_PAIR",
    "PLAIN_VALUE",
    "PLANNED_BEFORE",
    "POWER",
    "RELATION",
    "SAMPLE_WORDS",
    "SENTENCE_END",
    "SIZES",
    "SIZE_EACH",
    "SOFT_BREAK",
    "START",
    "STRAY_COMMA",
    "TABLE_2X2",
    "TAILS_WORDS",
    "TEST_FOLLOWS",
    "TRAILING",
    "VALUE_WORD",
    "WORD",
    "YEAR",
]

_W = r"[ \t]{0,12}"
_N = r"[0-9]{1,9}(?:[.,][0-9]{1,6})?"

# Symbols at which a statistic may start, with the characters they start with. What follows decides
# whether it is one. Where two share a first character, the longer stands first.
_PERCENT = r"[0-9]{1,3}(?:[.,][0-9]{1,3})?[ ]?%"
_PARTIAL_SQUARED = (
    r"[ _-]?(?:p|G|partial)?[ _-]?(?:\^?2|sq(?:uared?)?\b)(?:[ _]?(?:p|G|partial)\b)?"
)
_ADJUSTED = r"(?:[Aa]dj(?:usted|\.)?[ ])?"
_SYMBOLS = (
    ("tag", "[", r"\["),
    (
        "ci",
        "0123456789",
        r"[0-9]{2}(?:\.[0-9]{1,2})?[ ]?%[ -]?"
        r"(?:CIs?\b|KI\b|IC\b|C\.I\.|[Cc]onfidence[ -][Ii]nterval(?:[ ][\[(]CI[\])])?)",
    ),
    ("ci", "CKI", r"(?:CI|KI|IC|C\.I\.)(?:[ _-]?[0-9]{2}%?)?(?![A-Za-z])"),
    ("table", "2", r"2[ ]?x[ ]?2"),
    (
        "dfafter",
        "0123456789",
        rf"(?:{_N}[ ]and[ ])?{_N}{_W}(?:degrees[ ]of[ ]freedom|d\.f\.|df|DF)(?![\w=])",
    ),
    ("pair", "0123456789", rf"[0-9]{{1,7}}(?:{_W}/{_W}|[ ](?:of|out[ ]of)[ ])[0-9]{{1,7}}"),
    ("plusminus", "0123456789", r"[0-9]{1,9}(?:[.,][0-9]{1,6})?[ ]?(?:±|\+/-)[ ]?[0-9.]{1,9}"),
    ("percent", "0123456789", _PERCENT + r"[ ](?:of|\([nN])"),
    ("chi", "χWXxCc", r"(?:Wald[ '-]{0,2})?(?:χ|[Cc]hi|[Xx])[ -]?(?:\^?2|sq(?:uared?)?\b)"),
    ("wald", "Ww", r"[Ww]ald(?:'s)?(?![\w])"),
    ("r2", "ΔDdRa", r"(?:Δ|[Dd]elta[ -]?|adj(?:usted|\.)?[ ])?R[ ]?\^?2(?:[ _-]?change)?"),
    ("r2", "r", r"r[ ]?\^?2(?=[ ]?[=<>])"),
    # "np2" and "hp2" are what copying ηp² from a PDF often leaves
    (
        "eta",
        "PpGgηωεEeOonh",
        r"(?:[Pp]artial[ -]|[Gg]enerali[sz]ed[ -])?"
        r"(?:η|ω|ε|[Ee]ta|[Oo]mega|[Ee]psilon|[nh](?=p))" + _PARTIAL_SQUARED,
    ),
    (
        "odds",
        "OoaA",
        rf"{_ADJUSTED}(?:[Oo]dds[ ]ratio|[aA]?OR)s?\b(?:[ ]?[(\[][aA]?OR[)\]])?",
    ),
    (
        "ratio",
        "aARrHhI",
        rf"{_ADJUSTED}(?:a?RR|a?HR|IRR|[Rr]isk[ ]ratio|[Rr]elative[ ]risk|"
        r"[Hh]azards?[ ]ratio)\b(?:[ ]?[(\[][a-zA-Z]{1,4}[)\]])?",
    ),
    (
        "padjusted",
        "pPq",
        r"[pP][ _-]?\(?(?:adj|corr|FDR|fdr|FWE|fwe|[bB]onf|[hH]olm|[tT]ukey)"
        r"[a-z]{0,10}\b\)?|q(?=[ ]?[=<])",
    ),
    (
        "plural",
        "tFrzpdgχ",
        r"(?:[tFzpdg]'?s|r'?s(?![ ]?(?:\([0-9]{1,7}\)[ ]?)?=)|χ\^?2'?s)"
        r"(?=[ ]?(?:\([0-9 .,;]{1,20}\)[ ]?)?[<>=])",
    ),
    (
        "p",
        "pP",
        r"[pP](?:[ -]?[vV]alue)?"
        r"(?:[ _]?(?:one|two|1|2)[ -]?(?:tailed|sided|tail))?(?![\w'])",
    ),
    (
        "ns",
        "nN",
        r"[nN]\.[ ]?[sS]\.|[nN][sS](?!\.?[\w'=<>]|[ ]?[=<>])"
        r"|(?:[nN]ot|[nN]on)[ -]?(?:statistically[ ])?significant\b",
    ),
    (
        "size",
        "nN",
        r"[nN](?:[ _]?(?:[0-9]{1,2}|total|tot|[A-Za-z]{1,8}(?=[ ]?=)))?(?=[ ]?[=:])"
        r"|ns(?=[ ]?=)",
    ),
    ("df", "dD", r"(?:df|d\.f\.|DF|[Dd]egrees[ ]of[ ]freedom)(?=[ ]?[=:(])"),
    ("mean", "Mm", r"(?:M|[Mm]eans?)_?[0-9]?(?=[ ]?[=:(]|[ ][0-9])"),
    (
        "sd",
        "Ss",
        r"(?:SDs?|S\.D\.|sd|[Ss]tandard[ ]deviation)_?[0-9]?(?=[ ]?[=:]|[ ][0-9]|[ ]of[ ])",
    ),
    (
        "se",
        "Ss",
        r"(?:SEM?|S\.E\.|se|s\.e\.|[Ss]tandard[ ]error)[ _]?"
        r"(?:[bB0-9]|\([bB]\))?(?=[ ]?[=:]|[ ][0-9])",
    ),
    (
        "smd",
        "CHGdgΔSs",
        r"(?:SMD|[Ss]tandardi[sz]ed[ ]mean[ ]difference)s?\b(?:[ ]?[(\[]SMD[)\]])?|"
        r"(?:Cohen'?s?[ ]|Hedges'?s?[ ]|Glass'?s?[ ])?"
        r"(?:d|g|Δ)_?(?:av|rm|unb|unbiased|[zsp])?(?=[ ]?(?:[=<>:]|of[ ]|was[ ]|\())",
    ),
    ("f2", "Cf", r"(?:Cohen'?s?[ ])?f(?:\^?2)?(?=[ ]?=)"),
    ("phi", "φϕPpCVw", r"(?:φ|ϕ|[Pp]hi|(?:Cram[eé]r'?s?[ ])?V|w)(?=[ ]?=)"),
    ("slope", "bBβ", r"(?:b|B|β|[Bb]eta)_?[0-9]?(?=[ ]?[=:]|[ ]of[ ])"),
    ("rank", "UW", r"[UW](?=[ ]?(?:=|\([0-9]))"),
    ("bayes", "B", r"BF_?[01]{0,2}(?=[ ]?[=<>(])"),
    (
        "r",
        "PpSsrρR",
        r"(?:[Pp]artial[ -]|[Ss]emi-?partial[ -])?"
        r"(?:r_?(?:partial|part|pb|xy|s|p)?|pr|ρ|rho|R)(?![\w'])|r(?=_?\{?[0-9])",
    ),
    (
        "F",
        "FfΔ",
        r"Δ?[ ]?F(?:[12]|[ _-]?change)?(?=[ ]{0,2}[(\[{]|[ -](?:value|ratio|statistic))"
        r"|[Ff](?=[ ]?_?\{?[0-9(\[=<>])",
    ),
    (
        "t",
        "tT",
        r"[tT](?:[ -]test(?=[ ]?\([0-9]{1,6}(?:\.[0-9]{1,4})?\)[ ]?[=<>]))?(?![A-Za-z'])",
    ),
    ("z", "zZ", r"[zZ](?![\w'])"),
)
# "t value of 2.31", "the F-ratio was 5.12"
VALUE_WORD = re.compile(r"[ -](?:values?|statistics?|ratios?)\b")  # fmt: skip
# Any other name with plain numbers in brackets and a relation: best(38) = 2, Q(12) = 34.
_OTHER = (
    r"(?P<other>[^\W\d_]{1,24}(?:['.][^\W\d_]{1,12})?'?(?=[ ]?\([0-9][0-9., ;]{0,20}\)[ ]?[=<>]))"
)

# A symbol is no part of a word or number before it: best(38), at(4), don't(3), x.r, Δt, 12.t
START = re.compile(r"\[|(?<![\w'^/?&@\\])(?<!\w\.)[0-9A-Za-zβΔχηωεφϕρ]")


def _heads() -> dict[str, re.Pattern[str]]:
    """For each first character, one pattern whose last group names the kind of symbol."""
    found: dict[str, list[str]] = {}
    for kind, initials, pattern in _SYMBOLS:
        for initial in initials:
            found.setdefault(initial, []).append(f"(?P<{kind}>{pattern})")
    return {
        initial: re.compile("|".join([*patterns, _OTHER])) for initial, patterns in found.items()
    }


HEADS = _heads()
OTHER_HEAD = re.compile(_OTHER)

# What stands in the brackets after a symbol: (38), [38], {1, 56}, (df = 38), (1, N = 80).
BRACKETS = re.compile(r"\|?[ \t]{0,12}[(\[{]([^()\[\]{}\n]{1,60})[)\]}]\|?")
# Degrees of freedom as lost subscripts: t38, t_38, t_{38}, t 38, F1,56; a relation follows.
BARE_ARGUMENTS = re.compile(
    r"_?[ ]{0,2}\{?([0-9]{1,7}(?:\.[0-9]{1,6})?(?:[ ]?[,;][ ]?[0-9]{1,7}(?:\.[0-9]{1,6})?)?)\}?"
    r"(?=[ ]{0,3}[=<>])"
)
# "=", "<", ">" once or doubled ("= <", "=="), or the word that prose has in its place.
RELATION = re.compile(
    r"[ \t]{0,12}(?:((?::[ ])?[=<>](?:[ ]?[=<>]){0,2}|:(?![/:]))"
    r"|(?:values?[ ])?(of|was|is|equals|equal[ ]to)(?![\w]))"
    r"[ \t]{0,12}"
)
# HR 0.68 (95% CI, 0.51-0.91), OR, 1.85 [1.10-3.10]: as medical journals print estimates
ESTIMATE_THEN_INTERVAL = re.compile(
    r"(?:[ ](?:for|of|in)[ ][A-Za-z -]{1,40}?)?(?:[,:]|[ ](?:was|of|is)(?=[ ]))?[ ]{0,2}"
    rf"(?={NUMBER}[ ]?[,;]?[ ]?(?:[(\[]?[ ]?(?:[0-9]{{2}}(?:\.[0-9]{{1,2}})?[ ]?%[ -]?"
    rf"(?:CI|KI|IC|C\.I|[Cc]onf)|CI)|[(\[]{NUMBER}[ ]?(?:,|;|to|-)[ ]?{NUMBER}[)\]]))"
)
# (38) = 2.31 and (1, 56) < 5.12: a value with a decimal point, closed by something that cannot go
# on with it. Nearly every statistic is of this form and needs none of the patterns below.
PLAIN_VALUE = re.compile(
    r"(?:\(([1-9][0-9]{0,5})(?:,[ ]?([1-9][0-9]{0,5}))?\))?[ ]?([=<>])[ ]?"
    r"(-?[0-9]{0,7}\.[0-9]{1,8})(?=,[ ][A-Za-z]|[;)\n]|[ ]\[[A-Za-z]|\Z)"
)
NUMBER_HERE = re.compile(rf"[ \t]{{0,12}}({NUMBER})")
NOT_FINITE = re.compile(
    r"[-+]?[ ]?(?:nan|inf(?:inity|inite)?|∞|n/?a|missing)(?![\w])", re.IGNORECASE
)
# Stars and daggers of significance, one footnote letter or raised number: 2.31**, .45a, .03^1
MARKS = re.compile(
    r"[ ]?(?:[*†‡§]{1,4}|\^[*†‡§]{1,4})|\^?[a-f](?![\w]|[ ]?=)|\^[0-9a-f]{1,2}(?![\w.])"
)
# What must not follow a value: it would be part of something else.
TRAILING = re.compile(
    r"(?P<digits>[0-9])"
    r"|(?P<broken>[ ]\.[ ]?[0-9]|\.[ \n]{1,12}[0-9])"
    r"|(?P<letter>\.[A-Za-z]|[.,][OoIl][0-9])"
    r"|(?P<list>(?:,[ ]?|[ ])[-+]?[0-9]{0,3}\.[0-9]{1,6}(?![0-9]|[ ]?%)"
    r"|[ ]and[ ][-+]?[0-9]{0,3}\.[0-9]{1,6}(?=[,.;)\n]|\Z))"
    r"|(?P<spaced>[ ][0-9])"
    r"|(?P<stuck>(?!ns\b)[\w^])"
    r"|(?P<more>[.,:/][0-9])"
    r"|[ ]?(?P<percent>%)"
    r"|[ ]?(?P<range>(?:-|to[ ]|±|\+/-|\+-)[ ]?[0-9.])"
    r"|[ ]?(?P<unit>(?:ms|s|sec|secs|seconds?|min|minutes?|h|hours?|days?|weeks?|months?|years?|"
    r"kg|mg|g|m|cm|mm|km|Hz|°C?)(?![\w])(?![ ]?[=<>(]))"
    r"|[ ]?(?P<arithmetic>[+*/x^][ ]?[0-9(]|=)"
)
CHAINED = re.compile(r"[ ]?[<>]")
YEAR = re.compile(r"(?:1[89]|20)[0-9]{2}[a-z]?\Z")

INTERVAL = re.compile(
    rf"[ \t]{{0,4}}[\])]?[,:=]?(?:[ ]?(?:of|was|is|from))?[ ]{{0,2}}[\[({{]?[ ]?({NUMBER})[ ]?"
    rf"(?:,[ ]|;[ ]?|,(?=[-+.0-9])|to[ ]|and[ ]|\.\.|-)[ ]?({NUMBER})[ ]?[\])}}]?"
)
# OR = 1.85 (1.10-3.10), d = 0.5 [0.1, 0.9]: an interval with no word for it
BARE_INTERVAL = re.compile(
    rf"[ ]?(?:\[[ ]?({NUMBER})[ ]?(?:,|;|to|-)[ ]?({NUMBER})[ ]?\]"
    rf"|\([ ]?({NUMBER})[ ]?(?:,[ ]|;|to|-)[ ]?({NUMBER})[ ]?\))"
)
# n = 20; n = 20 and 22; n = 20/22; ns = 20, 22; n = 20 per group
SIZES = re.compile(
    r"[ ]?[=:][ ]?([0-9]{1,3}(?:,[0-9]{3}){1,2}(?![0-9])|[0-9]{1,25}(?:[.,][0-9]{1,25})?)"
    r"(?:(?:[ ]?(?:/|\+|&|and|und|vs\.?|versus)[ ]?|,[ ]?)"
    r"(?=[0-9]{1,7}[ ]?(?:$|[\n;,)\[]))([0-9]{1,7}))?"
    r"(?!\.?[0-9]|[ ]?%)"
)
SIZE_EACH = re.compile(
    r"[ ]?(?:participants?|people|patients|animals|[Ss]s)?[ ]?"
    r"(?:per|each|a|in[ ]each|/)[ ]?(?:group|cell|condition|arm)|[ ]each\b"
)
COUNT_PAIR = re.compile(
    r"([0-9]{1,7})(?:[ ]?/[ ]?|[ ](?:of|out[ ]of)[ ])([0-9]{1,7})(?![0-9/]|[.,][0-9])"
    r"(?:[ ]?\([0-9.,]{1,6}[ ]?%\))?[^0-9\n/]{0,60}?"
    r"\b(?:vs\.?|versus|against|compared[ ](?:with|to))"
    r"[^0-9\n/]{0,60}(?:[0-9.,]{1,6}[ ]?%[ ]?\()?"
    r"([0-9]{1,7})(?:[ ]?/[ ]?|[ ](?:of|out[ ]of)[ ])([0-9]{1,7})(?![0-9/]|[.,][0-9])"
    r"(?:[ ]?\([0-9.,]{1,6}[ ]?%\))?"
)
PERCENT_PAIR = re.compile(
    r"([0-9.,]{1,7})[ ]?%[ ](?:of[ ]|\([nN][ ]?=[ ]?)([0-9]{1,7})\)?[^0-9\n%]{0,60}?\b"
    r"(?:vs\.?|versus|against|compared[ ](?:with|to))[^0-9\n%]{0,60}"
    r"([0-9.,]{1,7})[ ]?%[ ](?:of[ ]|\([nN][ ]?=[ ]?)([0-9]{1,7})\)?"
)
TABLE_2X2 = re.compile(
    r"2[ ]?x[ ]?2(?:[ ](?:table|counts?))?[ ]?[:=]?[ ]?\[{0,2}([0-9]{1,7})[, ][ ]?([0-9]{1,7})\]?"
    r"[ ]?[;/,][ ]?\[?([0-9]{1,7})[, ][ ]?([0-9]{1,7})\]{0,2}"
)

SENTENCE_END = re.compile(r"[.!?][)\]\"']?[ \t]{1,12}(?=[A-Z(\"'])|\n")
ABBREVIATION = re.compile(r"(?:vs|cf|e\.g|i\.e|resp|Exp|Fig|No|approx|al)\.?\Z")
WORD = re.compile(r"[^\W\d_][^\W\d_']{0,30}")
# "; Exp. 3: " or ". Lee et al.: " before a further statistic of a line
LABEL_WITHIN_LINE = re.compile(
    r"[;.|][ \t]{0,12}((?:[^;:.|\n]|(?<=\bal)\.|(?<=\b[A-Z])\.|(?<=\b(?:Exp|Nos|Std|Vol))\."
    r"|(?<=\b(?:Expt|Expe))\.|(?<=\b(?:No|St|Nr))\.){1,80}):[ \t]{0,12}\Z"
)
DESIGN_WORDS = re.compile(
    r"\b(?:(?P<paired>[Pp]aired|[Dd]ependent|[Ww]ithin[ -]?subjects?|[Mm]atched|"
    r"[Rr]epeated[ -]?measures)"
    r"|(?P<one>[Oo]ne[ -]?sample|[Ss]ingle[ -]?sample)"
    r"|(?P<two>[Ii]ndependent|[Tt]wo[ -]?sample|[Bb]etween[ -]?subjects?|[Uu]npaired|Welch(?:'s)?))"
    r"(?:[ -]?(?:samples?|groups?|means))?(?:[ -]Student(?:'s)?)?"
    r"(?:[ -](?:t[ -]?tests?|ANOVAs?|analysis[ ]of[ ]variance)\b[^.;:\n]{0,60})?[ :,(-]{0,3}\Z"
)
TAILS_WORDS = re.compile(
    r"(?<![0-9.])(?<![A-OQ-Za-oq-z])(one|1|two|2)[ -]?(?:tailed|sided|tail)\b", re.IGNORECASE
)
# A level of significance is no result: alpha was p < .05; p < .05 was considered significant.
LEVEL_BEFORE = re.compile(
    r"(?:\balpha|α|threshold|criterion|significance[ ]level|level[ ]of[ ]significance|"
    r"significant[ ](?:if|when)|set[ ]at)[^.;:,]{0,25}\Z"
)
# "* p < .05" under a table says what the stars mean
LEGEND = re.compile(r"(?:^|[^0-9*†‡§+^)][ ]?|\n)(?:[*†‡§+]|\^[*†‡§+a-f]){1,4}[ ]?\Z")
LEGEND_RELATION = re.compile(r"[ ]?[<>]")
LEVEL_AFTER = re.compile(
    r"[ ](?:was|were|is|are)[ ](?:considered|taken|used|set|regarded|deemed|chosen)"
)
CRITICAL_VALUE = re.compile(r"\bcritical[ ](?:values?|[tFrz]\b|χ)")
# z as the third of x, y, z: a place in the brain or in a room
POWER = re.compile(r"1[ ]?-[ ]?\Z")  # 1 - β is power, no coefficient
COORDINATE = re.compile(r"\b[yY][ ]?(?:=[ ]?-?[0-9.]{1,6}[ ]?)?(?:mm)?[,;][ ]?(?:and[ ])?\Z")
# tests of what a test presupposes, or of the fit of a model, are no results of a study
ASSUMPTION_BEFORE = re.compile(
    r"\b(?:Levene|Mauchly|Shapiro|Kolmogorov|Bartlett|Brown-Forsythe|Box's[ ]M|Hosmer)"
    r"(?:(?![.!?][ \n]{1,3}[A-Z]|;)[\s\S]){0,90}\Z"
)
# t(38), = 2.31
STRAY_COMMA = re.compile(r",[ ]?=?(?=[ ]?-?[0-9]{0,4}\.[0-9]{1,6}(?:[,;)\n]|\Z))")
PLANNED_BEFORE = re.compile(
    r"(?:[Pp]ower[ ]analys[ie]s|%[ ]power|statistical[ ]power|"
    r"power(?:ed)?[ ](?:of|to|for)\b|"
    r"to[ ]detect|[Dd]etectable|[Ss]mallest[ ]effect|[Ss]ensitivity[ ]analysis|a[ ]priori)"
    r"(?:(?![.!?][ \n]{1,3}[A-Z])[\s\S]){0,100}\Z"
)
# "one-tailed t(40)": the words belong to what follows
TEST_FOLLOWS = re.compile(r"[ ]?(?:[a-z-]{1,14}[ ]){0,2}[tFrzpP][ ]?[(=<>0-9]")
MODEL_FIT = re.compile(r"\b(?:RMSEA|CFI|TLI|SRMR)\b")
AGAINST_WORDS = re.compile(
    r"(?:contrary|opposite)[ ](?:to[ ])?(?:what[ ](?:was|we)[ ])?(?:the[ ]|our[ ])?"
    r"(?:prediction|predicted|hypothes|expectation|expected)"
    r"|opposite[ ](?:direction|sign)|against[ ](?:the[ ]|our[ ])?(?:prediction|hypothes)"
)
# Words that may stand between a test and a further statistic of the same test.
SAMPLE_WORDS = frozenset(
    (
        *("in", "for", "from", "based", "on", "sample", "whole", "total", "full", "participants"),
        *("people", "patients", "group", "groups", "condition", "conditions", "per", "our", "this"),
        *("each", "all", "vs", "versus", "respectively", "control", "treatment", "men", "women"),
    )
)
CONNECTORS = frozenset(
    [
        "and",
        "with",
        "an",
        "a",
        "of",
        "the",
        "effect",
        "size",
        "sizes",
        "cohen's",
        "hedges'",
        "hedges",
        "g's",
        "glass's",
        "corresponding",
        "to",
        "two",
        "one",
        "tailed",
        "sided",
        "corrected",
        "uncorrected",
        "adjusted",
        "bonferroni",
        "i.e",
        "ie",
        "or",
        "equivalent",
        "which",
        "is",
        "was",
        "small",
        "medium",
        "large",
        "associated",
        "partial",
        "correlation",
        "pearson's",
        "pearson",
        "ci",
        "confidence",
        "interval",
        "test",
        "independent",
        "samples",
        "sample",
        "p",
        "t",
        "f",
        "mse",
        "standard",
        "error",
        "welch",
        "student's",
    ]
)

# A line break inside a statistic or a sentence; the next line goes on with it.
_STARTS_OWN = (
    r"(?:[-•*]?[ ]?[tTFfrRzZUWb](?:[12_]?[ ]?[=<>(\[{]|[ _]?[0-9])"
    r"|χ|[Cc]hi|X\^?2|[Pp]artial|OR|M[ ]?=|#|\["
    r"|[^\n:=]{1,80}:[ ]|(?:[A-Za-z]{1,20}[ -]){0,3}[tTFrzZ][ ]?\([0-9])"
)
# Every alternative starts with the line break itself, which is quick to find in a long text.
SOFT_BREAK = re.compile(
    r"\n(?:(?:(?<=[=<>({]\n)|(?<=[=<>({][ ]\n))(?=[ \t]{0,20}\S)"
    r"|(?<=[=<>(\[][ ]-\n)(?=[ \t]{0,20}[0-9.])"
    rf"|(?:(?<=[,;]\n)|(?<=[,;][ ]\n))(?=[ \t]{{0,20}}(?!{_STARTS_OWN})\S)"
    r"|(?=[ \t]{0,20}(?:\)|[=<>][ ]?[<>]?[ ]?-?[0-9.]))"
    r"|(?<=\b[tTFrzZpPdgN]\n)(?=[ \t]{0,20}[(\[=<0-9])"
    r"|(?<=[0-9)*]\n)(?=(?:[pP]|d|g|Cohen's[ ]d)[ ]?[=<>][ ]?[<]?[ ]?-?[0-9.,]{1,8}"
    r"[ \t]{0,9}(?:\n|\Z))"
    rf"|(?<=[a-z']{{3}}\n)(?=[ \t]{{0,20}}(?!{_STARTS_OWN})[a-z]{{2,20}}[, ])"
    r"|(?<=[ \n](?:and|was|for)\n)(?=[ \t]{0,20}[a-zA-Z0-9]))"
)
