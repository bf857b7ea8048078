"""Repairs of infeasible cases, each applied to the scenario and solved: it opens the case, and none of its parts can be left out."""

from __future__ import annotations

import random
from fractions import Fraction

import pytest

from headrace.network.build import build, programme
from headrace.network.changes import ORDER, measured, widen
from headrace.network.repair import explain, mend
from headrace.network.shortage import shortage
from headrace.run import Desk
from headrace.solve.linear import Session
from headrace.values.case import Limit
from headrace.values.changes import Change, Raise, Scale, Uptake
from tests.depth.asked import question
from tests.network import world

COLI, GLUTAMICUM, BAKER, OILY = "escherichia-coli", "corynebacterium-glutamicum", "saccharomyces-cerevisiae", "yarrowia-lipolytica"


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def asked(host: str, feed: dict[str, str], outlets: dict[str, str], growth: str = "0.05 /h", oxygen: str = "aerobic", **strain: object) -> dict:
    return {"title": "to be repaired", "host": host, "growth": growth, "feed": [feed], "strain": strain,
            "conditions": {"oxygen": oxygen, "supplements": ["biotin"] if host == GLUTAMICUM else []},
            "outlet": [{"product": p, "rate": r} for p, r in outlets.items()]}


GLUCOSE = {"substrate": "glucose"}
CASES = {
    "no carboxylase": asked(COLI, GLUCOSE, {"L-threonine": "1 mmol/gDW/h"}, remove=["ppc"]),
    "two steps of two routes": asked(COLI, GLUCOSE, {"L-lysine": "0.5 mmol/gDW/h", "L-threonine": "0.5 mmol/gDW/h"}, "0 /h", remove=["lysA", "thrC"]),
    "two limits": asked(COLI, GLUCOSE, {"L-lysine": "2 mmol/gDW/h"}, limit={"pep-carboxylase": "0.5 mmol/gDW/h", "diaminopimelate-decarboxylase": "1 mmol/gDW/h"}),
    "too little feed": asked(COLI, {"substrate": "glucose", "uptake": "2 mmol/gDW/h"}, {"L-lysine": "2 mmol/gDW/h", "L-threonine": "1 mmol/gDW/h"}),
    "no shunt": asked(COLI, {"substrate": "acetate"}, {}, remove=["aceA"]),
    "both carboxylases gone": asked(GLUTAMICUM, GLUCOSE, {"L-lysine": "1 mmol/gDW/h"}, remove=["pyc", "ppc"]),
    "yeast without its refill": asked(BAKER, GLUCOSE, {"L-aspartate": "0.5 mmol/gDW/h"}, remove=["PYC1", "PYC2"]),
    "no oxygen": asked(OILY, {"substrate": "glucose", "uptake": "9 mmol/gDW/h"}, {"citrate": "1 mmol/gDW/h"}, oxygen="anaerobic"),
}


def feasible(desk: Desk, scenario: object, changes: tuple[Change, ...]) -> bool:
    return Session(programme(build(desk.facts, desk.case(scenario, changes=changes)))).feasible()


def tried(desk: Desk, scenario: object) -> list:
    """The repairs of a scenario, each tried out with every part left out in turn."""
    net = build(desk.facts, desk.case(scenario))
    assert not feasible(desk, scenario, ())
    found = mend(net, lambda changes: desk.case(scenario, changes=changes))
    for each in found:
        assert feasible(desk, scenario, each.changes), each.repair.change
        for number in range(len(each.parts)):
            rest = tuple(c for k, part in enumerate(each.parts) if k != number for c in part)
            assert not feasible(desk, scenario, rest), f"{each.repair.change} without part {number}"
        assert not any(c in (None, ()) for c in each.parts)
    return list(found)


@pytest.mark.parametrize("name", CASES)
def test_each_repair_opens_the_case_and_needs_all_its_parts(desk: Desk, name: str) -> None:
    found = tried(desk, CASES[name])
    kinds = {each.repair.kind for each in found}
    assert kinds <= {*ORDER, "joint"}
    expected = {"no carboxylase": {"reopen", "express", "regulator", "reverse", "add"}, "two steps of two routes": {"joint"},
                "two limits": {"joint", "lower"}, "too little feed": {"uptake", "lower"}, "no shunt": {"reopen", "supplement"},
                "both carboxylases gone": {"reopen", "express", "reverse"}, "yeast without its refill": {"reopen", "add", "supplement"},
                "no oxygen": set()}
    assert expected[name] <= kinds


