"""What all builders of families share: the group with its settings, small readings of it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, TypeAlias

from netsize.reported.grouping import Group
from netsize.reported.items import Item
from netsize.reported.records import Origin
from netsize.reported.sizes import Sizes

__all__ = ["Context", "Fields", "design_or", "df_beside", "number_fields", "two_if_two"]

Fields: TypeAlias = dict[str, Any]


@dataclass(frozen=True, slots=True)
class Context:
    """A group with its settings: which design, sizes and words apply to it."""

    group: Group
    sizes: Sizes
    design: str | None
    design_origin: Origin
    preceding: str | None  # the design in the words before the symbol

    @property
    def primary(self) -> Item:
        """The item that names the family."""
        assert self.group.primary is not None
        return self.group.primary


def number_fields(item: Item) -> Fields:
    number = item.number
    if number is None:
        return {"value": None}
    return {"value": number.value, "relation": number.relation, "decimals": number.decimals}


def df_beside(group: Group) -> tuple[float, ...]:
    found = group.every("df")
    if len(found) == 2 and all(len(i.arguments) == 1 for i in found):
        return found[0].arguments + found[1].arguments
    return found[0].arguments if found else ()


def design_or(context: Context, implied: str | None) -> tuple[str | None, Origin]:
    if context.design is not None and (context.design_origin == "tag" or implied is None):
        return context.design, context.design_origin
    return (implied, "printed") if implied else (None, "assumed")


def two_if_two(sizes: Sizes) -> str | None:
    return "two-groups" if len(sizes.groups(2)) == 2 else None
