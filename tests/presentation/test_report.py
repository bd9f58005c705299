"""The page, Markdown and JSON of a document: safe, well formed, and in agreement."""

import importlib
import json
import math
import re
from html.parser import HTMLParser

import pytest

import netsize
from netsize.errors import ReadingError
from netsize.presentation.figures import draw
from netsize.presentation.report import checking, citing, files
from netsize.presentation.report.cells import text_of
from netsize.presentation.report.codec import decode, encode
from netsize.presentation.report.content import Document, Picture, Table
from netsize.presentation.report.html import page
from netsize.presentation.report.markdown import markdown
from netsize.presentation.report.text import markdown_text, visible

CASES = {
    "finite": {},
    "no-finite-size": {},
    "f-tests": {},
    "correlations": {"goal": "budget", "at_most": 250, "cost_per": 2, "fixed_cost": 10},
    "one": {"goal": "precision", "half_width": 0.2, "loss": 0.1},
    "inequalities": {"rule": "fixed", "planning_effect": 0.4, "sides": 1},
}
NUMBER = re.compile(r"(?<![\w.,-])-?(?:\d{1,3}(?:,\d{3})+|\d*)(?:\.\d+|(?<=\d))%?(?![\w,]*\d)")
VOID = {"meta", "br", "img", "link", "input"}


class Page(HTMLParser):
    """The elements of a page with their attributes, and its text by section."""

    def __init__(self, text):
        super().__init__(convert_charrefs=True)
        self.elements, self.open, self.section, self.texts = [], [], "", {}
        self.feed(text)
        assert not self.open, "an element was left open"

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)
        if tag == "section":
            self.section = dict(attrs)["id"]

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.open.pop() == tag
        if tag == "section":
            self.section = ""

    def handle_data(self, data):
        if "style" not in self.open:
            self.texts[self.section] = self.texts.get(self.section, "") + data + " "


@pytest.fixture(params=CASES)
def document(request, documents):
    return documents(request.param, **CASES[request.param])


def test_page_is_well_formed_and_speaks_to_everyone(document):
    found = Page(page(document))
    tags = [tag for tag, _ in found.elements]
    ids = [a["id"] for _, a in found.elements if "id" in a]
    assert len(ids) == len(set(ids))
    for _, attributes in found.elements:
        for name in ("aria-labelledby",):
            for target in attributes.get(name, "").split():
                assert target in ids
        if attributes.get("href", "").startswith("#"):
            assert attributes["href"][1:] in ids
    assert tags.count("h1") == 1
    assert tags.count("section") == len(document.sections) == tags.count("h2")
    assert tags.count("table") == tags.count("caption") == tags.count("thead")
    assert all(a.get("scope") in ("col", "row") for tag, a in found.elements if tag == "th")
    drawings = [a for tag, a in found.elements if tag == "svg"]
    assert len(drawings) == 6 if document.numbers["weighing"] else 5
    assert all(a["role"] == "img" and a["aria-labelledby"] for a in drawings)
    assert tags.count("desc") == len(drawings)


def test_page_loads_nothing_and_runs_nothing(document, hostile_document):
    for each in (document, hostile_document):
        found = Page(page(each))
        assert not {"script", "img", "iframe", "object", "link", "form"} & {
            tag for tag, _ in found.elements
        }
        for _, attributes in found.elements:
            assert not any(name.startswith("on") for name in attributes)
            for name in ("src", "href", "xlink:href"):
                assert attributes.get(name, "#").startswith("#")
        assert "url(" not in re.sub(r"url\(#[\w-]+\)", "", page(each))
        assert "@import" not in page(each)


def test_hostile_labels_are_only_text(hostile_document):
    found = Page(page(hostile_document))
    text = "".join(found.texts.values())
    assert "<script>alert(1)</script>" in text
    assert "</svg><img src=x onerror=alert(1)>" in text
    assert not set("\u202a\u202b\u202d\u202e\u2066\u2067\u2068\u200f") & set(page(hostile_document))
    assert "x" * 5000 in text


def test_hostile_labels_make_no_markdown(hostile_document):
    """Common practice: in CommonMark a tag needs "<", a link "](", a table cell ends at "|"."""
    text = markdown(hostile_document)
    assert "<" not in text
    assert not re.search(r"(?<!\\)\]\(", text)
    for line in text.splitlines():
        if line.startswith("| "):
            assert line.endswith(" |")
    assert "\u202e" not in text
    results = hostile_document.tables()["results"]
    rows = [line for line in text.splitlines() if line.startswith("| ")]
    bars = [len(re.findall(r"(?<!\\)\|", row)) for row in rows]
    assert bars.count(len(results.columns) + 1) >= len(results.rows)


