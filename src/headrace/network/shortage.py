"""What is missing in a case that can't be met, pool by pool, with its price.

An elastic LP lets every anchor, precursor and drawn pool be topped up and every feed be thrown away,

    minimise  sum c_p s_p   subject to   S v + s = d,   s >= 0,

with c_p = 1 + the carbon of one mole (three times that for pools that are only drawn, so that the root is named; a little
less where closed refills would serve the pool, a little more outside the cytosol, so that ties are settled). Its s_p are
missing (mmol/gDW/h). Where no carbon helps, energy and electron carriers are topped up at 1 a mole, and pools cost a hundred
times as much. The price of a pool is the LP's dual: by how much the weighted shortage falls per mole put there.
"""

from __future__ import annotations

import numpy as np

from headrace.network.build import Network, cytosol_of, medium_of, programme
from headrace.network.ceiling import discharge, electron_sources
from headrace.network.refills import closed_refills
from headrace.solve.linear import INFINITY, Session
from headrace.values.answers import Shortage

POWER, DEARER = 1.0, 100.0


def shortage(net: Network) -> tuple[tuple[Shortage, ...], list[tuple[str, float]]]:
    """(pools that are short, the worst first; feeds that can't be used up, name and rate in mmol/gDW/h)."""
    facts = net.facts
    drawn = {p for k in net.demands for p, a in net.demands[k].items() if a > 0}
    tops = [p for p, (name, place) in enumerate(net.pools)
            if p not in net.free and place != medium_of(net.host)
            and (facts.compounds[name].anchor or facts.compounds[name].precursor or p in drawn)]
    feeds = {f.compound for f in net.case.feeds}
    spare = [net.index[(f, medium_of(net.host))] for f in sorted(feeds) if (f, medium_of(net.host)) in net.index]
    power = [discharge(net), *electron_sources(net)]
    extra = [(entry, 0.0, INFINITY) for entry in (*({p: 1.0} for p in tops), *({p: -1.0} for p in spare), *power)]
    session = Session(programme(net, extra=extra))
    start, end = session.columns - len(extra), session.columns - len(power)
    cost, served = np.zeros(session.columns), _served(net)
    topped = [_weight(net, p) * _root(net, p, served) for p in tops]
    cost[start:] = [*topped, *(_weight(net, p) for p in spare), *[POWER] * len(power)]
    for j in range(end, session.columns):
        session.bound(j, 0.0, 0.0)
    found = session.minimise(cost)
    if not found.optimal:
        cost[start : start + len(tops)] *= DEARER
        for j in range(end, session.columns):
            session.bound(j, 0.0, INFINITY)
        found = session.minimise(cost)
    if not found.optimal:
        return (), []
    x = found.x[start:]
    short = [Shortage(name_of(net, p), float(x[i]), float(found.duals[p])) for i, p in enumerate(tops) if x[i] > 1e-7]
    given = x[len(tops) + len(spare) :]
    short += [Shortage(_carriers(net, entry), float(amount), POWER)
              for entry, amount in zip(power, given, strict=True) if amount > 1e-7]
    left = [(facts.compounds[net.pools[p][0]].label, float(x[len(tops) + i])) for i, p in enumerate(spare)
            if x[len(tops) + i] > 1e-7]
    return tuple(sorted(short, key=lambda s: -s.missing)), left


def _carriers(net: Network, entry: dict[int, float]) -> str:
    """What a topping-up of carriers makes, in words."""
    gained = [p for p, amount in entry.items() if amount > 0 and net.facts.compounds[net.pools[p][0]].carrier]
    return " and ".join(name_of(net, p) for p in gained) or name_of(net, max(entry, key=lambda p: entry[p]))


def _weight(net: Network, pool: int) -> float:
    return 1.0 + net.facts.compounds[net.pools[pool][0]].formula.get("C", 0)


def _root(net: Network, pool: int, served: dict[str, int]) -> float:
    """A factor that names the pool at the root, not what hangs on it."""
    name, place = net.pools[pool]
    compound = net.facts.compounds[name]
    root = 1.0 if compound.anchor or compound.precursor else 3.0
    return root * (1.0 - 0.01 * served.get(name, 0) + (0.0 if place == cytosol_of(net.host) else 0.05))


def _served(net: Network) -> dict[str, int]:
    """How many closed refills would make each anchor: of equal pools the one that they serve is named."""
    count: dict[str, int] = {}
    for reaction, sign in {(r.reaction, r.sign) for r in closed_refills(net) if r.kind != "direction"}:
        for term in net.facts.reactions[reaction].terms:
            if term.count * sign > 0 and net.facts.compounds[term.compound].anchor:
                count[term.compound] = count.get(term.compound, 0) + 1
    return count


def name_of(net: Network, pool: int) -> str:
    """A pool in words: compound and compartment."""
    compound, place = net.pools[pool]
    return f"{net.facts.compounds[compound].label} ({next(c.label for c in net.host.compartments if c.slug == place)})"
