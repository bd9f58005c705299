"""A table of the text as results: every row through the same stages as running text."""

from __future__ import annotations

from dataclasses import replace

from netsize.reported.assemble import fields_of
from netsize.reported.columns import unknown_column
from netsize.reported.faults import Fault
from netsize.reported.grouping import Group, group_items
from netsize.reported.items import Item
from netsize.reported.joining import joined
from netsize.reported.prose import SHARED, marked_place
from netsize.reported.records import ReportedResult, Unread
from netsize.reported.rows import Row, row_group
from netsize.reported.scanner import scan
from netsize.reported.source import Source
from netsize.reported.tables import Cell, Table
from netsize.reported.tags import merged

__all__ = ["read_table"]


def read_table(table: Table, source: Source) -> tuple[list[ReportedResult], list[Unread]]:
    """Results and unread places of one table; a column that is not known is an unread place."""
    unread: list[Unread] = []
    seen: set[str] = set()
    for cell, column in zip(table.header, table.columns, strict=True):
        if column is None and cell.text:
            unread.append(source.places.unread(cell.start, cell.end, unknown_column(cell.text)))
        elif column is not None and column.name in seen and column.name != "notes":
            reason = f'a second column "{column.name}"; keep one'
            return [], [source.places.unread(cell.start, cell.end, reason)]
        if column is not None:
            seen.add(column.name)
    results: list[ReportedResult] = []
    for cells in table.rows:
        try:
            results += _row(cells, table, source)
        except Fault as fault:
            start = cells[0].start if fault.start is None else fault.start
            end = cells[-1].end if fault.end is None else fault.end
            unread.append(source.places.unread(start, max(end, start + 1), fault.reason))
    return _sharing(results), unread


def _row(cells: tuple[Cell, ...], table: Table, source: Source) -> list[ReportedResult]:
    if len(cells) > len(table.columns) and any(c.text for c in cells[len(table.columns) :]):
        raise Fault(
            f"the row has {len(cells)} cells under {len(table.columns)} columns; put quotes round "
            "a cell that holds the delimiter",
            cells[len(table.columns)].start,
            cells[-1].end,
        )
    named = {
        column.name: cell
        for column, cell in zip(table.columns, cells, strict=False)
        if column is not None and column.name != "notes"
    }
    row = row_group(named)
    groups = _printed_groups(named["result"], row) if _filled(named.get("result")) else [row.group]
    label = _label(row.label, source)
    sample = row.settings.get("sample")
    results = []
    for group in groups:
        settings = merged(row.settings, group.settings)
        try:
            fields = fields_of(
                group,
                tags=settings,
                defaults=source.defaults,
                text=source.text,
                begin=group.start,
            )
        except Fault as fault:
            raise Fault(fault.reason, *marked_place(group, fault)) from None
        if fields is None:
            raise Fault("no statistic stands in this row")
        group.start, group.end = cells[0].start, max(c.end for c in cells)
        sample = settings.get("sample")
        results.append(
            source.result(
                group,
                fields,
                label=label,
                sample=sample,
                sample_origin="printed" if sample else "assumed",
            )
        )
    return results


def _label(cell: Cell | None, source: Source) -> str | None:
    return source.words(cell.start, cell.end).replace('""', '"') or None if cell else None


def _filled(cell: Cell | None) -> bool:
    return cell is not None and bool(cell.text)


def _printed_groups(cell: Cell, row: Row) -> list[Group]:
    """The tests in a cell of running text, each with what other cells of the row say."""
    # apart from the row: the next cell must not look like the rest of a number
    text = cell.text.replace("\n", " ")
    groups = [
        group
        for line in group_items(scan(text), text)
        for group in _with_line_settings(joined(line.groups, text), line.settings, line.faults)
    ]
    if not groups:
        raise Fault("this cell holds no statistic that can be read", cell.start, cell.end)
    beside = row.group.items
    if len(groups) > 1 and any(i.kind != "size" for i in beside):
        other = next(i for i in beside if i.kind != "size")
        raise Fault("the row holds several tests; give each its own row", other.start, other.end)
    for group in groups:
        for item in group.items:
            _move(item, cell.start)
        group.start += cell.start
        group.end += cell.start
        for item in beside:
            group.add(item)
    return groups


def _move(item: Item, by: int) -> None:
    item.start += by
    item.end += by
    if item.marked:
        item.marked = (item.marked[0] + by, item.marked[1] + by)


def _with_line_settings(
    groups: list[Group], settings: dict[str, object], faults: list[Item]
) -> list[Group]:
    for group in groups:
        group.settings = merged(settings, group.settings)
        group.faults[:0] = faults
    return groups


def _sharing(results: list[ReportedResult]) -> list[ReportedResult]:
    """Say so where rows share a sample only because they share a label."""
    counts: dict[str, int] = {}
    for r in results:
        counts[r.sample] = counts.get(r.sample, 0) + 1
    return [
        replace(r, notes=(*r.notes, SHARED))
        if counts[r.sample] > 1 and r.sample_origin == "assumed"
        else r
        for r in results
    ]
