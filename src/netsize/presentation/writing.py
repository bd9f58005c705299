"""Files written whole or not at all: a killed run leaves the old file, or none."""

from __future__ import annotations

import contextlib
import os
import secrets
from pathlib import Path

from netsize.errors import SettingError

__all__ = ["check_place", "write_atomically"]


def write_atomically(path: str | os.PathLike[str], content: bytes, *, option: str) -> None:
    """Put `content` at `path` in one step: write beside it, flush to the disk, then rename.

    A link is followed, and a file that exists keeps its permissions. SettingError, naming `option`,
    where the place cannot hold the file.
    """
    target = check_place(path, option=option)
    beside = target.with_name(f".netsize-{secrets.token_hex(8)}.part")
    try:
        mode = target.stat().st_mode & 0o777 if target.exists() else None
        descriptor = os.open(beside, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666)
        try:
            with os.fdopen(descriptor, "wb") as file:
                file.write(content)
                file.flush()
                os.fsync(file.fileno())
            if mode is not None:
                beside.chmod(mode)
            beside.replace(target)
        except BaseException:
            with contextlib.suppress(OSError):
                beside.unlink()
            raise
    except OSError as error:
        reason = error.strerror or str(error)
        raise SettingError(option, f"{target.name!r} cannot be written: {reason}") from None


def check_place(path: str | os.PathLike[str], *, option: str) -> Path:
    """The real place of a file to write; SettingError where no file can be put."""
    target = Path(os.path.realpath(path))
    if target.is_dir():
        raise SettingError(option, f"{target.name!r} is a folder; name a file in it")
    if target.exists() and not target.is_file():
        raise SettingError(option, f"{target.name!r} is no ordinary file, so it is not replaced")
    if not target.parent.is_dir():
        raise SettingError(option, f"there is no folder {target.parent.name!r} to write into")
    return target
