"""Pages: words first, every row of the ledger, marks and footnotes, and lines that keep to the terminal's width."""

from __future__ import annotations

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace.pages import answers, plain
from headrace.pages.context import LOWER_BOUND, RECALLED_CAUTION, Context
from headrace.pages.model import Column, Notes, Page, Row, Table
from headrace.pages.numbers import show
from headrace.values.answers import RateRow, Result
from headrace.values.case import Finding
from tests.outputs import samples

RESULTS = {
    "drains": samples.result("drains"),
    "refills": samples.result("refills"),
    "infeasible": samples.result("refills", samples.infeasible()),
    "ceiling": samples.result("ceiling"),
    "grows": samples.result("grows"),
}


def text(result: Result, width: int = 100) -> str:
    return plain.page(answers.page(result, "0.1.0", rates=True), width)


@pytest.mark.parametrize("name", RESULTS)
@pytest.mark.parametrize("width", [80, 100, 120])
def test_no_line_is_wider_than_the_terminal(name: str, width: int) -> None:
    wide = [line for line in text(RESULTS[name], width).splitlines() if len(line) > width]
    assert not wide


@pytest.mark.parametrize("name", RESULTS)
def test_the_verdict_comes_before_any_table(name: str) -> None:
    page = answers.page(RESULTS[name], "0.1.0")
    first = page.verdict.split(".")[0][:40]
    shown = plain.page(page, 100)
    assert 0 < shown.index(first) < min(shown.index(block.title) for block in page.blocks)


@pytest.mark.parametrize("name", RESULTS)
def test_every_answer_says_that_it_is_a_lower_bound_from_a_model(name: str) -> None:
    page = answers.page(RESULTS[name], "0.1.0")
    assert LOWER_BOUND in page.cautions
    assert "lower bound from a model" in " ".join(plain.page(page, 80).split())


def test_the_ledger_is_shown_with_all_its_rows() -> None:
    shown = text(RESULTS["refills"])
    assert "drained by outlets + released + removed = refilled + supplied by feeds" in shown
    assert "1.279 + 0 + 0 = 1.279 + 0   (closes below 1e-9)" in shown
    rows = next(block for block in answers.page(RESULTS["refills"], "").blocks if block.title == "Rows of the ledger")
    assert isinstance(rows, Table) and len(rows.rows) == len(samples.ledger().rows)


def test_a_ledger_that_does_not_close_says_so_in_capitals() -> None:
    broken = msgspec.structs.replace(samples.ledger(), residual=0.5)
    assert "DOES NOT CLOSE: off by 0.5" in text(samples.result("refills", samples.refills(ledger=broken)))


def test_elements_that_do_not_close_say_so_in_capitals() -> None:
    assert "CLOSURE FAILS" in text(samples.result("refills", samples.refills(closure={"C": 0.01, "N": 0.0})))


def test_recalled_facts_are_marked_and_explained() -> None:
    page = answers.page(RESULTS["refills"], "")
    closed = next(block for block in page.blocks if block.title == "Closed refills")
    assert isinstance(closed, Table) and closed.rows[0][0] == "acid shunt †"
    assert page.footnotes and RECALLED_CAUTION in page.cautions


def test_what_is_not_recalled_has_no_mark() -> None:
    seen = tuple(msgspec.structs.replace(row, reading="seen") for row in samples.refills().refills)
    page = answers.page(samples.result("refills", samples.refills(refills=seen)), "")
    assert not page.footnotes and RECALLED_CAUTION not in page.cautions
    assert "†" not in plain.page(page, 100)


def test_the_verdict_names_what_drains_what_refills_and_what_is_indispensable() -> None:
    verdict = answers.page(RESULTS["refills"], "").verdict
    assert verdict == (
        "Outlets and growth drain 1.279 mmol/gDW/h of skeletons; 1.279 must be put back by sugar carboxylase."
        " The design can't do without carboxylation in the cytosol. The capacities carry it (design cover 1.5)."
    )


def test_the_verdict_says_when_capacities_fall_short() -> None:
    verdict = answers.page(samples.result("refills", samples.refills(design_cover=0.8)), "").verdict
    assert "DO NOT carry it (design cover 0.8)" in verdict