@pytest.mark.parametrize(
    ("text", "made"),
    [
        ("- item", "\\- item"),
        ("1. item", "1\\. item"),
        ("# head", "\\# head"),
        ("a\n\nb", "a b"),
        ("-0.15", "-0.15"),
        ("a_b*c", "a\\_b\\*c"),
        ("<b>&", "&lt;b&gt;&amp;"),
    ],
)
def test_markdown_text(text, made):
    assert markdown_text(text) == made


def test_visible_keeps_letters_of_every_script():
    assert visible("ünï 漢字 עברית العربية 👩‍🔬") == "ünï 漢字 עברית العربية 👩‍🔬"
    assert visible("a\x00b\ud800") == "a\ufffdb?"


def test_tables_of_page_and_markdown_hold_the_same_cells(document):
    text = markdown(document)
    shown = Page(page(document))
    everything = " ".join(" ".join(shown.texts.values()).split())
    for table in document.tables().values():
        for row in table.rows:
            for column, cell in zip(table.columns, row, strict=True):
                words = text_of(column.kind, cell)
                assert " ".join(words.split()) in everything
                assert markdown_text(words) in text


def test_json_and_table_agree(document):
    rows = document.numbers["plan"]["rows"]
    table = document.tables()["readings"]
    assert len(rows) == len(table.rows)
    for record, row in zip(rows, table.rows, strict=True):
        cells = dict(zip([c.title for c in table.columns], row, strict=True))
        assert cells[document.numbers["plan"]["evidence"]["shown_as"]] == record["effect"]
        total = record["n_total"]
        assert cells["n total"] == (total if total is not None else "none") or (
            total is None and record["effect"] is None
        )


def test_every_number_of_the_justification_stands_in_the_page(document):
    """Apart from years of publications, names and 95% of intervals."""
    found = Page(page(document))
    prose = found.texts.pop("justification")
    others = " ".join(found.texts.values())
    others = set(NUMBER.findall(others.replace("[", " ").replace("]", " ")))
    years = re.compile(r"\b(?:Hedges 1992; Vevea & Hedges 1995)")
    prose = years.sub("", prose).replace("[", " ").replace("]", " ")
    spelled = {"80%": "0.8", "90%": "0.9", "95%": "0.95"}
    missing = []
    for number in NUMBER.findall(prose):
        value = number.rstrip("%")
        as_probability = f"{float(value.replace(',', '')) / 100:.2f}".removeprefix("0")
        candidates = {number, spelled.get(number, number)}
        if number.endswith("%"):
            candidates |= {as_probability, as_probability.rstrip("0")}
        if not candidates & others:
            missing.append(number)
    counted = {str(n) for n in _counts(document)}
    assert [n for n in missing if n not in counted] == []


def _counts(document):
    """Numbers of rows that the prose states: variations, samples, corrections, results."""
    tables = document.tables()
    for key in ("sensitivity", "leave-one-out", "estimators", "results"):
        if key in tables:
            yield from range(len(tables[key].rows) + 1)


def test_figures_and_tables_agree(document):
    """Numbers written into the drawings stand in a table of the page."""
    found = Page(page(document))
    cells = {
        word
        for table in document.tables().values()
        for row in table.rows
        for column, cell in zip(table.columns, row, strict=True)
        for word in NUMBER.findall(text_of(column.kind, cell).replace("[", " ").replace("]", " "))
    }
    assert found
    pictures = {
        block.key: block
        for section in document.sections
        for block in section.blocks
        if isinstance(block, Picture)
    }
    # effects in two figures, participants in the third
    for key, pattern in (
        ("evidence", r"(?<=\s)-?\d+\.\d+"),
        ("planning-distribution", r"(?<=\s)-?\d+\.\d+"),
        ("sizes", r"(?<=\s)[\d,]+$"),
    ):
        for text in draw(pictures[key].shown).axes[0].texts:
            words = re.sub(r"P\(.*", "", text.get_text()).replace("[", " ").replace("]", " ")
            for number in re.findall(pattern, words.rstrip()):
                assert number in cells, (key, text.get_text())


def test_json_makes_the_same_page_without_computing(document, tmp_path, monkeypatch):
    path = tmp_path / "report.json"
    files.write_document(document, str(path))
    planning = importlib.import_module("netsize.planning.plan")
    monkeypatch.setattr(planning, "gather", None)  # nothing can be fitted any more
    again = files.load_document(str(path))
    assert again == document
    assert page(again) == page(document)
    assert markdown(again) == markdown(document)


def test_json_is_strict_and_carries_its_schema(document, tmp_path):
    files.write_document(document, str(tmp_path / "report.json"))
    record = json.loads(
        (tmp_path / "report.json").read_bytes(), parse_constant=lambda name: pytest.fail(name)
    )
    assert record["is"] == "netsize report"
    assert record["schema"] == 1
    assert record["version"] == netsize.__version__


