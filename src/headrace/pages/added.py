"""The tables that checks add to an answer, as tables of a page."""

from __future__ import annotations

from headrace.pages.context import Context
from headrace.pages.model import Column, Table
from headrace.values.answers import AddedTable


def added(context: Context) -> tuple[Table, ...]:
    """All of them, in the order given."""
    return tuple(_table(each) for each in context.result.tables)


def _table(table: AddedTable) -> Table:
    columns = tuple(Column(each.title, each.unit, each.number, each.detail) for each in table.columns)
    rows = tuple(tuple(", ".join(cell) if isinstance(cell, tuple) else cell for cell in row) for row in table.rows)
    return Table(table.key, table.title, columns, rows, note=table.note, empty=table.empty, detail=table.detail)
