"""Closure: elements and electrons recomputed from the printed crossings and drawn compounds alone, never from S.

    sum over crossings rate * n_E  =  sum over drawn compounds rate * n_E      for E in C, N, P, S, metals
    electrons per molecule  gamma = 4 C + H - 2 O - 3 N + 6 S + 5 P - charge  (+ 2 per divalent metal atom)

Degree of reduction with CO2, H2O, NH3, sulfate and phosphate as reference states (Roels JA 1983, Energetics and
Kinetics in Biotechnology; from memory).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from headrace.network.build import Network
from headrace.solve.linear import Floats
from headrace.values.answers import Crossing

SKIPPED = {"H", "O"}
# Reference oxidation states: what an atom contributes to the degree of reduction when it leaves as its reference compound.
ELECTRONS = {"C": 4, "H": 1, "O": -2, "N": -3, "S": 6, "P": 5}
METAL = 2


def electrons(formula: Mapping[str, int], charge: int) -> int:
    """Degree of reduction of one molecule, mol electrons per mol (glucose 24, CO2 0, O2 -4)."""
    return sum(ELECTRONS.get(e, METAL) * n for e, n in formula.items()) - charge


def crossings(net: Network, x: Floats) -> tuple[Crossing, ...]:
    """Net rate of each compound across the cell's boundary, into the cell positive.

    Water and H+ pools that the network leaves free are summed up: what the columns use there must have come in.
    """
    net_rate: dict[str, float] = {}
    for j, column in enumerate(net.columns):
        if column.kind in ("enter", "leave"):
            net_rate[column.name] = net_rate.get(column.name, 0.0) + (x[j] if column.kind == "enter" else -x[j])
    return tuple(Crossing(n, float(v)) for n, v in sorted(net_rate.items()) if abs(v) > 1e-9)


def free_crossings(net: Network, x: Floats, scalars: Mapping[str, float]) -> tuple[Crossing, ...]:
    """Water and protons from the free pools: drawn minus made, into the cell positive."""
    total: dict[str, float] = {}
    made = dict.fromkeys(net.free, 0.0)
    for j in range(len(net.columns)):
        for pool, count in net.entries[j].items():
            if pool in made:
                made[pool] += count * float(x[j])
    for scalar, rate in scalars.items():
        for pool, amount in net.demands.get(scalar, {}).items():
            if pool in made:
                made[pool] -= amount * rate
    motive = set(net.facts.roles["motive-proton"])
    proton = net.facts.roles["proton"][0]
    for pool, value in made.items():
        name = proton if net.pools[pool][0] in motive else net.pools[pool][0]
        total[name] = total.get(name, 0.0) - value
    return tuple(Crossing(n, v) for n, v in sorted(total.items()) if abs(v) > 1e-9)


def drawn(net: Network, scalars: Mapping[str, float]) -> tuple[Crossing, ...]:
    """What outlets, biomass and maintenance draw from the network, net per compound; drawn negative."""
    total: dict[str, float] = {}
    for scalar, rate in scalars.items():
        for pool, amount in net.demands.get(scalar, {}).items():
            total[net.pools[pool][0]] = total.get(net.pools[pool][0], 0.0) - amount * rate
    return tuple(Crossing(n, v) for n, v in sorted(total.items()) if abs(v) > 1e-12)


def closure(net: Network, moved: Iterable[Crossing]) -> dict[str, float]:
    """What is left over per element and for electrons when all crossings and draws are summed (should vanish)."""
    total: dict[str, float] = {k: 0.0 for k in ("C", "N", "P", "S", "electrons")}
    for crossing in moved:
        compound = net.facts.compounds[crossing.compound]
        for element, count in compound.formula.items():
            if element not in SKIPPED:
                total[element] = total.get(element, 0.0) + count * crossing.rate
        total["electrons"] += electrons(compound.formula, compound.charge) * crossing.rate
    return total
