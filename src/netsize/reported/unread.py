"""What is said of places that look like a statistic and cannot be used."""

from __future__ import annotations

from netsize.errors import ReadingError
from netsize.reported.places import faulty_part_at
from netsize.reported.records import Reading, Unread

__all__ = ["refuse_unread", "unread_place"]

_LONGEST_MARK = 80
_MOST_LISTED = 20


def unread_place(place: Unread) -> str:
    """Line and column, what stands there with the faulty part marked, and the reason."""
    text, context = place.text, place.context
    at = faulty_part_at(place)
    before, after = (context[:at], context[at + len(text) :]) if at >= 0 else ("", "")
    joined = " ".join(text.split())
    part = joined if len(joined) <= _LONGEST_MARK else joined[: _LONGEST_MARK - 3] + "..."
    shown = " ".join(f"{before}>>{part}<<{after}".split())
    return f"line {place.line}, column {place.column}: {shown}\n{place.reason}"


def refuse_unread(reading: Reading) -> None:
    """Raise ReadingError where `reading` holds unread places other than harmless ones."""
    unread = [place for place in reading.unread if not place.harmless]
    if not unread:
        return
    count = len(unread)
    what = "1 place looks" if count == 1 else f"{count} places look"
    shown = unread[:_MOST_LISTED]
    rest = f"\n  and {count - len(shown)} more" if count > len(shown) else ""
    raise ReadingError(
        f"{what} like a statistic and cannot be used:\n"
        + "\n".join("  " + unread_place(place).replace("\n", "\n      ") for place in shown)
        + rest
        + "\nMend the text, or leave these places out with --skip-unread (skip_unread=True).",
        unread,
    )
