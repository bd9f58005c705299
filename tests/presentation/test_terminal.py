import sys

import pytest

from netsize.presentation.terminal import show_table

COLUMNS = [("reading of the evidence", "left"), ("n total", "right"), ("95% interval", "right")]
ROWS = [("as printed", "1,204", "[0.41, 0.75]"), ("corrected", "99,044", "[-0.015, 0.67]")]


@pytest.mark.parametrize("width", [200, 80, 60, 40])
def test_no_number_is_cut_whatever_the_width(width, monkeypatch, capsys):
    monkeypatch.setattr(sys.stdout, "isatty", lambda: True, raising=False)
    monkeypatch.setenv("COLUMNS", str(width))
    show_table(COLUMNS, ROWS)
    out = capsys.readouterr().out
    for row in ROWS:
        assert all(cell in out for cell in row)