@pytest.mark.parametrize("name", ["finite", "no-finite-size", "correlations"])
def test_recomputing_finds_nothing_else(name, documents):
    document = documents(name, **CASES[name])
    assert checking.differences(decode(Document, json.loads(files.to_json(document)))) == []


def test_recomputing_finds_what_was_changed(documents):
    record = encode(documents("one", **CASES["one"]))
    record["numbers"]["plan"]["rows"][0]["effect"] *= 1.01
    record["answer"] = "Plan for 12 participants."
    found = checking.differences(decode(Document, record))
    assert len(found) == 2
    assert found[0].startswith("answer: 'Plan for 12 participants.'")
    assert "numbers.plan.rows[as-printed].effect" in found[1]


def test_recomputing_sees_changed_results(documents):
    record = encode(documents("one", **CASES["one"]))
    record["input"]["results"][0]["value"] = 2.5
    found = checking.differences(decode(Document, record))
    assert found[0] == "the results are not those that the digest was taken of"
    assert len(found) > 10


def _spoil(record, change):
    change(record)
    return record


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (lambda r: r.update(schema=99), "schema is 99"),
        (lambda r: r.update({"is": "other"}), "not a report"),
        (lambda r: r.pop("sections"), "lacks the fields: sections"),
        (lambda r: r.update(surprise=1), "unknown fields: surprise"),
        (lambda r: r["sections"][0]["blocks"][0].update({"is": "Script"}), "Script"),
        (lambda r: r["sections"][0].update(heading=3), "heading should be a text, not 3"),
        (lambda r: r["sections"][0].update(blocks={}), "should be a list"),
    ],
)
def test_files_that_are_no_report_are_refused(documents, tmp_path, change, message):
    record = json.loads(files.to_json(documents("finite")))
    path = tmp_path / "spoilt.json"
    path.write_text(json.dumps(_spoil(record, change)), encoding="utf-8")
    with pytest.raises(ReadingError, match=re.escape(message)):
        files.load_document(str(path))


def test_a_figure_with_absurd_numbers_is_refused(documents, tmp_path):
    record = json.loads(files.to_json(documents("finite")))
    for section in record["sections"]:
        for block in section["blocks"]:
            if block["is"] == "Picture" and block["key"] == "sizes":
                block["shown"]["curve"]["n_total"] = [0]
    with pytest.raises(ReadingError, match="cannot be drawn"):
        page(decode(Document, record))


def test_numbers_that_json_lacks_survive():
    table = Table(
        key="k", caption="c", columns=(), rows=(("a", -math.inf, (0.5, math.inf), (1, 2), None, 7),)
    )
    again = decode(Table, json.loads(json.dumps(encode(table), allow_nan=False)))
    assert again == table


@pytest.mark.parametrize("name", ["read", "effects", "weigh", "plan"])
def test_notebooks_show_tables_with_escaped_labels(name):
    shown = getattr(netsize, name)("<b>Lab</b>: t(38) = 2.31\nLab 2: t(50) = 2.6")._repr_html_()
    assert "<b>Lab" not in shown
    assert "<table" in shown
    if name in ("read", "effects"):
        assert "&lt;b&gt;Lab&lt;/b&gt;" in shown


def test_every_condition_of_citing_names_a_source():
    """A source renamed in the list of sources would otherwise be cited in every report."""
    keys = {source.key for source in netsize.sources()}
    assert set(citing.CONDITIONS) <= keys


def test_cites_what_enters(documents):
    def cited(name):
        section = next(s for s in documents(name, **CASES[name]).sections if s.key == "methods")
        return " ".join(section.blocks[0].items)

    assert "Olkin, I., & Pratt" in cited("correlations")
    assert "Olkin, I., & Pratt" not in cited("finite")
    assert "Composites of several results" in cited("finite")
    assert "Composites of several results" not in cited("f-tests")


@pytest.mark.parametrize(
    ("text", "choices"),
    [
        ("χ2(2, N = 120) = 7.3\nχ2(2, N = 200) = 9.1", {}),
        ("F(2, 57) = 5.0\nF(2, 87) = 4.1", {"design": "factorial", "df1": 2, "cells": 6}),
        ("F(2, 57) = 5.0\nF(2, 87) = 4.1", {"design": "regression", "added_terms": 2}),
        ("F(2, 57) = 5.0\nF(2, 87) = 4.1", {"design": "repeated", "occasions": 3}),
        ("t(20) = 2.9 [one-sample]\nt(30) = 3.3 [one-sample]", {}),
    ],
)
def test_every_design_that_can_be_planned_can_be_reported(text, choices):
    assert netsize.report(text, **choices).sections
