"""Files of every kind: read, or refused in words that say how to mend it."""

import json

import pytest

from netsize.errors import ReadingError
from netsize.reported import read
from netsize.reported.columns import COLUMNS, template
from netsize.reported.files import decode, read_file

LINE = "A: t(38) = 2.31, p = .026"


def refused(path):
    with pytest.raises(ReadingError) as caught:
        read_file(path)
    return str(caught.value)


def written(tmp_path, content, name="input.txt"):
    path = tmp_path / name
    path.write_bytes(content)
    return path


@pytest.mark.parametrize(
    "content",
    [
        LINE.encode(),
        LINE.encode("utf-8-sig"),
        LINE.encode("utf-16"),
        b"\r\n" + LINE.encode() + b"\r\n",
        LINE.replace("-", "−").encode(),
        b"label,t,df,p\nA,2.31,38,.026",
        b"\xef\xbb\xbflabel;t;df;p\r\nA;2,31;38;0,026\r\n",
    ],
)
def test_text_files(tmp_path, content):
    (result,) = read_file(written(tmp_path, content)).results
    assert (result.label, result.value, result.df) == ("A", 2.31, (38.0,))
    assert result.p.value == 0.026


@pytest.mark.parametrize(
    ("content", "says"),
    [
        (b"", "empty"),
        (b" \n\n", "empty"),
        (b"\xef\xbb\xbf", "empty"),
        (b"nothing of the kind", "Expected lines such as"),
        (b"A: t(38) = 2.31\x00\x01", "binary"),
        (b"%PDF-1.7 ...", "PDF"),
        (b"\xd0\xcf\x11\xe0 old", "save it as .xlsx"),
        (b"\x89PNG\r\n", "image"),
        (b"PK\x03\x04 not really", "archive"),
        ("A: t(38) = 2.31\nÉ: t(38) = 2".encode("latin-1"), "line 2, byte 1"),
        (b"label,t,df\n", "no rows"),
        (b'{"results": [', "line 1, column"),
    ],
)
def test_refused_files(tmp_path, content, says):
    assert says in refused(written(tmp_path, content))


def test_refused_paths(tmp_path, monkeypatch):
    assert "there is no file" in refused(tmp_path / "none.txt")
    assert "directory" in refused(tmp_path)
    assert refused("bad\x00name")
    monkeypatch.setattr("netsize.reported.files.LARGEST_FILE", 10)
    assert "MB" in refused(written(tmp_path, LINE.encode()))


def test_workbook(tmp_path):
    openpyxl = pytest.importorskip("openpyxl")
    book = openpyxl.Workbook()
    book.active.append(["study", "t", "df", "p", "n1", "n2", "notes"])
    book.active.append(["A", 2.31, 38, 0.026, 20, 20, "two\nlines"])
    book.active.append(["B", "2,5", 40, "< .05", None, None, None])
    path = tmp_path / "book.xlsx"
    book.save(path)
    first, second = read_file(path).results
    assert (first.value, first.df, first.n, first.p.value) == (2.31, (38.0,), (20, 20), 0.026)
    assert (second.label, second.value, second.p.relation) == ("B", 2.5, "<")
    book.create_sheet("more").append(["study", "r"])
    book.save(path)
    assert "2 filled sheets (Sheet, more)" in refused(path)


def test_workbook_without_the_library(tmp_path, monkeypatch):
    openpyxl = pytest.importorskip("openpyxl")
    path = tmp_path / "book.xlsx"
    openpyxl.Workbook().save(path)
    assert "no filled sheet" in refused(path)
    monkeypatch.setitem(__import__("sys").modules, "openpyxl", None)
    assert "netsize[excel]" in refused(path)


def test_decode_names_its_source():
    with pytest.raises(ReadingError, match="the input is a binary file"):
        decode(b"\x00", "the input")


def test_template_explains_every_column_and_takes_a_row():
    empty = template()
    header = empty.splitlines()[-1].split(",")
    assert header == [c.name for c in COLUMNS]
    assert all(c.meaning in empty for c in COLUMNS)
    with pytest.raises(ReadingError, match="no rows"):
        read(empty)
    cells = {"label": "A", "t": "2.31", "df": "38"}
    (result,) = read(empty + ",".join(cells.get(name, "") for name in header)).results
    assert (result.label, result.value, result.df) == ("A", 2.31, (38.0,))


GOOD = read(LINE + ", d = 0.73, n = 20, 20 [sample X]").to_dict()


def changed(**fields):
    return json.dumps({**GOOD, "results": [{**GOOD["results"][0], **fields}]})


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ('{"rows": []}', "results"),
        ('[{"label": "A"}]', "results"),
        ('{"results": []}', "empty"),
        ('{"results": [3]}', "results[0] is not an object"),
        ('{"results": [{"label": "A"}]}', 'lacks "family"'),
        (changed(colour="red"), "unknown fields: colour"),
        (changed(family="q"), '"family"'),
        (changed(value="2"), '"value"'),
        (changed(value=float("nan")), "not a number"),
        (changed(value=True), "not a number"),
        (changed(df=[0]), "df must be above 0"),
        (changed(n=[20.5]), "not a whole number"),
        (changed(n=[0, 20]), "n must be at least 1"),
        (changed(p={"value": 2, "relation": "=", "decimals": 0}), "p = 2"),
        (changed(p={"value": 0.5}), "relation"),
        (changed(p=0.5), "results[0]"),
        (changed(tails=3), '"tails"'),
        (changed(direction=0), '"direction"'),
        (changed(span=[1]), "results[0]"),
        (changed(family="r", value=1.0), "r = 1"),
        (changed(family="f", value=-1.0), "f = -1"),
        ('{"results": [], "unread": [{"line": 1}]}', "unread[0]"),
        ('{"results": ' + "[" * 100_000, "nested too deeply"),
    ],
)
def test_refused_json(text, says):
    with pytest.raises(ReadingError) as caught:
        read(text)
    assert says in str(caught.value)


def test_json_with_the_check_beside_it_reads_back():
    assert read(changed(check=[])).results == read(json.dumps(GOOD)).results
