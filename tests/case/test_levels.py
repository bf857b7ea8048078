"""Expression rules: each condition by itself, the highest level wins, removal by genes, and what is fitted."""

from __future__ import annotations

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace.case import Conditions, holds, levels
from headrace.case.levels import is_removed
from headrace.values.facts import Expression, HostReaction, Isozyme

from .world import HOST, ROWS, SEEN


def rule(level: str = "on", slug: str = "rule", **conditions: object) -> Expression:
    return Expression(slug, slug, level, SEEN, **conditions)  # type: ignore[arg-type]


def under(*fed: str, also: tuple[str, ...] = (), **fields: object) -> Conditions:
    return Conditions(frozenset(fed), frozenset((*fed, *also)), **fields)  # type: ignore[arg-type]


def row(*rules: str, genes: tuple[tuple[str, ...], ...] = ()) -> HostReaction:
    isozymes = tuple(Isozyme(each) for each in genes)
    return HostReaction("row", "row", "press", "forward", SEEN, "cell", isozymes=isozymes, expression=rules)


@pytest.mark.parametrize(
    ("conditions", "yes", "no"),
    [
        ({"oxygen": "present"}, under("sugar"), under("sugar", oxygen="absent")),
        ({"oxygen": "absent"}, under("sugar", oxygen="absent"), under("sugar")),
        ({"feed_any": ("oil", "acid")}, under("sugar", "oil"), under("sugar", also=("oil",))),
        ({"feed_only": ("oil", "acid")}, under("oil"), under("oil", "sugar")),
        ({"feed_only": ("oil",)}, under("oil", also=("sugar",)), under()),
        ({"feed_without": ("sugar",)}, under("oil", also=("sugar",)), under("oil", "sugar")),
        ({"feed_outside": ("sugar",)}, under("sugar", "oil"), under("sugar", also=("oil",))),
        ({"supplied_any": ("oil",)}, under("sugar", also=("oil",)), under("sugar")),
        ({"supplied_any": ("oil",)}, under("oil"), under("sugar")),
        ({"supplied_without": ("oil",)}, under("sugar"), under("sugar", also=("oil",))),
        ({"removed_regulators": ("repR", "repS")}, under("sugar", removed=frozenset({"repS"})), under("sugar")),
        ({"removed_enzymes": ("milS",)}, under("sugar", removed=frozenset({"milS"})), under("sugar")),
        ({"circumstances": ("drought", "flood")}, under("sugar", circumstances=frozenset({"flood"})), under("sugar")),
        ({"oxygen": "absent", "feed_any": ("oil",)}, under("oil", oxygen="absent"), under("oil")),
    ],
)
def test_each_condition(conditions: dict[str, object], yes: Conditions, no: Conditions) -> None:
    assert holds(rule(**conditions), yes)
    assert not holds(rule(**conditions), no)


def test_a_rule_without_conditions_always_holds() -> None:
    assert holds(rule(), under())


def test_a_rule_switched_off_holds_whatever_its_conditions() -> None:
    assert holds(rule(oxygen="absent"), under("sugar", unruled=frozenset({"rule"})))


@pytest.mark.parametrize(
    ("genes", "removed", "gone"),
    [
        ((), {"a"}, False),
        ((("a",),), {"a"}, True),
        ((("a",), ("b",)), {"a"}, False),
        ((("a",), ("b",)), {"a", "b"}, True),
        ((("a", "b"),), {"b"}, True),
        ((("a", "b"), ("c", "d")), {"b"}, False),
        ((("a", "b"), ("c", "d")), {"b", "c"}, True),
    ],
)
def test_a_row_goes_when_no_isozyme_is_whole(genes: tuple[tuple[str, ...], ...], removed: set[str], gone: bool) -> None:
    assert is_removed(row(genes=genes), frozenset(removed)) is gone


Genes = tuple[tuple[str, ...], ...]


def judged(rules: tuple[Expression, ...], conditions: Conditions, genes: Genes = ()) -> tuple[str, str, bool]:
    host = msgspec.structs.replace(HOST, expressions=rules)
    found = levels(host, [row(*(each.slug for each in rules), genes=genes)], conditions)["row"]
    return found.level, found.kind, found.fitted


def test_the_highest_level_wins() -> None:
    rules = (rule("basal", "leaky"), rule("on", "induced", feed_any=("oil",)))
    assert judged(rules, under("sugar")) == ("basal", "expressed", False)
    assert judged(rules, under("oil")) == ("on", "expressed", False)


def test_fitted_is_only_what_a_fitted_rule_decides() -> None:
    fitted = rule("on", "fitted", removed_enzymes=("milS",))
    gone = under("sugar", removed=frozenset({"milS"}))
    assert judged((fitted,), gone) == ("on", "expressed", True)
    assert judged((fitted, rule("basal", "leaky")), gone) == ("on", "expressed", True)
    assert judged((fitted, rule("on", "induced", feed_any=("sugar",))), gone) == ("on", "expressed", False)


def test_reasons_are_words() -> None:
    found = levels(HOST, ROWS, under("sugar"))
    assert found["mill-large"].reason == "not expressed here; made when only oil is fed; or the small mill is gone"
    assert found["mill-large"].rules == ("oil-only", "oil-relieved")
    assert found["weave-barn"].kind == "not-expressed" and "a design can add it" in found["weave-barn"].reason
    assert levels(HOST, ROWS, under("sugar", removed=frozenset({"milS"})))["mill-small"].reason == "removed with milS"
    assert levels(HOST, ROWS, under("sugar"), frozenset({"press"}))["press"].kind == "removed"


NAMES = st.frozensets(st.sampled_from(["a", "b", "c"]))


@given(
    feed=NAMES,
    more=NAMES,
    gone=NAMES,
    extra=NAMES,
    genes=st.lists(st.frozensets(st.sampled_from(["a", "b", "c"]), min_size=1).map(tuple), max_size=3).map(tuple),
)
def test_removing_more_never_opens_a_row_whose_rules_look_at_no_removal(
    feed: frozenset[str], more: frozenset[str], gone: frozenset[str], extra: frozenset[str], genes: tuple[tuple[str, ...], ...]
) -> None:
    rules = (rule("basal", "leaky"), rule("on", "induced", feed_any=("a",), supplied_without=("b",)))
    order = {"off": 0, "basal": 1, "on": 2}
    less = judged(rules, Conditions(feed, feed | more, removed=gone), genes)[0]
    most = judged(rules, Conditions(feed, feed | more, removed=gone | extra), genes)[0]
    assert order[most] <= order[less]


@given(feed=NAMES, more=NAMES, oxygen=st.sampled_from(["present", "absent"]))
def test_a_rule_and_its_opposite_never_hold_together(feed: frozenset[str], more: frozenset[str], oxygen: str) -> None:
    conditions = Conditions(feed, feed | more, oxygen)
    assert holds(rule(feed_any=("a", "b")), conditions) != holds(rule(feed_without=("a", "b")), conditions)
    assert holds(rule(supplied_any=("a",)), conditions) != holds(rule(supplied_without=("a",)), conditions)
    assert holds(rule(oxygen="present"), conditions) != holds(rule(oxygen="absent"), conditions)
    if feed:
        assert holds(rule(feed_only=("a", "b")), conditions) != holds(rule(feed_outside=("a", "b")), conditions)
