"""The edge where files are opened: text, tables, workbooks and JSON from disk."""

from __future__ import annotations

import zipfile
from pathlib import Path

from netsize.errors import ReadingError
from netsize.reported.records import Reading
from netsize.reported.sources import read

__all__ = ["LARGEST_FILE", "decode", "read_file"]

LARGEST_FILE = 64 * 1024 * 1024
_MENDS = {
    b"%PDF": "a PDF; copy the sentences with the statistics out of it and paste them",
    b"\xd0\xcf\x11\xe0": "an old Office file; save it as .xlsx, .csv or text",
    b"{\\rtf": "rich text; save it as plain text",
    b"\x89PNG": "an image; type or paste the statistics as text",
    b"\xff\xd8\xff": "an image; type or paste the statistics as text",
    b"\x1f\x8b": "compressed; unpack it first",
}


def read_file(path: str | Path) -> Reading:
    """Everything that a file reports.

    Text, CSV, TSV, Markdown and JSON in UTF-8 (or UTF-16 with its byte-order mark), and .xlsx
    workbooks when openpyxl is installed. Raises ReadingError for everything else, in words.
    """
    path = Path(path)
    name = str(path)
    try:
        if path.is_dir():
            raise ReadingError(f"{name} is a directory; name one file in it")
        if path.is_file() and path.stat().st_size > LARGEST_FILE:
            size, most = path.stat().st_size // 2**20, LARGEST_FILE // 2**20
            raise ReadingError(f"{name} has {size} MB; at most {most} MB are read")
        content = path.read_bytes()
    except FileNotFoundError:
        raise ReadingError(
            f"there is no file {name}; give a path, or - to read what is piped in"
        ) from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise ReadingError(f"{name} cannot be opened: {reason}") from None
    if len(content) > LARGEST_FILE:  # a device or a pipe, whose size is not known beforehand
        raise ReadingError(f"{name} is too large; at most {LARGEST_FILE // 2**20} MB are read")
    if content.startswith(b"PK"):
        return read(_workbook_text(path))
    return read(decode(content, name))


def decode(content: bytes, name: str) -> str:
    """Text of `content`, with a clear error where it is none; `name` is how messages call it."""
    for magic, what in _MENDS.items():
        if content.startswith(magic):
            raise ReadingError(f"{name} is {what}")
    if content.startswith((b"\xff\xfe", b"\xfe\xff")):
        encoding = "utf-16"
    elif b"\x00" in content:
        raise ReadingError(f"{name} is a binary file; expected text, a table or JSON")
    else:
        encoding = "utf-8-sig"
    try:
        return content.decode(encoding)
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        column = error.start - (content.rfind(b"\n", 0, error.start) + 1) + 1
        raise ReadingError(
            f"{name} is not text in UTF-8: line {line}, byte {column} of that line "
            f"(0x{content[error.start]:02x}); save it as UTF-8 and read it again"
        ) from None


def _workbook_text(path: Path) -> str:
    """The sheets of a workbook as tab-separated text, read like any table."""
    with zipfile.ZipFile(path) if zipfile.is_zipfile(path) else _not_a_workbook(path) as archive:
        if "xl/workbook.xml" not in archive.namelist():
            _not_a_workbook(path)
    try:
        import openpyxl  # noqa: F401  (pandas needs it; the message below is clearer than its own)
    except ImportError:
        raise ReadingError(
            f"{path} is a workbook, which needs openpyxl: pip install 'netsize[excel]', or save "
            "the sheet as CSV"
        ) from None
    import pandas as pd

    try:
        sheets = pd.read_excel(path, sheet_name=None, header=None, dtype=str)
    except Exception as error:  # a damaged archive fails in many ways inside the library
        raise ReadingError(f"{path} cannot be read as a workbook: {error}") from None
    filled = {name: sheet for name, sheet in sheets.items() if not sheet.empty}
    if not filled:
        raise ReadingError(f"{path} holds no filled sheet")
    if len(filled) > 1:
        raise ReadingError(
            f"{path} has {len(filled)} filled sheets ({', '.join(map(str, filled))}); keep one, or "
            "save the one you mean as CSV"
        )
    (sheet,) = filled.values()
    rows = sheet.fillna("").astype(str).to_numpy().tolist()
    return "\n".join("\t".join(" ".join(cell.split()) for cell in row) for row in rows)


def _not_a_workbook(path: Path) -> zipfile.ZipFile:
    raise ReadingError(
        f"{path} is an archive or Office document; save the statistics as text, .csv or .xlsx"
    )
