"""The review: question, verdict, assumptions with their sources, every table, cautions, and the tables as CSV."""

from __future__ import annotations

import csv
from io import StringIO

import msgspec
import pytest
from tests.outputs import samples
from tests.outputs.test_markdown_and_csv import cells

from headrace.outputs.overview import page as overview
from headrace.pages import markdown
from headrace.values.answers import Document, Result
from headrace_plugins.reports.review import Options, Review

CEILING = samples.result("ceiling")
RESULT = samples.result("refills", related=(CEILING,))
ORDER = (
    "# Design review: AB-1, amber on sugar", "Question: ", "**Outlets and growth drain", "## Assumptions", "## Skeletons by outlet",
    "## Per mole of outlet, by pool", "## Drains at the stated rates", "## Ledger of skeletons", "## Requirement by group",
    "## Requirement by refill", "## Closed refills", "## Cost of the refills", "## Ceiling of amber", "## Routes of the outlets", "## Findings",
    "## The scenario as written", "## Cautions", "## Sources", "headrace ",
)  # fmt: skip


def documents(result: Result = RESULT, options: Options = Options()) -> dict[str, Document]:  # noqa: B008
    return {document.name: document for document in Review().report(result, options)}


def test_the_review_goes_from_question_to_sources() -> None:
    text = documents()["ab-1.md"].text
    places = [text.index(part) for part in ORDER]
    assert places == sorted(places)


@pytest.mark.parametrize(
    "sentence",
    [
        "A stoichiometric requirement is a lower bound from a model, not a measurement.",
        "Recalled facts are marked",
        "Building and handling engineered organisms is subject to local biosafety rules and to review by the responsible body.",
    ],
)
def test_cautions_are_printed(sentence: str) -> None:
    assert sentence in documents()["ab-1.md"].text


def test_assumptions_have_value_unit_origin_reading_and_source() -> None:
    table = cells(documents()["ab-1.md"].text)[0]
    assert table[0] == ["assumption", "value", "unit", "origin", "reading", "source"]
    rows = {row[0]: row[1:] for row in table[1:]}
    assert rows["maintenance"] == ["2.0 (1 to 3)", "mmol/gDW/h", "assumed", "recalled †", "[1]"]
    assert rows["feed: sugar"] == ["5", "mmol/gDW/h", "stated in the scenario", "", ""]
    assert rows["oxygen"][2] == "assumed, since the scenario leaves it out"
    assert rows["growth-associated-atp"][2] == "stated in the scenario"
    assert rows["acid shunt: sugar is not fed"] == ["off", "", "expression rule", "recalled †", "[1]"]


def test_every_number_that_a_cell_cites_is_in_the_source_list() -> None:
    text = documents()["ab-1.md"].text
    assert text.endswith("plugins whole-network\n")
    sources = text.split("## Sources")[1]
    assert "2. Miller A; Smith B (2001) J Imag Biol 1:1-9 doi:10.0000/paper" in sources
    assert "1. Textbook of invented cells" in sources and "3. " not in sources


def test_the_scenario_is_shown_as_written() -> None:
    assert RESULT.case.source_text in documents()["ab-1.md"].text


def test_tables_are_csv_files_that_read_back() -> None:
    found = documents()
    names = "assumptions drains ledger refills groups crossings ceilings routes findings sources".split()
    assert set(found) == {"ab-1.md", *(f"ab-1-{name}.csv" for name in names)}
    for name in names:
        rows = list(csv.reader(StringIO(found[f"ab-1-{name}.csv"].text)))
        assert len(rows) > 1 and {len(row) for row in rows} == {len(rows[0])}
    ledger = list(csv.DictReader(StringIO(found["ab-1-ledger.csv"].text)))
    sides = {side: sum(float(row["skeletons (mmol/gDW/h)"]) for row in ledger if row["side"] == side) for side in ("leaves", "comes in")}
    assert sides["leaves"] == pytest.approx(sides["comes in"], abs=1e-9)


def test_sources_in_csv_have_the_numbers_of_the_document() -> None:
    rows = list(csv.reader(StringIO(documents()["ab-1-sources.csv"].text)))[1:]
    sources = documents()["ab-1.md"].text.split("## Sources")[1]
    assert all(f"{number}. {text}" in sources for number, text in rows) and len(rows) == 2


def test_options_choose_the_question_and_leave_tables_out() -> None:
    found = documents(options=Options(question="Is pyc enough?", tables=False))
    assert set(found) == {"ab-1.md"}
    assert "Question: Is pyc enough?" in found["ab-1.md"].text


def test_an_infeasible_design_gets_a_review_that_says_no() -> None:
    text = documents(samples.result("refills", samples.infeasible()))["ab-1.md"].text
    assert "**No, this design can't run: C4 acid (vesicle) can't be served." in text
    assert "## What is missing" in text and "## Smallest changes that would open it" in text
    assert "## Ledger of skeletons" not in text


def test_other_questions_have_no_review() -> None:
    assert not documents(CEILING)


@pytest.mark.parametrize(("path", "title", "stem"), [("a/B 1.toml", "T", "b-1"), ("", "HR-12, lysine", "hr-12-lysine"), ("", "", "scenario")])
def test_documents_are_named_after_the_scenario(path: str, title: str, stem: str) -> None:
    case = samples.case(path=path, title=title)
    assert f"{stem}.md" in documents(samples.result("refills", case=case))


def test_same_result_same_documents() -> None:
    assert documents() == documents()


def test_several_scenarios_get_an_overview() -> None:
    other = msgspec.structs.replace(samples.result("refills", samples.infeasible()), case=samples.case(title="AB-2"))
    text = markdown.page(overview([RESULT, other], "0.1.0"))
    assert "**1 of 2 designs can run as stated.**" in text
    rows = cells(text)[0]
    assert [row[0] for row in rows[1:]] == ["AB-1, amber on sugar", "AB-2"]
    assert rows[2][2:5] == ["–", "–", "–"]
