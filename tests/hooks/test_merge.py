"""What plugins propose is applied in one place, and disagreements are findings."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import pytest

from headrace.errors import PluginError
from headrace.hooks import merge
from headrace.values.answers import AddedTable, Document, Draw, Ledger, LedgerRow, PoolTerm, RefillAnswer, TableColumn
from headrace.values.case import Demand, Finding

OUTLET = Demand("cadaverine", "cadaverine", "diamines", {}, "cytosol", rate=1.0)


def draw(**changes: Any) -> Draw:
    given: dict[str, Any] = dict(
        outlet="cadaverine",
        label="cadaverine",
        scale=("outlet.0",),
        pools=(PoolTerm("a-pool", "cytosol", taken=Fraction(1)),),
        needs={},
        skeletons=Fraction(1),
        steps={},
        routes=(),
        origin="route",
    )
    return Draw(**(given | changes))


def ledger(
    drained: float = 2.0, released: float = 0.5, removed: float = 0.25, supplied: float = 0.75, gap: float = 0.0
) -> Ledger:
    """drained + released + removed = refilled + supplied, with `gap` too little on the right. 2 + 0.5 + 0.25 = 2 + 0.75."""
    refilled = drained + released + removed - supplied - gap
    rows = [
        LedgerRow("left", "drained", "an outlet", "cytosol", drained),
        LedgerRow("left", "released", "a by-product", "cytosol", released),
        LedgerRow("left", "removed", "a removal", "cytosol", removed),
        LedgerRow("right", "refilled", "a refill", "cytosol", refilled),
        LedgerRow("right", "supplied", "a feed", "cytosol", supplied),
    ]
    return Ledger(drained, released, removed, refilled, supplied, 0.0, tuple(rows), ())


def answer(of: Ledger | None = None, word: str = "feasible") -> RefillAnswer:
    return RefillAnswer(word, "least feed carbon", (), of, (), (), (), (), (), (), {})


def test_draws_stand_in_the_order_of_their_outlets() -> None:
    other = draw(outlet="putrescine")
    proposals = [("one", OUTLET, (draw(),)), ("two", OUTLET, (other,))]
    assert merge.draws(proposals) == (draw(), other)


@pytest.mark.parametrize(
    ("proposed", "reason"),
    [
        ((), "gave tuple, not a tuple of draws"),
        (None, "gave NoneType"),
        ([1], "gave list"),
        ((draw(scale=()),), "has no scale"),
        ((draw(origin=""),), "has no origin"),
        ((draw(pools=(PoolTerm("a-pool", "cytosol", returned=Fraction(-1)),)),), "negative term at a-pool (cytosol)"),
    ],
)
def test_a_proposal_that_is_no_draw_is_an_error(proposed: Any, reason: str) -> None:
    with pytest.raises(PluginError) as error:
        merge.draws([("one", OUTLET, proposed)])
    assert error.value.plugin == "one"
    assert reason in str(error.value)


def test_two_plugins_never_drain_one_outlet() -> None:
    with pytest.raises(PluginError, match="plugin two: and plugin one both drain cadaverine"):
        merge.draws([("one", OUTLET, (draw(),)), ("two", OUTLET, (draw(),))])


def test_totals_are_summed_from_the_rows() -> None:
    assert merge.totals(ledger()) == merge.Totals(drained=2.0, made=1.75, gap=0.0, scale=2.75)


def test_the_first_method_stays_the_answer_and_the_others_stand_beside_it() -> None:
    first, second = answer(ledger()), answer(ledger(removed=1.25))
    merged = merge.refills([("one", first), ("two", second)])
    assert (merged.method, merged.answer, merged.others) == ("one", first, (("two", second),))
    assert not merged.findings, "more removal with as much more refill is another optimum, no disagreement"


@pytest.mark.parametrize(
    ("other", "words"),
    [
        (answer(ledger(drained=2.1)), "disagree on skeletons drained: 2 and 2.1"),
        (answer(ledger(released=0.6)), "disagree on skeletons made anew (refilled less removed): 1.75 and 1.85"),
        (answer(None, "infeasible"), "one says feasible, two says infeasible"),
    ],
)
def test_a_disagreement_is_a_stop(other: RefillAnswer, words: str) -> None:
    merged = merge.refills([("one", answer(ledger())), ("two", other)])
    assert {finding.level for finding in merged.findings} == {"stop"}
    assert any(words in finding.message for finding in merged.findings)


def test_a_ledger_that_does_not_close_is_a_stop_whatever_it_says_of_itself() -> None:
    merged = merge.refills([("one", answer(ledger(gap=1e-6)))])
    assert [(finding.level, finding.about) for finding in merged.findings] == [("stop", "one")]
    assert "leave 1e-06" in merged.findings[0].message


def test_failures_of_other_methods_are_kept() -> None:
    failure = Finding("caution", "plugins", "two", "failed")
    assert merge.refills([("one", answer(ledger()))], [failure]).findings == (failure,)


def test_something_else_than_an_answer_is_an_error() -> None:
    with pytest.raises(PluginError, match="plugin one: refills gave dict, not an answer"):
        merge.refills([("one", {})])


def test_findings_are_sorted_and_stand_once() -> None:
    note, stop = Finding("note", "a", "x", "m"), Finding("stop", "b", "x", "m")
    found = merge.findings([("one", [note]), ("two", (note, stop)), ("three", None)])
    assert found == (stop, note)


@pytest.mark.parametrize("wrong", [Finding("warning", "a", "x", "m"), "text"])
def test_a_check_that_gives_no_finding_is_a_stop_with_its_name(wrong: Any) -> None:
    found = merge.findings([("one", [wrong])])
    assert (found[0].level, found[0].about) == ("stop", "one")


def test_documents_keep_their_order() -> None:
    one, two = Document("a.md", "text/markdown", ""), Document("b.csv", "text/csv", "")
    assert merge.documents([("one", [one]), ("two", [two]), ("three", None)]) == (one, two)


@pytest.mark.parametrize("name", ["", ".hidden", "../up.md", "a/b.md", "a\\b.md", "c:x.md", "a\0b"])
def test_a_document_stays_in_its_folder(name: str) -> None:
    with pytest.raises(PluginError, match="is not a plain file name"):
        merge.documents([("one", [Document(name, "text/plain", "")])])


def test_two_documents_never_share_a_name() -> None:
    with pytest.raises(PluginError, match="plugin two: and plugin one both write A.md"):
        merge.documents([("one", [Document("a.md", "", "")]), ("two", [Document("A.md", "", "")])])
    with pytest.raises(PluginError, match="report gave str"):
        merge.documents([("one", ["text"])])


def table(key: str = "sizes", rows: tuple[tuple[float, ...], ...] = ((1.0,),)) -> AddedTable:
    return AddedTable(key, "Sizes", (TableColumn("size", "size", "m", number=True),), rows)


def test_tables_stand_apart_from_findings() -> None:
    note = Finding("note", "one", "about", "said")
    found = merge.said([("one", [note, table()]), ("two", (table("others"),)), ("three", None)])
    assert found.findings == (note,)
    assert [each.key for each in found.tables] == ["sizes", "others"]


@pytest.mark.parametrize(
    ("wrong", "reason"),
    [
        (table("ledger"), "has a key that is taken"),
        (table("no name"), "has a key that is taken or is no plain name"),
        (table(rows=((1.0, 2.0),)), "has a row of another length"),
    ],
)
def test_a_wrong_table_is_a_stop(wrong: AddedTable, reason: str) -> None:
    found = merge.said([("one", [wrong])])
    assert not found.tables
    assert found.findings[0].level == "stop"
    assert reason in found.findings[0].message


def test_two_tables_of_one_key_are_a_stop() -> None:
    found = merge.said([("one", [table()]), ("two", [table()])])
    assert len(found.tables) == 1
    assert "plugin two" in found.findings[0].message
