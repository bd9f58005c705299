"""The page in a real browser, where one is installed: no complaint, no overflow, few sheets."""

import html
import json
import re
import shutil
import subprocess

import pytest

from netsize.presentation.report.html import page

BROWSER = shutil.which("chromium") or shutil.which("chromium-browser")
pytestmark = pytest.mark.skipif(BROWSER is None, reason="chromium is not installed")

WIDTHS = (360, 1280)


@pytest.fixture
def browse(tmp_path):
    """A function: runs the browser without a window and gives what it says."""

    def run(*arguments):
        return subprocess.run(
            [
                BROWSER,
                "--headless",
                "--no-sandbox",
                "--disable-gpu",
                "--disable-quic",
                "--no-first-run",
                "--disable-background-networking",
                "--disable-component-update",
                "--disable-sync",
                "--disable-dev-shm-usage",
                f"--user-data-dir={tmp_path / 'profile'}",
                *arguments,
            ],
            capture_output=True,
            text=True,
            encoding="utf-8",
            timeout=120,
            check=True,
        )

    return run


@pytest.fixture(params=["finite", "no-finite-size", "hostile"])
def text(request, documents, hostile_document):
    return page(hostile_document if request.param == "hostile" else documents(request.param))


def test_no_complaint_on_the_console(text, tmp_path, browse):
    path = tmp_path / "page.html"
    path.write_text(text, encoding="utf-8")
    said = browse("--enable-logging=stderr", "--dump-dom", path.as_uri())
    assert "<main>" in said.stdout
    assert "CONSOLE" not in said.stderr


def test_no_overflow_on_narrow_and_wide_screens(text, tmp_path, browse):
    """Frames of each width hold the page; a script outside them measures what it would need."""
    frames = "".join(
        f'<iframe style="width:{w}px;height:800px;border:0" srcdoc="{html.escape(text)}"></iframe>'
        for w in WIDTHS
    )
    measure = (
        "<script>onload = () => document.title = JSON.stringify([...document.querySelectorAll("
        "'iframe')].map(f => { const d = f.contentDocument.documentElement;"
        " return [d.clientWidth, d.scrollWidth]; }))</script>"
    )
    path = tmp_path / "frames.html"
    path.write_text(
        f"<!DOCTYPE html><html><head><title></title>{measure}</head><body>{frames}</body></html>",
        encoding="utf-8",
    )
    shown = browse(
        "--virtual-time-budget=5000", "--window-size=1400,900", "--dump-dom", path.as_uri()
    )
    found = re.search(r"<title>(.+?)</title>", shown.stdout)
    sizes = json.loads(found[1])
    assert len(sizes) == len(WIDTHS)
    for wanted, (visible, needed) in zip(WIDTHS, sizes, strict=True):
        assert wanted - 20 <= visible <= wanted
        assert needed <= visible


@pytest.mark.parametrize("name", ["finite", "no-finite-size"])
def test_two_to_six_sheets(name, documents, tmp_path, browse):
    path, sheets = tmp_path / "page.html", tmp_path / "page.pdf"
    path.write_text(page(documents(name)), encoding="utf-8")
    browse("--no-pdf-header-footer", f"--print-to-pdf={sheets}", path.as_uri())
    pages = len(re.findall(rb"/Type\s*/Page\b(?!s)", sheets.read_bytes()))
    assert 2 <= pages <= 6
