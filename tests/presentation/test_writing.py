"""Files appear whole or not at all."""

import os
import signal
import subprocess
import sys
import time

import pytest

from netsize.errors import SettingError
from netsize.presentation.writing import write_atomically


def test_writes_and_replaces(tmp_path):
    path = tmp_path / "page.html"
    write_atomically(path, b"old", option="-o")
    write_atomically(path, b"new", option="-o")
    assert path.read_bytes() == b"new"
    assert list(tmp_path.iterdir()) == [path]


def test_keeps_permissions_and_follows_links(tmp_path):
    path, link = tmp_path / "page.html", tmp_path / "link.html"
    path.write_bytes(b"old")
    path.chmod(0o640)
    link.symlink_to(path)
    write_atomically(link, b"new", option="-o")
    assert link.is_symlink()
    assert path.read_bytes() == b"new"
    assert path.stat().st_mode & 0o777 == 0o640


@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_a_failure_leaves_the_old_file_alone(tmp_path, monkeypatch, step):
    path = tmp_path / "page.html"
    path.write_bytes(b"old")

    def fail(*arguments):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, step, fail)
    with pytest.raises(SettingError, match="No space left"):
        write_atomically(path, b"new", option="-o")
    assert path.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [path]


@pytest.mark.skipif(os.name == "nt", reason="no such signal there")
def test_a_killed_run_leaves_the_old_file(tmp_path):
    path = tmp_path / "page.html"
    path.write_bytes(b"old")
    code = (
        "import os, time\n"
        "from netsize.presentation.writing import write_atomically\n"
        "os.fsync = lambda _: (print('writing', flush=True), time.sleep(60))\n"
        f"write_atomically({str(path)!r}, b'new' * 100000, option='-o')\n"
    )
    with subprocess.Popen([sys.executable, "-c", code], stdout=subprocess.PIPE) as run:
        assert run.stdout.readline()
        run.send_signal(signal.SIGKILL)
        run.wait(30)
    time.sleep(0.05)
    assert path.read_bytes() == b"old"


def test_says_why_a_place_cannot_be_written(tmp_path):
    with pytest.raises(SettingError, match="is a folder"):
        write_atomically(tmp_path, b"", option="-o")
    with pytest.raises(SettingError, match="no folder 'missing'"):
        write_atomically(tmp_path / "missing" / "page.html", b"", option="-o")


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no pipes with names there")
def test_replaces_ordinary_files_only(tmp_path):
    os.mkfifo(tmp_path / "pipe.html")
    with pytest.raises(SettingError, match="no ordinary file"):
        write_atomically(tmp_path / "pipe.html", b"", option="-o")
