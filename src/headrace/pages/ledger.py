"""The skeleton ledger as tables: the law in one line, every row, and each compartment."""

from __future__ import annotations

from headrace.pages.context import RATE, Context
from headrace.pages.model import Block, Column, Notes, Row, Table
from headrace.pages.numbers import show
from headrace.values.answers import Ledger

_SIDES = {"left": "leaves", "right": "comes in"}


def blocks(context: Context, ledger: Ledger) -> tuple[Block, ...]:
    """Law, rows, and compartments where there is more than one."""
    law = Notes(f"Ledger of skeletons ({RATE})", sentences(ledger), listed=False)
    each = (law, rows(context, ledger))
    return (*each, compartments(context, ledger)) if len(ledger.compartments) > 1 else each


def sentences(ledger: Ledger) -> tuple[str, ...]:
    """The law in words and in numbers."""
    left = f"{show(ledger.net_drain)} + {show(ledger.released)} + {show(ledger.removed)}"
    right = f"{show(ledger.refilled)} + {show(ledger.supplied)}"
    off = abs(ledger.residual)
    closes = "closes below 1e-9" if off < 1e-9 else f"DOES NOT CLOSE: off by {off:.3g}"
    return (
        "drained by outlets + released + removed = refilled + supplied by feeds",
        f"{left} = {right}   ({closes})",
    )


def rows(context: Context, ledger: Ledger) -> Table:
    """Every row of the ledger, those that leave first."""
    columns = (Column("side"), Column("kind"), Column("what"), Column("in", alike=True), Column("skeletons", RATE, number=True))
    ordered = sorted(ledger.rows, key=lambda row: row.side != "left")
    cells = tuple(
        (_SIDES.get(row.side, row.side), row.kind, context.name(row.what), context.place(row.compartment), row.skeletons)
        for row in ordered
    )
    return Table("ledger", "Rows of the ledger", columns, cells, grouped=True, empty="Nothing leaves and nothing comes in.")


def compartments(context: Context, ledger: Ledger) -> Table:
    """The same law in each compartment, with what carriers bring in and out."""
    kinds = ("drained", "released", "removed", "carried out", "refilled", "supplied", "carried in", "residual")
    places = ledger.compartments
    columns = (Column("side"), Column("kind"), *(Column(context.place(each.compartment), RATE, number=True) for each in places))
    sides = ("leaves",) * 4 + ("comes in",) * 3 + ("difference",)
    cells: list[Row] = []
    for side, kind in zip(sides, kinds, strict=True):
        cells.append((side, kind, *(getattr(each, kind.replace(" ", "_")) for each in places)))
    return Table("compartments", "Ledger by compartment", columns, tuple(cells), grouped=True)
