"""What the stages of the reader raise among themselves; `read` turns it into `Unread` places."""

from __future__ import annotations

__all__ = ["Fault"]


class Fault(Exception):
    """Something that looks like a statistic and cannot be used.

    `start` and `end` mark the faulty part in the normalised text; None where the stage that found
    it does not know the place and leaves that to its caller. `harmless` says that no careful person
    would take it for a result: it is listed, and stops nothing.
    """

    def __init__(
        self,
        reason: str,
        start: int | None = None,
        end: int | None = None,
        *,
        harmless: bool = False,
    ) -> None:
        super().__init__(reason)
        self.harmless = harmless
        self.reason = reason
        self.start = start
        self.end = end
