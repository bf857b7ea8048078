"""Published rescues and deletions against repairs and alternatives (growth_facts.toml names the source of each fact).

A mutant that does not grow, and grows with one supplement or one more gene removed, must have that among its repairs. A
mutant that has lost refills only must grow if and only if one of the wild type's smallest sets of refills is left to it.
"""

from __future__ import annotations

import pytest

from headrace.network.alternatives import alternatives
from headrace.network.build import build
from headrace.network.refills import open_refills
from headrace.network.repair import mend
from headrace.run import Desk
from tests.external.test_growth import FACTS, scenario


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def slow(fact: dict) -> dict:
    """The fact's scenario with feed as needed, so that only what is missing stops it."""
    found = scenario(fact)
    return {**found, "feed": [{"substrate": feed["substrate"]} for feed in found["feed"]]}


def pairs() -> list[tuple[dict, str, str]]:
    """(a fact that says no, what rescues it, its kind), from another fact that differs in just that."""
    found = []
    for no in (fact for fact in FACTS if not fact["grows"]):
        for yes in (fact for fact in FACTS if fact["grows"]):
            if (no["host"], no["feed"], no["oxygen"]) != (yes["host"], yes["feed"], yes["oxygen"]):
                continue
            more = set(yes["supplements"]) - set(no["supplements"]), set(yes["remove"]) - set(no["remove"])
            less = set(no["supplements"]) - set(yes["supplements"]), set(no["remove"]) - set(yes["remove"])
            if not any(less) and sorted(map(len, more)) == [0, 1]:
                found.append((no, *((more[0].pop(), "supplement") if more[0] else (more[1].pop(), "regulator"))))
    return found


def test_there_are_published_rescues() -> None:
    assert {kind for _, _, kind in pairs()} == {"supplement", "regulator"} and len(pairs()) >= 4


@pytest.mark.parametrize(("fact", "rescue", "kind"), pairs(), ids=lambda value: value["id"] if isinstance(value, dict) else value)
def test_a_published_rescue_is_among_the_repairs(desk: Desk, fact: dict, rescue: str, kind: str) -> None:
    question = slow(fact)
    net = build(desk.facts, desk.case(question))
    found = mend(net, lambda changes: desk.case(question, changes=changes))
    assert any(each.repair.kind == kind and rescue.lower() in each.repair.change.lower() for each in found), [m.repair.change for m in found]


def test_deletions_of_refills_agree_with_the_wild_types_sets(desk: Desk, capsys: pytest.CaptureFixture[str]) -> None:
    seen = []
    for fact in FACTS:
        wild = build(desk.facts, desk.case(slow({**fact, "remove": []})))
        mutant = desk.case(slow(fact))
        lost = {row for row in mutant.removed_rows if wild.case.levels[row].level != "off"}
        refills = open_refills(wild)
        if not lost or not lost <= {refill.row for refill in refills}:
            continue
        slugs = {refill.slug for refill in refills if refill.row in lost}
        left = any(not slugs & set(row.set) for row in alternatives(wild).rows)
        gained = any(mutant.levels[slug].level != "off" and level.level == "off" for slug, level in wild.case.levels.items())
        if not gained:
            seen.append((fact["id"], left, fact["grows"]))
    with capsys.disabled():
        print(f"\ndeletions of refills: {len(seen)} facts, {sum(left == grows for _, left, grows in seen)} agree")
    assert len(seen) >= 5
    assert [each for each in seen if each[1] != each[2]] == []
