"""All smallest sets of refills: against brute force over all subsets and against a mixed-integer programme; and their prices."""

from __future__ import annotations

import time
from pathlib import Path

import pytest

from headrace.network.alternatives import alternatives
from headrace.network.build import build, programme
from headrace.network.refills import open_refills
from headrace.run import Desk
from headrace.solve.linear import Session
from headrace.solve.sets import smallest
from headrace.values.case import Limit
from tests.depth.several import HOSTS, brute_force, mixed_integer, network
from tests.network import world

EXAMPLES = Path(__file__).parents[2] / "examples" / "scenarios"


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def test_equal_to_brute_force_and_to_a_mixed_integer_programme(desk: Desk, capsys: pytest.CaptureFixture[str]) -> None:
    """24 cases in four hosts; in three of these 12 refills each, reversed ones among them."""
    counts: dict[str, list[int]] = {host: [] for host in HOSTS}
    dozen, backward, spent = 0, 0, [0.0, 0.0, 0.0]
    for seed in range(24):
        net = network(desk, seed)
        refills, lp = open_refills(net), programme(net)
        columns = [r.column for r in refills]
        started = time.perf_counter()
        found = smallest(lp, [[j] for j in columns])
        halfway = time.perf_counter()
        brute = brute_force(lp, columns)
        later = time.perf_counter()
        limits = {limit.label: limit.rate for limit in net.case.limits}
        mixed = mixed_integer(lp, columns, [limits[r.row] for r in refills])
        spent = [s + t for s, t in zip(spent, (halfway - started, later - halfway, time.perf_counter() - later), strict=True)]
        assert found.complete and set(found.sets) == brute == set(mixed)
        assert len(mixed) == len(brute)
        counts[net.case.host].append(len(brute))
        dozen += len(refills) >= 12
        backward += any(r.sign < 0 for r in refills)
    with capsys.disabled():
        print(f"\nsets per case: {counts}; {dozen} cases of 12 refills; seconds by levels {spent[0]:.1f}, by brute force {spent[1]:.1f}, "
              f"by mixed-integer programme {spent[2]:.1f}")
    assert dozen >= 18 and backward == 24 and sum(sum(each) > 5 for each in counts.values()) >= 3


def test_hundreds_in_seconds(desk: Desk, capsys: pytest.CaptureFixture[str]) -> None:
    """22 refills in two compartments, each of which can carry a fraction only. The mixed-integer programme gets 100 of the sets."""
    net = network(desk, 7, "yarrowia-lipolytica", 24, 0.3)
    refills = open_refills(net)
    started = time.perf_counter()
    found = alternatives(net)
    ours = time.perf_counter() - started
    limits = {limit.label: limit.rate for limit in net.case.limits}
    started = time.perf_counter()
    mixed = mixed_integer(programme(net), [r.column for r in refills], [limits[r.row] for r in refills], most=100)
    theirs = time.perf_counter() - started
    with capsys.disabled():
        print(f"\n{found.found} sets of up to {found.search.level} of {len(refills)} refills, found and priced in {ours:.1f} s "
              f"({found.search.solves} programmes); a mixed-integer programme takes {theirs:.1f} s for the first {len(mixed)}")
    assert found.search.complete and found.found == len(found.rows) > 300 and ours < 30
    assert set(mixed) <= set(found.search.sets) and len(mixed) == 100


def test_every_set_works_and_none_of_its_members_can_go(desk: Desk) -> None:
    net = network(desk, 4)
    session, refills = Session(programme(net)), {r.slug: r for r in open_refills(net)}

    def works(taken: set[str]) -> bool:
        for slug, refill in refills.items():
            session.bound(refill.column, 0.0, 1e9 if slug in taken else 0.0)
        return session.feasible()

    rows = alternatives(net).rows
    assert len(rows) > 10
    for row in rows:
        assert works(set(row.set))
        assert not any(works(set(row.set) - {each}) for each in row.set)


def test_ranked_by_feed_then_energy_and_priced_against_the_best(desk: Desk) -> None:
    rows = alternatives(network(desk, 4)).rows
    keys = [(round(row.carbon, 6), round(row.atp, 6), round(row.redox, 6), -round(row.fixed, 6)) for row in rows]
    assert keys == sorted(keys)
    assert rows[0].extra == 0 and all(row.extra == pytest.approx(row.carbon - rows[0].carbon) for row in rows)


def test_the_prices_on_paper() -> None:
    """`refill` spends an ATP per acid: feed 2.7 * 3 carbons. `unmake` backward spends none: feed 2.5 * 3 (world.py)."""
    found = alternatives(build(world.facts(), world.case(both=("unmake",))))
    first, second = found.rows
    assert (first.set, second.set) == (("unmake-in-reverse",), ("refill",))
    assert (first.carbon, second.carbon, second.extra) == (pytest.approx(7.5), pytest.approx(8.1), pytest.approx(0.6))
    assert (first.atp, second.atp) == (pytest.approx(0, abs=1e-9), pytest.approx(2))
    assert (first.fixed, second.fixed) == (pytest.approx(2), pytest.approx(2))
    assert second.rates == {"refill": pytest.approx(2)} and second.enzyme is None
    both = alternatives(build(world.facts(), world.case(both=("unmake",), limits=(Limit("a", ("refill",), 1.2), Limit("b", ("unmake",), 1.2)))))
    assert [row.set for row in both.rows] == [("refill", "unmake-in-reverse")]


def test_no_refill_needed_is_one_empty_set() -> None:
    (only,) = alternatives(build(world.facts(), world.case(rate=None))).rows
    assert only.set == () and only.rates == {} and only.extra == 0


def test_with_changes_closed_refills_take_part(desk: Desk) -> None:
    net = build(desk.facts, desk.case(EXAMPLES / "threonine-without-carboxylase.toml"))
    assert alternatives(net).rows == ()
    found = alternatives(net, changes=True)
    by_set = {row.set: row for row in found.rows}
    assert {("pep-carboxylase",), ("pyruvate-carboxylase",), ("malate-synthase-aceb",), ("pep-carboxykinase-atp-in-reverse",)} <= set(by_set)
    kept = by_set[("pep-carboxylase",)]
    assert kept.changes[0].startswith("keep") and "removed" in kept.reasons[0]
    assert by_set[("malate-synthase-aceb",)].carbon > kept.carbon
    opened = build(desk.facts, desk.case(EXAMPLES / "lysine-on-glucose.toml"))
    rows = alternatives(opened, changes=True).rows
    assert any(not row.changes for row in rows) and any(row.changes for row in rows)


def test_a_stated_uptake_is_held_but_the_price_is_the_least_feed() -> None:
    found = alternatives(build(world.facts(), world.case(uptake=4.0, both=("unmake",))))
    assert [row.carbon for row in found.rows] == [pytest.approx(7.5), pytest.approx(8.1)]
