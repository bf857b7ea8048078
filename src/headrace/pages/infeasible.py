"""What is missing and what would help, for an answer that is no."""

from __future__ import annotations

from headrace.pages.context import CARBON, RATE, Context
from headrace.pages.model import Column, Table
from headrace.values.answers import Repair, Shortage


def shortage(context: Context, rows: tuple[Shortage, ...]) -> Table:
    """Which pools can't be served, and by how much."""
    columns = (Column("pool that can't be served"), Column("missing", RATE, number=True))
    cells = tuple((context.name(row.pool), row.missing) for row in rows)
    return Table("shortage", "What is missing", columns, cells, empty="No single pool is short.")


def repairs(context: Context, rows: tuple[Repair, ...]) -> Table:
    """Single changes that would open the case, with the feed that it would then need."""
    columns = (Column("change"), Column("kind"), Column("least feed then", CARBON, number=True))
    cells = tuple((row.change, row.kind, row.aim) for row in rows)
    return Table("repairs", "Single changes that would open it", columns, cells, empty="No single change opens it.")
