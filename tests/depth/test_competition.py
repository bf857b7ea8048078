"""Prices against finite differences, the need curve against a dense grid, budgets that close, and what paper says."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import msgspec
import numpy as np
import pytest

from headrace.network import aim, exactly
from headrace.network.budgets import carbon_budget, per_litre, pool_budgets
from headrace.network.build import build, programme
from headrace.network.curve import curve
from headrace.network.prices import aim_costs, as_needed, prices, settled
from headrace.run import Desk
from headrace.solve.certificate import certify, rounded
from headrace.solve.linear import INFINITY, Session
from headrace.solve.vertex import Rational
from headrace.values.case import Limit
from headrace.values.facts import Quantity
from tests.depth.test_parametric import from_a_grid
from tests.network import world

EXAMPLES = Path(__file__).parents[2] / "examples" / "scenarios"
STEP = Fraction(1, 10**5)


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def two_outlets(uptake: str = "", growth: str = "0.1 /h", oxygen: str = "aerobic") -> dict:
    feed = {"substrate": "glucose"} | ({"uptake": uptake} if uptake else {})
    return {"title": "two outlets", "host": "escherichia-coli", "growth": growth, "feed": [feed], "conditions": {"oxygen": oxygen},
            "outlet": [{"product": "L-lysine", "rate": "0.5 mmol/gDW/h"}, {"product": "L-glutamate", "rate": "0.3 mmol/gDW/h"}]}


QUESTIONS = {"free feed": two_outlets(), "stated feed": two_outlets("6 mmol/gDW/h"), "yeast": EXAMPLES / "heme-from-succinyl-coa.toml",
             "acetate": EXAMPLES / "glutamate-on-acetate.toml"}


@pytest.mark.parametrize("name", QUESTIONS)
def test_prices_equal_finite_differences(desk: Desk, name: str) -> None:
    """Of the proven optima exactly, and of the float solver's as far as its tolerance goes."""
    _, net, _ = settled(desk.facts, desk.case(QUESTIONS[name]))
    fed, carbon = as_needed(net)
    stated, costs = exactly.rational(net), aim_costs(net)
    for price in prices(net):
        change = exactly.draws_of(net, price.scalar)
        before, after = (certify(fed.shifted(change, t), [carbon]).objectives[0] for t in (Fraction(0), STEP))
        assert price.carbon == (after - before) / STEP
        before, after = (certify(stated.shifted(change, t), costs).objectives[-1] for t in (Fraction(0), STEP))
        assert price.refill == (after - before) / STEP == sum(price.refills.values())
        weights = np.array([float(c) for c in carbon])
        floats = [Session(rounded(fed.shifted(change, t))).minimise(weights).objective for t in (Fraction(0), Fraction(1, 1000))]
        assert float(price.carbon) == pytest.approx((floats[1] - floats[0]) * 1000, rel=1e-5)


def test_what_one_more_takes_from_another_equals_a_finite_difference(desk: Desk) -> None:
    """At the feed carbon of the case, with one outlet a little higher, the largest other one by the float solver."""
    _, net, solved = settled(desk.facts, desk.case(QUESTIONS["free feed"]))
    found = prices(net)
    assert {price.scalar for price in found} == {"outlet.0", "outlet.1", "growth"}
    step = 1e-4
    for price in found:
        for other, lost in price.instead.items():
            rates = {k: r + (step if k == price.scalar else 0.0) for k, r in net.rates.items() if k != other}
            session = Session(programme(net, free={other: {other: 1.0}}, rates=rates))
            session.row(aim.carbon_cost(net, session.columns), -INFINITY, float(certify(*_one(as_needed(net))).objectives[0]))
            gain = np.zeros(session.columns)
            gain[len(net.columns)] = 1.0
            assert float(lost) == pytest.approx((net.rates[other] - session.maximise(gain).objective) / step, rel=1e-3, abs=1e-5)


def _one(needed: tuple[Rational, list[Fraction]]) -> tuple[Rational, list[list[Fraction]]]:
    return needed[0], [needed[1]]


def in_order(lp: Rational, costs: list[list[Fraction]]) -> float:
    """The least last cost among the points that are least in all costs before, by the float solver alone."""
    floats = rounded(lp)
    session, value = Session(floats), np.nan
    for cost in costs:
        found = session.minimise(np.array([float(c) for c in cost]))
        value = found.objective
        for j in np.flatnonzero(np.abs(found.reduced) > 1e-9):
            side = floats.col_lower[j] if found.reduced[j] > 0 else floats.col_upper[j]
            session.bound(int(j), side, side)
        for i in np.flatnonzero(np.abs(found.duals) > 1e-9):
            side = floats.row_lower[i] if found.duals[i] > 0 else floats.row_upper[i]
            session.bound_row(int(i), side, side)
    return value


