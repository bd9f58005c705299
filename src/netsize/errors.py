"""The exception tree of netsize.

    NetsizeError
    ├── InputError            what the user supplied cannot be used (exit code 3)
    │   ├── ReadingError      text or a table that cannot be read; carries the faulty places
    │   ├── SettingError      an option or argument outside its range
    │   └── EvidenceError     readable evidence that cannot be combined
    └── SolveError            a numerical search failed; carries its best value so far

`InputError` is the user's to mend; anything else that escapes is ours. Messages say what is wrong,
what was expected and how to mend it, in that order.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = [
    "EvidenceError",
    "InputError",
    "NetsizeError",
    "ReadingError",
    "SettingError",
    "SolveError",
]


class NetsizeError(Exception):
    """Root of everything netsize raises on purpose."""


class InputError(NetsizeError):
    """What the user supplied cannot be used as it is."""


class ReadingError(InputError):
    """Text or a table cannot be read.

    `places` holds one record for each faulty place (line, column, text and reason); it is empty
    when the whole input is at fault (empty, binary, missing).
    """

    def __init__(self, message: str, places: Sequence[object] = ()) -> None:
        super().__init__(message)
        self.places = tuple(places)


class SettingError(InputError):
    """An option or argument is outside its range; `setting` names it as the user wrote it."""

    def __init__(self, setting: str, message: str) -> None:
        super().__init__(f"{setting}: {message}")
        self.setting = setting


class EvidenceError(InputError):
    """Results were read but cannot be combined into one answer."""


class SolveError(NetsizeError):
    """A numerical search did not reach its tolerance.

    `best` is the best value found and `off_by` how far it misses, so a caller can judge it.
    """

    def __init__(self, message: str, *, best: float, off_by: float) -> None:
        super().__init__(f"{message} (best value {best:g}, off by {off_by:.2g})")
        self.best = best
        self.off_by = off_by
