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
    """Smallest changes that would open the case, with the feed that it would then need."""
    shown = (Column("change"), Column("kind"), Column("least feed then", CARBON, number=True))
    columns = (*shown, Column("why it is shut now", detail=True))
    cells = tuple((row.change, row.kind, row.aim, row.reason) for row in rows)
    title = "Smallest changes that would open it, each by itself"
    return Table("repairs", title, columns, cells, empty="No change that the facts offer opens it.")
