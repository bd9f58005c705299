"""A corpus of printed statistics, each with the reading that a careful person would make of it."""

import json
from pathlib import Path

import pytest

from netsize.errors import ReadingError
from netsize.reported import read

LINES = Path(__file__).with_name("corpus.tsv").read_text(encoding="utf-8").splitlines()
CASES = [line.split("\t") for line in LINES if not line.startswith("## ")]
BEFORE = "Earlier work is reviewed elsewhere.\n\n"
AFTER = "\n\nNothing else was found in these data.\n"


def unescaped(text: str) -> str:
    return text.replace("\\n", "\n").replace("\\t", "\t")


def reading_of(text, summary):
    try:
        return summary(read(text))
    except ReadingError:
        return "NOTHING"


def test_corpus_is_large():
    assert len(CASES) >= 250
    assert len({case[0] for case in CASES}) == len(CASES)


@pytest.mark.parametrize(("text", "expected"), CASES)
def test_reads_as_a_careful_person_would(text, expected, summary):
    assert reading_of(unescaped(text), summary) == expected


@pytest.mark.parametrize(
    ("text", "expected"), [c for c in CASES if not c[0].lower().startswith("defaults")]
)
def test_text_before_and_after_changes_nothing(text, expected, summary):
    assert reading_of(BEFORE + unescaped(text) + AFTER, summary) == expected


@pytest.mark.parametrize("text", [c[0] for c in CASES if c[1] != "NOTHING"])
def test_spans_cut_the_original_text(text):
    text = unescaped(text)
    lines = text.split("\n")
    reading = read(text)
    for result in reading.results:
        assert result.text == text[result.span.start : result.span.end]
        assert result.text
        assert text[: result.span.start].count("\n") == result.span.line - 1
    for place in reading.unread:
        assert lines[place.line - 1][place.column - 1 :].startswith(place.text.split("\n")[0])
        assert place.text
        assert place.reason


@pytest.mark.parametrize("text", [c[0] for c in CASES if c[1] != "NOTHING"])
def test_printed_json_reads_back_to_the_same(text):
    reading = read(unescaped(text))
    assert read(json.dumps(reading.to_dict())) == reading