def test_an_open_split_is_told_by_its_group_and_shown_as_open() -> None:
    rows = tuple(msgspec.structs.replace(row, nominal=None, split="open: no fact says") for row in samples.refills().refills[:1])
    page = answers.page(samples.result("refills", samples.refills(refills=rows)), "")
    assert "put back by carboxylation in the cytosol" in page.verdict
    table = next(block for block in page.blocks if block.title == "Requirement by refill")
    assert isinstance(table, Table) and table.rows[0][4] is None


def test_infeasible_names_the_pool_the_closed_refills_and_the_changes() -> None:
    shown = text(RESULTS["infeasible"])
    assert "No, this design can't run: C4 acid (vesicle) can't be served." in shown
    assert "keep acid shunt" in shown and "sugar is fed" in shown
    assert "Requirement by group" not in shown


def test_rates_leave_out_what_stands_still_and_say_so() -> None:
    still = RateRow("shunt", 0.0, 0.0, 1e-7)
    page = answers.page(samples.result("refills", samples.refills(rates=(*samples.refills().rates, still))), "", rates=True)
    table = next(block for block in page.blocks if isinstance(block, Table) and block.name == "rates")
    assert [row[0] for row in table.rows] == ["sugar carboxylase"]
    assert table.note.startswith("1 reaction can't move")


def test_findings_are_listed_once_and_stops_come_first() -> None:
    stop = Finding("stop", "x", "fix", "does not add up")
    twice = samples.result("refills", findings=(Finding("note", "names", "amber", "amber is written as free acid"), stop))
    notes = next(block for block in answers.page(twice, "").blocks if isinstance(block, Notes) and block.title == "Findings")
    assert [line.split(":")[0] for line in notes.lines] == ["stop", "caution", "note", "note"]


def test_citations_are_numbered_by_first_use_and_one_with_a_semicolon_stays_whole() -> None:
    context = Context(samples.result("refills"))
    assert context.cite(f"{samples.BOOK}; {samples.PAPER}") == "[1, 2]"
    assert context.cite("paper") == "[2]"
    assert context.cite("a model statement") == "[3]"
    assert context.cite("") == ""
    assert context.used == [samples.BOOK, f"{samples.PAPER} doi:10.0000/paper", "a model statement"]


def test_a_result_of_another_kind_is_refused() -> None:
    with pytest.raises(TypeError, match="has no ceiling"):
        answers.page(samples.result("ceiling", samples.refills()), "")


@pytest.mark.parametrize(
    ("value", "shown"),
    [(1.4, "1.4"), (0, "0"), (-0.0, "0"), (5e-10, "0"), (2 / 3, "0.6667"), (123456.7, "123457"), (None, "–"), (True, "yes"),
     (float("inf"), "no limit"), (0.00002, "2.000e-05"), (99999.6, "100000"), (0.99996, "1"), (-1.25, "-1.25")],
)  # fmt: skip
def test_numbers_have_four_significant_digits(value: float | None, shown: str) -> None:
    assert show(value) == shown


WORDS = st.text(alphabet="abc -", min_size=1, max_size=30).map(str.strip).filter(bool)
NUMBERS = st.one_of(st.none(), st.floats(-1e6, 1e6, allow_nan=False), st.booleans())


@given(st.lists(st.tuples(WORDS, WORDS, NUMBERS, NUMBERS), min_size=1, max_size=6), st.integers(60, 120), st.booleans())
def test_any_table_keeps_to_the_width_and_loses_no_number(rows: list[Row], width: int, grouped: bool) -> None:
    columns = (Column("who"), Column("what"), Column("rate", "mmol/gDW/h", number=True), Column("share", number=True))
    table = Table("any", "Any", columns, tuple(rows), grouped=grouped)
    lines = plain.block(table, width)
    assert max(len(line) for line in lines) <= width
    tokens = " ".join(lines).split()
    for row in rows:
        for cell in row[2:]:
            assert show(cell).split()[0] in tokens


def test_decimal_points_stand_below_one_another() -> None:
    table = Table("t", "T", (Column("what"), Column("n", number=True)), (("a", 1.5), ("b", 12.25), ("c", 3.0)))
    lines = plain.block(table, 80)[2:]
    assert {line.index(".") for line in lines if "." in line} == {lines[0].index(".")}
    assert lines[2].rstrip().endswith("3") and lines[2].index("3") == lines[0].index("1")


def test_a_page_without_blocks_is_a_page() -> None:
    page = Page("Empty", (), "Nothing is asked.", (), Table("t", "T", (Column("a"),), ()))
    assert plain.page(page, 80).startswith("Empty\n")
