"""Whether draws close: what the steps make is what was asked for less what the pools gave, and nothing else of weight.

With n_i the net of the steps, d_i what one mole of the outlet draws and p_i = taken - returned of the pools:

    r_i = n_i - d_i + p_i      must be 0 for every compound i that the facts do not give freely,
    sum_i n_i f_ie = 0         for every element e and for charge (f_ie atoms of e in i),
    skeletons = sum_i p_i y_i  over the pools (y_i skeleton content)

All exact. Freely given are minerals, gases, water, protons, one-carbon units and coenzymes that change form.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from fractions import Fraction

from headrace.graph.boundary import Boundary
from headrace.values.answers import Draw
from headrace.values.case import Case, Demand
from headrace.values.facts import Facts

Amounts = dict[str, Fraction]


def asked(facts: Facts, case: Case, outlet: Demand, draws: Sequence[Draw]) -> Amounts:
    """What one mole of the outlet draws: as the draws say, where options decide it, else as the facts say.

    For growth it is what one gram of cells draws by the host's composition, whatever the draws say.
    """
    if outlet.draws:
        said: Amounts = defaultdict(Fraction)
        for draw in draws:
            for compound, count in draw.draws.items():
                said[compound] += count
        return said or dict(outlet.draws)
    state = "absent" if case.oxygen == "anaerobic" else "present"
    amounts: Amounts = defaultdict(Fraction)
    for part in facts.hosts[case.host].composition:
        if part.oxygen in ("", state):
            amounts[part.compound] += part.amount
    return amounts


def faults(facts: Facts, draws: Sequence[Draw], drawn: Mapping[str, Fraction]) -> Iterator[str]:
    """What does not close, in words. draws: all of one outlet; drawn: what they draw together."""
    net = steps_net(facts, draws)
    pools: Amounts = defaultdict(Fraction)
    for draw in draws:
        for term in draw.pools:
            pools[term.compound] += term.taken - term.returned
    yield from _elements(facts, net)
    free = freely_given(facts)
    for name in sorted({*net, *drawn, *pools}):
        rest = net.get(name, Fraction(0)) - drawn.get(name, Fraction(0)) + pools.get(name, Fraction(0))
        if rest and name not in free:
            terms = ("the steps make", net), ("the outlet draws", drawn), ("pools give", pools)
            yield f"{name}: " + ", ".join(f"{words} {amounts.get(name, 0)}" for words, amounts in terms)
    for draw in draws:
        counted = Fraction(0)
        for term in draw.pools:
            counted += (term.taken - term.returned) * facts.contents.get(term.compound, Fraction(0))
        if counted != draw.skeletons:
            yield f"{draw.label}: {draw.skeletons} skeletons, but its pools carry {counted}"


def steps_net(facts: Facts, draws: Sequence[Draw]) -> Amounts:
    """n_i = sum over draws and steps of rate times count."""
    net: Amounts = defaultdict(Fraction)
    for draw in draws:
        for step, rate in draw.steps.items():
            for term in facts.reactions[step].terms:
                net[term.compound] += rate * term.count
    return net


def freely_given(facts: Facts) -> set[str]:
    """Compounds that a route may take and give without saying so among its pools: all but anchors and precursors."""
    boundary = Boundary(facts)
    carriers = {compound.slug for compound in facts.compounds.values() if compound.carrier}
    pools = {compound.slug for compound in facts.compounds.values() if compound.anchor or compound.precursor}
    return (set(boundary.free) | set(boundary.form) | carriers) - pools


def _elements(facts: Facts, net: Amounts) -> Iterator[str]:
    sums: Amounts = defaultdict(Fraction)
    for name, count in net.items():
        compound = facts.compounds[name]
        sums["charge"] += count * compound.charge
        for element, atoms in compound.formula.items():
            sums[element] += count * atoms
    yield from (f"{element} does not close: {rest} left over" for element, rest in sorted(sums.items()) if rest)
