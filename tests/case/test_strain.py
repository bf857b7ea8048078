"""What a strain edit names, and which rows it removes, adds, turns round or limits."""

from __future__ import annotations

from typing import Any

import pytest

from headrace.errors import InputError
from headrace.values.case import Case

from .world import QUANTITIES, ROWS, messages, resolve, row, stated


def strain(*, host: dict[str, Any] | None = None, **edits: object) -> Case:
    """The world with [strain] keys given as Python values."""
    lines = [f"{key} = {value!r}".replace("'", '"') for key, value in edits.items()]
    return resolve(stated("[strain]\n" + "\n".join(lines)), host=host)


def off(case: Case, kind: str = "removed") -> set[str]:
    return {slug for slug, level in case.levels.items() if level.kind == kind}


@pytest.mark.parametrize(
    ("name", "rows", "genes"),
    [
        ("milS", {"mill-small"}, {"milS"}),
        ("MILs", {"mill-small"}, {"milS"}),
        ("prsA", set(), {"prsA"}),
        ("wvnB", {"weave"}, {"wvnB"}),
        ("repR", set(), {"repR"}),
        ("wvnAB", {"weave"}, {"wvnA", "wvnB"}),
        ("loomase", {"weave", "weave-barn"}, {"wvnA", "wvnB", "wvnC"}),
        ("juicer", {"press"}, {"prsA", "prsB", "prsC"}),
        ("3.1.1.1", {"weave", "weave-barn"}, {"wvnA", "wvnB", "wvnC"}),
        ("EC 3.1.1.1", {"weave", "weave-barn"}, {"wvnA", "wvnB", "wvnC"}),
        ("loomase in the barn", {"weave-barn"}, {"wvnC"}),
        ("weave-barn", {"weave-barn"}, {"wvnC"}),
        ("carry sugar", {"carry-sugar"}, set()),
        ("millase", {"mill-small", "mill-large"}, {"milS", "milL"}),
    ],
)
def test_remove(name: str, rows: set[str], genes: set[str]) -> None:
    case = strain(remove=[name])
    assert off(case) == rows == set(case.removed_rows)
    assert set(case.removed_genes) == genes


def test_two_isozymes_together() -> None:
    assert off(strain(remove=["prsA", "prsC"])) == {"press"}


def test_a_shared_gene_stays_when_one_enzyme_goes() -> None:
    rows = (*ROWS, row("mill-other", "mill-large", "milL+wvnA"))
    case = strain(remove=["loomase"], host={"reactions": rows})
    assert case.removed_genes == ("wvnB", "wvnC")
    assert case.levels["mill-other"].kind != "removed"


def test_a_regulator_triggers_its_rule() -> None:
    assert strain().levels["weave"].level == "basal"
    level = strain(remove=["repR"]).levels["weave"]
    assert (level.level, level.rules, level.fitted) == ("on", ("weave-relieved",), False)


def test_an_enzyme_removed_by_name_triggers_a_fitted_rule_and_a_finding_says_so() -> None:
    case = strain(remove=["millase-small"])
    assert case.levels["mill-large"].level == "on" and case.levels["mill-large"].fitted
    assert any("no prediction" in message for message in messages(case, "fitted-rule"))


@pytest.mark.parametrize(
    ("name", "rows"),
    [
        ("millase-large", {"mill-large"}),
        ("milL", {"mill-large"}),
        ("mill large", {"mill-large"}),
        ("2.1.1.2", {"mill-large"}),
        ("loomase", {"weave", "weave-barn"}),
        ("loomase in the barn", {"weave-barn"}),
        ("feedback-free loomase in the barn", {"weave-barn"}),
    ],
)
def test_add_what_the_host_has(name: str, rows: set[str]) -> None:
    case = strain(add=[name])
    assert off(case, "added") == rows == set(case.added)
    assert all(case.levels[row].level == "on" for row in rows)


def test_add_what_is_there_already_is_a_note() -> None:
    case = strain(add=["improved millase (small)"])
    assert case.added == ()
    assert messages(case, "already-present") == ["improved millase (small): mill small is present and on already"]
    assert "'improved' changes no balance" in messages(case, "described")[0]


def test_add_a_foreign_enzyme() -> None:
    case = strain(add=["kilnase"])
    row = case.rows["fire-brought-into-cell"]
    assert (row.reaction, row.place, row.direction, row.isozymes) == ("fire", "cell", "forward", ())
    assert case.levels[row.slug].kind == "added"
    [found] = [finding for finding in case.findings if finding.check == "brought-in"]
    assert found.message == "kilnase is brought into the cytosol; Meadow has none there: no clay"
    assert found.source == "Paper (2001)"


@pytest.mark.parametrize("text", ["kilnase in the barn running in reverse", "EC 4.1.1.1 in the barn, in reverse"])
def test_add_elsewhere_and_in_reverse(text: str) -> None:
    row = strain(add=[text]).rows["fire-brought-into-barn-reverse"]
    assert (row.place, row.direction, row.label) == ("barn", "reverse", "fire, barn, running in reverse")


