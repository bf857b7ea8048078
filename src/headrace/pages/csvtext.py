"""A table as CSV (RFC 4180 quoting, newline line ends, UTF-8): all digits, units in the header."""

from __future__ import annotations

import csv
from io import StringIO

from headrace.pages.model import Table
from headrace.pages.numbers import full


def table(table: Table) -> str:
    """Header and rows. A text cell that a spreadsheet would run as a formula gets a leading apostrophe."""
    text = StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(column.heading for column in table.columns)
    for row in table.rows:
        writer.writerow(_inert(cell) if isinstance(cell, str) else full(cell) for cell in row)
    return text.getvalue()


def _inert(text: str) -> str:
    return f"'{text}" if text[:1] in ("=", "+", "-", "@", "\t", "\r") else text
