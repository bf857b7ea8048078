"""Sums over the steps of a route: pools taken and returned, what only carries nitrogen, and the needs.

taken = sum of what single steps take,  returned = sum of what single steps give,  net = taken - returned
shuttled = min(what steps take of an anchor to load a nitrogen carrier, what comes back); part of neither
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Protocol

from headrace.graph.boundary import Boundary
from headrace.network.sites import Step, terms_of
from headrace.values.answers import PoolTerm
from headrace.values.facts import Compound, Facts, Host

Pool = tuple[str, str]
Sums = dict[Pool, Fraction]
Moves = list[list[tuple[Pool, Fraction]]]


class Book(Protocol):
    """What the sums need of a route book."""

    facts: Facts
    host: Host
    boundary: Boundary


@dataclass(frozen=True)
class Totals:
    """pools, needs and crossings as in RouteVector."""

    pools: tuple[PoolTerm, ...]
    needs: dict[str, Fraction]
    crossings: dict[str, Fraction]


def totals(book: Book, rates: Mapping[Step, Fraction], amounts: Mapping[Pool, Fraction], free: frozenset[str]) -> Totals:
    """The sums of a composition: rates (mole per step), amounts (mole drawn per pool; negative = given back).

    free: the boundary compounds in force.
    """
    moves = [[(pool, count * rate) for pool, count in terms_of(book.facts, book.host, step)] for step, rate in rates.items()]
    taken, given = _gross(moves, amounts, free | set(book.boundary.form))
    shuttled = _shuttled(book.facts, moves, given)
    pools = []
    for pool in sorted({*taken, *given}):
        compound = book.facts.compounds[pool[0]]
        if compound.anchor or compound.precursor:
            moved = shuttled.get(pool, Fraction(0))
            term = PoolTerm(*pool, taken=taken[pool] - moved, returned=given[pool] - moved, shuttled=moved)
            if term.taken or term.returned or term.shuttled:
                pools.append(term)
    crossings: dict[str, Fraction] = defaultdict(Fraction)
    for (name, _), count in taken.items():
        crossings[name] += count
    for (name, _), count in given.items():
        crossings[name] -= count
    crossings = {name: count for name, count in sorted(crossings.items()) if count}
    return Totals(tuple(pools), needs(book.facts, crossings), crossings)


def _gross(moves: Moves, amounts: Mapping[Pool, Fraction], free: frozenset[str]) -> tuple[Sums, Sums]:
    """What single steps and the draw itself take from and give to the boundary pools."""
    taken: Sums = defaultdict(Fraction)
    given: Sums = defaultdict(Fraction)
    for move in moves:
        for pool, made in move:
            if pool[0] in free:
                (given if made > 0 else taken)[pool] += abs(made)
    for pool, amount in amounts.items():
        if pool[0] in free:
            (taken if amount > 0 else given)[pool] += abs(amount)
    return taken, given


def _shuttled(facts: Facts, moves: Moves, given: Sums) -> Sums:
    """Per anchor pool: the lesser of what loads nitrogen carriers and what comes back.

    A nitrogen carrier of an anchor is a compound with more nitrogen that one step of the route makes from the anchor
    and another takes to give it back.
    """
    loads: dict[Pool, dict[str, Fraction]] = defaultdict(lambda: defaultdict(Fraction))
    unloads: set[tuple[Pool, str]] = set()
    compounds = facts.compounds
    for move in moves:
        for pool, count in move:
            if not compounds[pool[0]].anchor:
                continue
            for (name, _), other in move:
                if _carries_nitrogen(compounds[name], compounds[pool[0]]) and other * count < 0:
                    if count < 0:
                        loads[pool][name] -= count
                    else:
                        unloads.add((pool, name))
    return {
        pool: min(sum((n for name, n in by.items() if (pool, name) in unloads), Fraction(0)), given.get(pool, Fraction(0)))
        for pool, by in loads.items()
    }


def _carries_nitrogen(compound: Compound, anchor: Compound) -> bool:
    return not compound.carrier and "C" in compound.formula and compound.formula.get("N", 0) > anchor.formula.get("N", 0)


def needs(facts: Facts, crossings: Mapping[str, Fraction]) -> dict[str, Fraction]:
    """Needs from net amounts taken: {need: mole}, positive = used, negative = made; zero ones left out.

    atp counts phosphoryl groups beyond the adenylate with the fewest, so that ATP to AMP is 2. one-carbon counts the
    carbons on their carriers and free one-carbon acids. oxygen counts a peroxide as half, since it falls apart.
    """
    found: dict[str, Fraction] = defaultdict(Fraction)

    def add(need: str, name: str, weight: Fraction | int) -> None:
        if crossings.get(name):
            found[need] += crossings[name] * weight

    for need, role, element in (("atp", "adenylate", "P"), ("one-carbon", "one-carbon-carrier", "C")):
        members = [facts.compounds[name] for name in facts.roles.get(role, ())]
        least = min((c.formula[element] for c in members), default=0)
        for compound in members:
            add(need, compound.slug, compound.formula[element] - least)
    for name in facts.roles.get("one-carbon", ()):
        add("one-carbon", name, facts.compounds[name].formula["C"])
    for reduced in facts.electron_pairs:
        add("quinol" if facts.compounds[reduced].membrane else reduced, reduced, 1)
    for need, role, weight in (
        ("co2", "inorganic-carbon", Fraction(1)),
        ("ammonium", "ammonium", Fraction(1)),
        ("oxygen", "oxygen", Fraction(1)),
        ("oxygen", "peroxide", Fraction(1, 2)),
    ):
        for name in facts.roles.get(role, ()):
            add(need, name, weight)
    return {need: count for need, count in sorted(found.items()) if count}