def test_add_a_host_enzyme_in_another_compartment() -> None:
    case = strain(add=["fruit pressase in the barn"])
    assert case.rows["press-brought-into-barn"].place == "barn"
    assert case.levels["press"].kind == "expressed"


def test_add_a_carrier() -> None:
    row = strain(add=["carry tile"]).rows["carry-tile-brought-into-field"]
    assert (row.place, row.outer, row.inner) == ("", "field", "cell")
    inner = strain(add=["carry tile in the barn"]).rows["carry-tile-brought-into-barn"]
    assert (inner.outer, inner.inner) == ("cell", "barn")


def test_turn_a_row_round() -> None:
    case = strain(add=["fruit pressase running in reverse"])
    assert case.rows["press-turned"].direction == "reverse" and case.levels["press-turned"].kind == "added"
    assert case.levels["press"].kind == "expressed"
    both = strain(remove=["prsA", "prsB"], add=["fruit pressase both ways"])
    assert {both.levels[slug].kind for slug in ("press", "press-turned")} == {"added"}


def test_removed_and_added_again() -> None:
    case = strain(remove=["milS"], add=["millase-small"])
    assert case.levels["mill-small"].kind == "added"
    assert messages(case, "removed-and-added")


@pytest.mark.parametrize(
    ("edits", "says"),
    [
        ({"remove": ["kilnase"]}, "Meadow has no kilnase"),
        ({"remove": ["loomase in the cytosol in reverse"]}, "unknown gene"),
        ({"remove": ["prsA in the barn"]}, "Meadow has no prsA in the barn"),
        ({"remove": ["big loomase"]}, "unknown gene"),
        ({"add": ["loomase in the attic"]}, "has no compartment 'attic'"),
        ({"add": ["no loomase"]}, "can't take something away"),
        ({"add": ["repR"]}, "repR is a regulator"),
        ({"add": ["lomase"]}, "unknown gene"),
        ({"add": ["carry tile in the cytosol"]}, "can't stand in"),
    ],
)
def test_refused(edits: dict[str, object], says: str) -> None:
    with pytest.raises(InputError, match=says) as caught:
        strain(**edits)
    assert caught.value.key.startswith("strain.") and caught.value.line


def test_the_reason_of_an_absence_is_the_hint() -> None:
    with pytest.raises(InputError) as caught:
        strain(remove=["kilnase"])
    assert caught.value.hint.startswith("no clay")


def limit(text: str, **host: Any) -> Case:
    return resolve(stated(f"[strain.limit]\n{text}"), host=host)


def test_a_limit_is_shared_by_all_rows_of_the_enzyme() -> None:
    [found] = limit('loomase = "0.5 mmol/gDW/h"').limits
    assert (found.label, found.rows, found.rate) == ("loomase", ("weave", "weave-barn"), 0.5)


def test_a_limit_as_activity() -> None:
    """0.12 U/mg with 0.5 g protein per gDW: 60 * 0.12 * 0.5 = 3.6 mmol/gDW/h; 60 U/gDW = 3.6 mmol/gDW/h."""
    [found] = limit('loomase = "0.12 U/mg"').limits
    assert found.rate == pytest.approx(3.6) and "0.5 g protein per gDW" in found.origin
    assert limit('loomase = "60 U/gDW"').limits[0].rate == pytest.approx(3.6)


def test_a_limit_of_zero_closes() -> None:
    case = limit('"fruit pressase" = "0 mmol/gDW/h"')
    assert (case.levels["press"].level, case.levels["press"].kind) == ("off", "no-capacity")


def test_a_limit_on_what_is_brought_in() -> None:
    text = '[strain]\nadd = ["kilnase"]\nlimit = { kilnase = "1 mmol/gDW/h", millase = "2 mmol/gDW/h" }'
    first, second = resolve(stated(text)).limits
    assert first.rows == ("fire-brought-into-cell",)
    assert second.rows == ("mill-small", "mill-large") and second.label == "millase (large) and millase (small)"


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ('kilnase = "1 mmol/gDW/h"', "Meadow has no kilnase"),
        ('prsA = "1 mmol/gDW/h"', "one of several isozymes"),
        ('loomase = "1 mmol/gDW/h"\n"EC 3.1.1.1 " = "1 mmol"', "not a unit"),
        ('loomase = "1 mmol/gDW/h"\nLoomase = "2 mmol/gDW/h"', "limited twice"),
    ],
)
def test_refused_limits(text: str, says: str) -> None:
    with pytest.raises(InputError, match=says) as caught:
        limit(text)
    assert caught.value.key.startswith("strain.limit.")


def test_an_activity_needs_the_protein_fraction() -> None:
    with pytest.raises(InputError, match="no protein fraction is known for Meadow"):
        limit('loomase = "0.12 U/mg"', quantities=tuple(q for q in QUANTITIES if q.kind != "protein-fraction"))