@pytest.mark.parametrize("name", ["lysine-on-glucose", "heme-from-succinyl-coa"])
def test_bends_equal_those_of_a_dense_grid(desk: Desk, name: str) -> None:
    case, _, _ = settled(desk.facts, desk.case(EXAMPLES / f"{name}.toml"))
    found = curve(desk.facts, case, 0)
    assert found is not None
    _, net, _ = settled(desk.facts, msgspec.structs.replace(case, limits=()))
    change, lp, costs = exactly.draws_of(net, "outlet.0"), exactly.rational(net), aim_costs(net)
    grid = np.linspace(float(found.bends[0].rate), float(found.bends[-1].rate), 161)
    value = np.array([in_order(lp.shifted(change, Fraction(float(t)) - found.asked), costs) for t in grid])
    ours = [b for a, b in zip(found.bends, found.bends[1:-1], strict=False) if a.slope != b.slope]
    np.testing.assert_allclose([float(b.rate) for b in ours], from_a_grid(grid, value), atol=1e-7)
    assert len(ours) >= 1
    np.testing.assert_allclose([float(found.at(Fraction(float(t))).need) for t in grid], value, atol=1e-7)


def test_the_curve_and_its_capacities_on_paper() -> None:
    """Product p needs p refill and 1.1 p + 0.5 fuel; with 2.7 fuel p is at most 2. A capacity of 1.5 carries p = 1.5."""
    case = world.case(uptake=2.7, limits=(Limit("refill", ("refill",), 1.5),), rate=1.0)
    found = curve(world.facts(), case, 0)
    assert found is not None and found.largest
    assert [(b.rate, b.need, b.yields) for b in found.bends] == [(0, 0, 0), (2, 2, Fraction(20, 27))]
    (line,) = found.crossings
    assert (line.rate, line.yields) == (Fraction(3, 2), Fraction(15, 27))
    free = curve(world.facts(), world.case(rate=1.0), 0)
    assert free is not None and not free.largest
    assert [(b.rate, b.feed, b.need) for b in free.bends] == [(0, Fraction(1, 2), 0), (2, Fraction(27, 10), 2)]
    assert free.at(Fraction(1)).yields == Fraction(10, 16)


def test_prices_on_paper() -> None:
    """One product: 1 refill (1 fuel, 1 CO2, 1 ATP) and 0.1 fuel burnt with 0.25 O2 for that ATP."""
    (price,) = prices(settled(world.facts(), world.case())[1])
    assert (price.carbon, price.feed, price.refill) == (Fraction(33, 10), {"fuel": Fraction(11, 10)}, 1)
    assert (price.oxygen, price.carbon_dioxide, price.instead) == (Fraction(1, 4), Fraction(3, 10) - 1, {})


def test_budgets_close_and_the_phosphotransferase_takes_one_per_glucose(desk: Desk) -> None:
    _, net, solved = settled(desk.facts, desk.case(EXAMPLES / "lysine-on-glucose.toml"))
    entries = (*pool_budgets(net, solved.x, solved.scalars), *carbon_budget(net, solved.x, solved.scalars))
    pools = {entry.pool for entry in entries}
    assert {"phosphoenolpyruvate (cytosol)", "pyruvate (cytosol)", "inorganic carbon"} <= pools
    for pool in pools:
        assert sum(entry.rate for entry in entries if entry.pool == pool) == pytest.approx(0, abs=1e-6)
        assert sum(entry.share for entry in entries if entry.pool == pool and entry.rate > 0) == pytest.approx(1)
    (uptake,) = [e for e in entries if e.pool.startswith("phosphoenolpyruvate") and e.kind == "uptake"]
    fed = sum(solved.rate(j) for j in aim.feed_columns(net))
    assert -uptake.rate == pytest.approx(fed) and fed > 1
    given_off = [e for e in entries if e.pool == "inorganic carbon" and e.kind == "crossing"]
    assert sum(e.rate for e in given_off) < -1


def test_oxygen_and_heat_per_litre_by_hand(desk: Desk) -> None:
    """1.75 O2 in 10 gDW/L at 460 kJ/mol: 17.5 mmol/L/h, 8.05 kJ/L/h, 2.236 W/L."""
    facts = world.facts()
    heat = Quantity("heat", "host", "heat-per-oxygen", Fraction(460), "460", "kj-per-mol", "assumed", world.SEEN, Fraction(440), Fraction(460))
    host = facts.hosts["host"]
    facts.hosts["host"] = msgspec.structs.replace(host, quantities=(*host.quantities, heat))
    _, net, solved = settled(facts, world.case())
    found = per_litre(net, solved, 10.0)
    assert (found.oxygen, found.heat, found.watts) == (pytest.approx(17.5), pytest.approx(8.05), pytest.approx(8.05 / 3.6))
    assert found.heat_span == (pytest.approx(7.7), pytest.approx(8.05)) and found.feed == pytest.approx(27)
    unknown = per_litre(build(world.facts(), world.case()), solved, 10.0)
    assert unknown.heat is None and unknown.oxygen == pytest.approx(17.5)
    for host in desk.facts.hosts.values():
        (known,) = [q for q in host.quantities if q.kind == "heat-per-oxygen"]
        assert known.value == 460 and known.basis.sources


def test_without_oxygen_heat_is_not_known(desk: Desk) -> None:
    _, net, solved = settled(desk.facts, desk.case(EXAMPLES / "succinate-without-oxygen.toml"))
    assert per_litre(net, solved, 20.0).heat is None


def test_stated_feeds_are_priced_in_their_proportions() -> None:
    _, net, _ = settled(world.facts(), world.case(uptake=4.0))
    programme_, cost = as_needed(net)
    assert len(programme_.columns) == len(net.columns) + 1 and cost[-1] == 3
    assert certify(programme_, [cost]).objectives[0] == Fraction(81, 10)
    assert programme_.col_upper[aim.feed_columns(net)[0]] == 0