def test_random_infeasible_cases(desk: Desk, capsys: pytest.CaptureFixture[str]) -> None:
    counts = {"cases": 0, "repairs": 0, "of several parts": 0}
    for seed in range(1000, 1060):
        scenario = question(random.Random(seed))
        if feasible(desk, scenario, ()) or counts["cases"] >= 12:
            continue
        found = tried(desk, scenario)
        counts["cases"] += 1
        counts["repairs"] += len(found)
        counts["of several parts"] += sum(len(each.parts) > 1 for each in found)
    with capsys.disabled():
        print(f"\nrandom infeasible cases: {counts}")
    assert counts["cases"] == 12 and counts["repairs"] > 20


def test_amounts_are_the_least_that_suffice(desk: Desk) -> None:
    """One per cent less of each raise or uptake, one per cent more of each rate, and the case stays shut."""
    seen = set()
    for name in ("too little feed", "two limits"):
        for each in tried(desk, CASES[name]):
            changes = [_less(change) for change in each.changes]
            if any(old != new for old, new in zip(each.changes, changes, strict=True)):
                assert not feasible(desk, CASES[name], tuple(changes)), each.repair.change
                seen |= {type(change) for change in each.changes}
    assert seen >= {Raise, Scale, Uptake}


def _less(change: Change) -> Change:
    if isinstance(change, Raise) and change.rate is not None:
        return Raise(change.limit, change.rate * 0.99)
    if isinstance(change, Uptake) and change.rate is not None:
        return Uptake(change.compound, change.rate * 0.99)
    return Scale(change.outlet, change.factor * Fraction(101, 100)) if isinstance(change, Scale) else change


def test_closed_refills_that_would_open_it_are_named_with_their_reason(desk: Desk) -> None:
    net = build(desk.facts, desk.case(CASES["no carboxylase"]))
    _, found, words = explain(net)
    said = " ".join(finding.message for finding in words)
    for repair in found:
        if repair.refills:
            assert repair.change in said and repair.reason and (repair.reason in said)
    assert {slug for repair in found for slug in repair.refills} >= {"pep-carboxylase", "pyruvate-carboxylase", "malate-synthase-aceb"}


def test_the_shortage_and_its_price_on_paper() -> None:
    """Without the refill 2 acid are missing. It is an anchor of 4 carbons, which one closed refill serves: 5 * 0.99 each."""
    (short,), surplus = shortage(build(world.facts(), world.case(off=("refill",))))
    assert (short.pool, surplus) == ("acid (inside)", []) and short.missing == pytest.approx(2)
    assert short.price == pytest.approx(4.95)
    without_air = shortage(build(world.facts(), world.case(oxygen="anaerobic")))[0]
    assert [s.pool for s in without_air] == ["full (inside)"] and without_air[0].missing == pytest.approx(7)


def test_a_limit_on_paper_is_raised_to_what_is_needed() -> None:
    net = build(world.facts(), world.case(limits=(Limit("refill", ("refill",), 1.5),)))
    found = {each.repair.kind: each for each in mend(net)}
    assert found["raise"].changes == (Raise("refill", 2.0),)
    assert "from 1.5 to 2 mmol/gDW/h" in found["raise"].repair.change
    assert found["lower"].changes == (Scale("product", Fraction(3, 4)),)


def test_an_amount_is_rounded_to_the_safe_side() -> None:
    wide = widen(build(world.facts(), world.case(limits=(Limit("refill", ("refill",), 1.5),))))
    option = next(o for o in wide.options if o.kind == "raise")
    assert measured(option, 1 / 3).changes == (Raise("refill", 1.83334),)
    assert measured(option, 0.5 + 1e-13).changes == (Raise("refill", 2.0),)
    lower = next(o for o in wide.options if o.kind == "lower")
    assert measured(lower, 2 / 3).changes == (Scale("product", Fraction(666666, 10**6)),)
