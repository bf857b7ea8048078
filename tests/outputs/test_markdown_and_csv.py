"""Markdown tables are well formed for a Markdown parser; CSV reads back to what was written."""

from __future__ import annotations

import csv
from io import StringIO

import pytest
from hypothesis import given
from hypothesis import strategies as st
from markdown_it import MarkdownIt

from headrace.pages import answers, csvtext, markdown
from headrace.pages.model import Column, Row, Table
from tests.outputs.test_pages import RESULTS

CELLS = st.one_of(st.text(max_size=20), st.floats(allow_nan=False, allow_infinity=False), st.integers(), st.none())
READER = MarkdownIt("commonmark").enable("table")


def cells(text: str) -> list[list[list[str]]]:
    """Tables as lists of rows of cell texts, as a Markdown reader sees them."""
    tables: list[list[list[str]]] = []
    tokens = READER.parse(text)
    for place, token in enumerate(tokens):
        if token.type == "table_open":
            tables.append([])
        elif token.type == "tr_open":
            tables[-1].append([])
        elif token.type in ("td_open", "th_open"):
            inline = tokens[place + 1]
            tables[-1][-1].append("".join(child.content for child in inline.children or ()))
    return tables


@pytest.mark.parametrize("name", RESULTS)
def test_every_table_of_a_page_is_one_to_a_markdown_reader(name: str) -> None:
    page = answers.page(RESULTS[name], "0.1.0", rates=True)
    filled = [block for block in page.blocks if isinstance(block, Table) and block.rows]
    read = cells(markdown.page(page))
    assert len(read) == len(filled)
    for table, rows in zip(filled, read, strict=True):
        assert rows[0] == [column.heading for column in table.columns]
        assert {len(row) for row in rows} == {len(table.columns)}
        assert len(rows) == len(table.rows) + 1


def test_marks_in_names_stay_marks() -> None:
    read = cells(markdown.page(answers.page(RESULTS["drains"], "")))
    names = {cell for table in read for row in table for cell in row}
    assert {"amber*amine", "carbon | dioxide"} <= names


def test_nothing_in_a_name_is_run_as_html() -> None:
    assert "<script" not in READER.render(markdown.escape("<script>alert(1)</script>"))


def test_sources_are_listed_by_the_numbers_that_cells_cite() -> None:
    text = markdown.page(answers.page(RESULTS["refills"], "0.1.0"))
    assert "1. Miller A; Smith B (2001) J Imag Biol 1:1-9 doi:10.0000/paper" in text
    assert "2. Textbook of invented cells" in text
    assert "| [2] |" in text


@pytest.mark.parametrize("name", RESULTS)
def test_csv_reads_back(name: str) -> None:
    table = answers.page(RESULTS[name], "0.1.0").main
    rows = list(csv.reader(StringIO(csvtext.table(table))))
    assert rows[0] == [column.heading for column in table.columns]
    assert len(rows) == len(table.rows) + 1
    for row, given_row in zip(rows[1:], table.rows, strict=True):
        for cell, value, column in zip(row, given_row, table.columns, strict=True):
            if column.number:
                assert cell == "" if value is None else float(cell) == float(value)


@given(st.lists(st.tuples(CELLS, CELLS), min_size=1, max_size=5))
def test_csv_keeps_rows_and_digits_whatever_the_cells_hold(rows: list[Row]) -> None:
    table = Table("t", "T", (Column("a"), Column("b", "mmol/gDW/h", number=True)), tuple(rows))
    text = csvtext.table(table)
    read = list(csv.reader(StringIO(text, newline="")))
    assert len(read) == len(rows) + 1
    for row, cells_ in zip(rows, read[1:], strict=True):
        for value, cell in zip(row, cells_, strict=True):
            if isinstance(value, float):
                assert float(cell) == value
            elif isinstance(value, str):
                assert cell in (value, f"'{value}")


@pytest.mark.parametrize("text", ["=1+1", "@SUM(A1)", "-cmd", "+1"])
def test_a_spreadsheet_runs_no_cell_as_a_formula(text: str) -> None:
    table = Table("t", "T", (Column("a"),), ((text,),))
    assert list(csv.reader(StringIO(csvtext.table(table))))[1] == [f"'{text}"]


def test_units_stand_in_the_header() -> None:
    header = csvtext.table(answers.page(RESULTS["refills"], "").main).splitlines()[0]
    for name in ("least", "nominal", "most", "capacity"):
        assert f"{name} (mmol/gDW/h)" in header
