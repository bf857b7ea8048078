"""Solutions as a page for people."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

from headrace.graph.read import short
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.pages.model import Cell, Column, Page, Table
from headrace.pages.numbers import counted

_WHOLE = ("integer", "int", "long")
_NUMBERS = (*_WHOLE, "decimal", "double", "float")


def cell(term: Mapping[str, str] | None) -> Cell:
    """A term of the SPARQL JSON format as a cell: numbers as numbers, addresses without the base."""
    if term is None:
        return None
    value, kind = term["value"], term.get("datatype", "").rpartition("#")[2]
    if term["type"] == "uri":
        return value.removeprefix(RUN_BASE) if value.startswith(RUN_BASE) else short(value)
    if kind in _NUMBERS:
        return int(value) if kind in _WHOLE else float(value.replace("INF", "inf"))
    if kind == "boolean":
        return value == "true"
    return " ".join(value.split())


def page(title: str, body: bytes) -> Page:
    """The page of a SELECT or ASK answer in the SPARQL JSON format."""
    answer: dict[str, Any] = json.loads(body)
    if "boolean" in answer:
        table = Table("answer", "", (Column("answer"),), ((bool(answer["boolean"]),),))
        return Page(title, (), "Yes." if answer["boolean"] else "No.", (), table)
    names = answer["head"]["vars"]
    found = answer["results"]["bindings"]
    rows = tuple(tuple(cell(row.get(name)) for name in names) for row in found)
    numeric = [any(isinstance(row[at], int | float) for row in rows) for at in range(len(names))]
    columns = tuple(Column(name, number=number) for name, number in zip(names, numeric, strict=True))
    table = Table("answer", "", columns, rows, empty="Nothing found.")
    return Page(title, (), f"{counted(len(rows), 'row')}.", (table,) if rows else (), table)
