"""The network against a world solved on paper (tests/network/world.py), and against planted faults."""

from __future__ import annotations

from fractions import Fraction

import msgspec
import pytest

from headrace.network import aim
from headrace.network.build import build
from headrace.network.ceiling import largest
from headrace.network.grows import largest_growth
from headrace.network.nothing import prove
from headrace.network.requirement import require
from headrace.values.answers import Draw, PoolTerm
from headrace.values.case import Limit
from headrace.values.facts import Term

from . import world


def rates(answer):
    return {r.reaction: r.rate for r in answer.rates}


def test_the_least_feed_is_what_paper_says():
    answer = require(build(world.facts(), world.case()))
    assert answer.answer == "feasible" and answer.aim == aim.AIM_FREE
    found = rates(answer)
    assert found["refill"] == pytest.approx(2) and found["burn"] == pytest.approx(0.7)
    assert found["unmake"] == pytest.approx(0, abs=1e-9)
    crossing = {c.compound: c.rate for c in answer.crossings}
    assert crossing["fuel"] == pytest.approx(2.7) and crossing["air"] == pytest.approx(1.75)
    assert crossing["gas"] == pytest.approx(-0.1)
    assert max(abs(v) for v in answer.closure.values()) < 1e-9


def test_the_ledger_closes_with_each_term_on_its_side():
    ledger = require(build(world.facts(), world.case())).ledger
    assert (ledger.net_drain, ledger.refilled) == (pytest.approx(2), pytest.approx(2))
    assert ledger.removed == ledger.released == ledger.supplied == 0
    assert abs(ledger.residual) < 1e-9
    (inside,) = ledger.compartments
    assert (inside.drained, inside.refilled) == (pytest.approx(2), pytest.approx(2)) and abs(inside.residual) < 1e-9


def draw(skeletons: int = 1) -> Draw:
    """The product's exact route vector: one acid."""
    pools = (PoolTerm("acid", "inside", taken=Fraction(1)),)
    return Draw("product", "product", ("outlet.0",), pools, {}, Fraction(skeletons), {"turn": Fraction(1)}, ("rt",), "paper")


def test_route_vectors_and_contents_agree():
    assert abs(require(build(world.facts(), world.case()), (draw(),)).ledger.residual) < 1e-9


@pytest.mark.parametrize("wrong", [{"product": 2}, {"product": 0}, {"acid": 2, "product": 2}])
def test_a_wrong_content_leaves_a_residual(wrong):
    """Contents and route vectors are two accounts: a wrong content can't agree with both."""
    assert abs(require(build(world.facts(**wrong), world.case()), (draw(),)).ledger.residual) > 0.5


def test_a_dropped_return_leaves_a_residual():
    assert abs(require(build(world.facts(), world.case()), (draw(skeletons=2),)).ledger.residual) > 0.5


def test_a_dropped_term_is_caught_by_closure():
    facts = world.facts()
    broken = facts.reactions["turn"]
    facts.reactions["turn"] = msgspec.structs.replace(broken, terms=(Term("product", broken.terms[1].count),))
    answer = require(build(facts, world.case()))
    assert abs(answer.closure["C"]) > 1


def test_requirement_range_necessity_capacity_and_cover():
    limited = world.case(limits=(Limit("refill", ("refill",), 3.0),))
    answer = require(build(world.facts(), limited))
    (row,) = [r for r in answer.refills if r.open]
    assert (row.least, row.nominal, row.most) == (pytest.approx(2, abs=1e-5), pytest.approx(2), pytest.approx(2, abs=1e-5))
    assert row.necessary and row.capacity == 3 and row.cover == pytest.approx(1.5)
    assert row.atp == 1 and row.carbon_fixed == 1 and row.skeletons_per_turn == 1
    assert answer.design_cover == pytest.approx(1.5)


def test_a_reversed_removal_is_a_refill_and_the_group_has_one_requirement():
    """With unmake both ways it refills without ATP, so the aim prefers it: feed 2.5 on paper (burn 0.5)."""
    answer = require(build(world.facts(), world.case(both=("unmake",))))
    assert sum(f.uptake for f in answer.feed) == pytest.approx(2.5)
    (group,) = answer.groups
    assert set(group.members) == {"refill", "unmake-in-reverse"} and group.nominal == pytest.approx(2)
    assert group.necessary and not any(r.necessary for r in answer.refills if r.open)


def test_a_closed_refill_makes_it_infeasible_with_reason_shortage_and_repair():
    answer = require(build(world.facts(), world.case(off=("refill",))))
    assert answer.answer == "infeasible"
    assert {s.pool for s in answer.shortage} <= {"acid (inside)", "product (inside)"}
    assert sum(s.missing for s in answer.shortage) == pytest.approx(2)
    (closed,) = [r for r in answer.refills if r.refill == "refill"]
    assert not closed.open and closed.reason == "shut for the test"
    assert "express refill (shut for the test)" in [r.change for r in answer.repairs]


def test_a_stated_uptake_is_held_and_the_surplus_named():
    answer = require(build(world.facts(), world.case(uptake=4.0)))
    assert answer.aim == aim.AIM_FIXED and sum(f.uptake for f in answer.feed) == pytest.approx(4)
    assert answer.surplus_carbon == pytest.approx(3 * (4 - 2.7))


def test_too_small_an_uptake_is_infeasible_with_a_factor():
    """Uptake 1.6: refill t*2 costs 2t fuel and 0.2t fuel as ATP, maintenance 0.5: 2.2 t + 0.5 = 1.6, t = 0.5."""
    answer = require(build(world.facts(), world.case(uptake=1.6)))
    assert answer.answer == "infeasible"
    (lower,) = [r for r in answer.repairs if r.kind == "lower"]
    assert "0.5 of what is asked" in lower.change


def test_without_oxygen_maintenance_can_not_be_met():
    answer = require(build(world.facts(), world.case(oxygen="anaerobic")))
    assert answer.answer == "infeasible"


def test_slack_widens_the_range_and_says_its_cap():
    tight = require(build(world.facts(), world.case()))
    loose = require(build(world.facts(), world.case(slack=0.2)))
    assert loose.groups[0].most > tight.groups[0].most + 0.1 and loose.cycling_cap > 0
    assert loose.groups[0].least == pytest.approx(2, abs=1e-6)


def test_the_ceiling_on_paper():
    """No maintenance: 1 fuel per product and 0.1 burnt for its ATP: 1/1.1 mol/mol; with ATP free 1."""
    net = build(world.facts(), world.case(rate=0.0, uptake=10.0, maintenance=0.0))
    assert largest(net) == pytest.approx(1 / 1.1)
    assert largest(net, energy=True) == pytest.approx(1)


def test_nothing_from_nothing_and_a_planted_leak():
    assert prove(world.facts(), [("open", world.case())]) == []
    facts = world.facts()
    gain = msgspec.structs.replace(facts.reactions["unmake"], terms=(*facts.reactions["unmake"].terms, Term("acid", facts.reactions["unmake"].terms[1].count * 2)))
    facts.reactions["unmake"] = gain
    assert prove(facts, [("open", world.case())])


def test_growth_needs_composition():
    rate, found, _ = largest_growth(world.facts(), world.case())
    assert found.status == "unbounded" and rate == 0.0
