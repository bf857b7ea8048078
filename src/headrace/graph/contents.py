"""Skeleton content y of every compound: how many C4 backbones of the cycle one mole carries.

    anchors 1; precursors, coenzymes and what a route takes or gives freely 0
    on biosynthetic routes:  sum_i y_i S_ij = 0  for every reaction j of every route     (one exact solution)
    elsewhere, repeated until nothing changes:
      fed:   what some host takes up from the medium carries none
      made:  what a reaction makes from known compounds carries what those carry; of several ways the least counts
      rest:  0

A reaction of a route conserves skeletons by construction, so what makes or unmakes them (a refill, a removal) is
always outside. "made" goes by the directions in which hosts run a reaction, never by how it is written: propanoyl-CoA
comes from fed propanoate and carries none, hence methylmalonyl-CoA none and methylcitrate one, and the mutase to
succinyl-CoA refills. Degradation products fall out the same way. Coenzymes are 0 by definition, so the last step into
one unmakes what its precursors carried. Contents must be whole; one that is not is a fault of the facts.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from fractions import Fraction

from headrace.errors import FactsError
from headrace.graph.boundary import Boundary
from headrace.solve.exact import solve
from headrace.values.facts import Facts, Reaction

Contents = dict[str, Fraction]
ZERO, ONE = Fraction(0), Fraction(1)


def contents(facts: Facts) -> Contents:
    """Skeletons per mole of every compound, whole numbers. Raises FactsError where routes contradict one another."""
    known = fixed(facts)
    known |= on_routes(facts, known)
    known |= off_routes(facts, known)
    for name, value in known.items():
        if value.denominator != 1 or value < 0:
            raise FactsError(f"carries {value} skeletons, which is no whole number", node=f"compound/{name}")
    return dict(sorted(known.items()))


def turnover(reaction: Reaction, known: Mapping[str, Fraction]) -> Fraction:
    """Skeletons that one turn of a reaction as written makes (> 0) or unmakes (< 0): sum of count times content."""
    return sum((term.count * known[term.compound] for term in reaction.terms), ZERO)


def fixed(facts: Facts) -> Contents:
    """Contents by definition."""
    boundary = Boundary(facts)
    known: Contents = {}
    for name, compound in facts.compounds.items():
        if compound.anchor:
            known[name] = ONE
        elif compound.carrier or name in boundary.free or name in boundary.form:
            known[name] = ZERO
    return known


def on_routes(facts: Facts, known: Mapping[str, Fraction]) -> Contents:
    """Contents of all compounds that route reactions name, from sum_i y_i S_ij = 0 over those reactions.

    Raises FactsError when no contents fit, with the reactions at odds, or when some are not determined.
    """
    reactions = sorted({name for route in facts.routes.values() for name in route.uses})
    unknown = sorted({t.compound for name in reactions for t in facts.reactions[name].terms if t.compound not in known})
    number = {name: j for j, name in enumerate(unknown)}
    columns: list[dict[int, Fraction]] = [defaultdict(Fraction) for _ in unknown]
    right = [ZERO] * len(reactions)
    for i, name in enumerate(reactions):
        for term in facts.reactions[name].terms:
            if term.compound in known:
                right[i] -= term.count * known[term.compound]
            else:
                columns[number[term.compound]][i] += term.count
    answer = solve(columns, right)
    if answer.status == "none":
        odds = ", ".join(reactions[i] for i in sorted(answer.clash or {}))
        raise FactsError(f"routes give contradictory skeleton contents; at odds: {odds}", node="route")
    if answer.status == "many":
        open_ones = ", ".join(unknown[j] for j in answer.free)
        raise FactsError(
            f"routes do not determine the skeleton content of {open_ones}",
            node="route",
            hint="a waste that only leaves belongs to the role by-product",
        )
    return dict(zip(unknown, answer.x, strict=True))


def off_routes(facts: Facts, known: Mapping[str, Fraction]) -> Contents:
    """Contents of the compounds that no route names, by the rules above."""
    start = dict(known) | {name: ZERO for name in _fed(facts) if name not in known}
    turns = [turn for turn in _turns(facts) if any(name not in start for name in turn)]
    found = start
    for _ in range(len(facts.compounds)):
        least = start | _made(turns, start, found)
        if least == found:
            return {name: ZERO for name in facts.compounds if name not in found} | found
        found = least
    raise FactsError("the skeleton contents off routes do not settle", node="compound")


def _made(turns: Iterable[Mapping[str, Fraction]], start: Contents, now: Contents) -> Contents:
    """The least that each compound outside `start` carries by the reactions that make it from what is known now."""
    least: Contents = {}
    for turn in turns:
        for name, count in turn.items():
            others = [(other, n) for other, n in turn.items() if other != name]
            if name in start or count < 0 or any(other not in now for other, _ in others):
                continue
            brought = -sum((n * now[other] for other, n in others), ZERO) / count
            value = brought if brought > 0 and brought.denominator == 1 else ZERO
            least[name] = min(value, least.get(name, value))
    return least


def _turns(facts: Facts) -> list[dict[str, Fraction]]:
    """Each reaction in each direction that some host runs it; both ways round for one that no host has."""
    ways: dict[str, set[int]] = defaultdict(set)
    for host in facts.hosts.values():
        for row in host.reactions:
            ways[row.reaction] |= {"forward": {1}, "reverse": {-1}, "both": {1, -1}}[row.direction]
    turns = []
    for name, reaction in sorted(facts.reactions.items()):
        net: dict[str, Fraction] = defaultdict(Fraction)
        for term in reaction.terms:
            net[term.compound] += term.count
        for sign in sorted(ways.get(name, {1, -1})):
            turns.append({compound: sign * count for compound, count in net.items() if count})
    return turns


def _fed(facts: Facts) -> set[str]:
    """Compounds that a host's carrier or enzyme takes from the medium."""
    found = set()
    for host in facts.hosts.values():
        medium = next(c.slug for c in host.compartments if c.role == "medium")
        for row in host.reactions:
            sides = {"outer": row.outer, "inner": row.inner, "": row.place}
            if medium not in sides.values():
                continue
            signs = {"forward": (-1,), "reverse": (1,), "both": (-1, 1)}[row.direction]
            for term in facts.reactions[row.reaction].terms:
                if sides[term.side] == medium and any(term.count * sign > 0 for sign in signs):
                    found.add(term.compound)
    return found
