"""Numbers of participants: what was printed or tagged, and how it fits the degrees of freedom."""

from __future__ import annotations

from dataclasses import dataclass

from netsize.reported.faults import Fault
from netsize.reported.grouping import Group
from netsize.reported.records import Origin
from netsize.reported.tags import Settings

__all__ = ["NO_SIZES", "Fit", "Sizes", "fit_to_df", "sizes_of"]


@dataclass(frozen=True, slots=True)
class Sizes:
    """`n` is (), one total (or one group's size, where `each`), or the size of every group."""

    n: tuple[int, ...] = ()
    each: bool = False
    origin: Origin | None = None

    def groups(self, count: int) -> tuple[int, ...]:
        """Group sizes, where "per group" is said `count` times the one size."""
        return self.n * count if self.each and len(self.n) == 1 else self.n

    def total(self) -> tuple[int, ...]:
        """The number of all participants, or ()."""
        return (sum(self.groups(2)),) if self.n else ()


NO_SIZES = Sizes()
PAIRED_NOTE = "df = n - 1: read as a paired test; [one-sample] or [two-groups] say otherwise"


@dataclass(frozen=True, slots=True)
class Fit:
    """Sizes settled against df, with the design that this implies."""

    n: tuple[int, ...]
    design: str | None = None
    design_origin: Origin = "assumed"
    notes: tuple[str, ...] = ()


def sizes_of(group: Group, tags: Settings, defaults: Settings) -> Sizes:
    """A tag on the line wins over print, print over the defaults."""
    if "n" in tags:
        return Sizes(tags["n"], tags.get("per_group", False), "tag")
    printed = _printed(group)
    if printed.n:
        return printed
    if "n" in defaults:
        return Sizes(defaults["n"], defaults.get("per_group", False), "default")
    return NO_SIZES


def _printed(group: Group) -> Sizes:
    found = [i for i in group.items if i.kind == "size"]
    if not found:
        inside = next((i.sizes for i in group.items if i.sizes), ())
        return Sizes(inside, False, "printed") if inside else NO_SIZES
    described = any(i.kind == "mean" for i in group.items)
    parts = [i for i in found if "capital" not in i.flags]
    for item in found:
        if len(item.sizes) > 1:
            return Sizes(item.sizes, False, "printed")
    if len(parts) > 1:
        return Sizes(tuple(n for i in parts for n in i.sizes), False, "printed")
    if described and parts and "each" not in parts[0].flags:
        parts = []  # the size of one described group says nothing about the whole test
        found = [i for i in found if "capital" in i.flags]
        if not found:
            return NO_SIZES
    if not parts and len({i.sizes for i in found}) > 1:
        raise Fault(
            "several totals N are printed beside it; add the one that belongs to it, as in [n 40]",
            found[0].start,
            found[-1].end,
        )
    only = parts[0] if parts else found[0]
    return Sizes(only.sizes, "each" in only.flags, "printed")


def fit_to_df(sizes: Sizes, df: tuple[float, ...], design: str | None) -> Fit:
    """Settle whether one printed n is the total or one group's size, from the error df."""
    if len(df) == 1 and len(sizes.n) > 2:
        raise Fault(f"t compares two groups, and {len(sizes.n)} sizes are given")
    numerator = df[0] if len(df) == 2 else 1.0
    error = df[-1]
    if len(sizes.n) != 1:
        if len(sizes.n) == 2 and design in ("paired", "one-sample") and _same(sizes.n):
            return Fit(sizes.n[:1]) if error == sizes.n[0] - 1 else Fit(sizes.n)
        pairs = len(sizes.n) == 2 and _same(sizes.n) and sizes.n[0] > 2
        if pairs and numerator == 1 and error == sizes.n[0] - 1 and design is None:
            return Fit(sizes.n[:1], "paired", "assumed", (PAIRED_NOTE,))
        implied = "two-groups" if len(sizes.n) == 2 and numerator == 1 else None
        return Fit(sizes.n, implied, "printed")
    n = sizes.n[0]
    if sizes.each:
        groups = int(numerator) + 1
        return Fit(sizes.n * groups, "two-groups" if groups == 2 else None, "printed")
    if numerator != 1 or design is not None:
        if design == "two-groups" and error == 2 * n - 2:
            return Fit((n, n), notes=(f"n = {n} read as the size of each group: df = 2n - 2",))
        return Fit(sizes.n)
    if error == 2 * n - 2 and n > 2:
        note = f"n = {n} read as the size of each group, since df = 2n - 2"
        return Fit((n, n), "two-groups", "assumed", (note,))
    if error == n - 1 and n > 2:
        return Fit(sizes.n, "paired", "assumed", (PAIRED_NOTE,))
    return Fit(sizes.n)


def _same(numbers: tuple[int, ...]) -> bool:
    return len(set(numbers)) == 1
