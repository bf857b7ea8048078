"""Who makes and who takes the pools that refills draw on, inorganic carbon made against fixed, oxygen and heat per litre.

Rates are those of the case's answer (mmol/gDW/h). A pool's uses and sources sum to zero; a transport that brings a feed in
counts as uptake (one PEP per glucose in a phosphotransferase system), what outlets and growth draw as drawn.

    heat (kJ/L/h) = X q_O2 h / 1000      X: gDW/L, q_O2: oxygen uptake, mmol/gDW/h, h: kJ/mol O2 (a quantity of the host)
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from headrace.network import aim
from headrace.network.build import Network, medium_of
from headrace.network.refills import open_refills
from headrace.network.shortage import name_of
from headrace.network.skeletons import on_route
from headrace.solve.linear import Floats
from headrace.values.facts import Quantity

_SMALL = 1e-7
HEAT = "heat-per-oxygen"


@dataclass(frozen=True)
class Entry:
    """One source (rate > 0) or use (rate < 0) of a pool. kind: uptake | refill | synthesis | drawn | crossing | other.

    share: of all that is made.
    """

    pool: str
    what: str
    kind: str
    rate: float
    share: float


@dataclass(frozen=True)
class PerLitre:
    """At a cell density (gDW/L): oxygen, carbon dioxide (given off) and feed in mmol/L/h; heat in kJ/L/h and W/L or None.

    heat_span: with the low and high heat per mole of oxygen, where the facts give them.
    """

    density: float
    oxygen: float
    carbon_dioxide: float
    feed: float
    heat: float | None
    heat_span: tuple[float, float] | None
    watts: float | None
    heat_per_oxygen: Quantity | None


def pool_budgets(net: Network, x: Floats, scalars: Mapping[str, float]) -> tuple[Entry, ...]:
    """The budget of each boundary pool without skeletons that an open refill takes."""
    pools = {p for r in open_refills(net) if r.column is not None for p, count in net.entries[r.column].items()
             if count < 0 and net.facts.compounds[net.pools[p][0]].precursor}
    found: list[Entry] = []
    for pool in sorted(pools, key=lambda p: net.pools[p]):
        rates: dict[tuple[str, str], float] = defaultdict(float)
        for j, entry in enumerate(net.entries):
            if pool in entry and x[j] > _SMALL:
                rates[_what(net, j)] += entry[pool] * float(x[j])
        for scalar, rate in scalars.items():
            if amount := net.demands.get(scalar, {}).get(pool):
                rates[_drawer(net, scalar), "drawn"] -= amount * rate
        found += _entries(name_of(net, pool), rates)
    return tuple(found)


def carbon_budget(net: Network, x: Floats, scalars: Mapping[str, float]) -> tuple[Entry, ...]:
    """Inorganic carbon that reactions make and fix, all forms and compartments together, and what crosses the boundary."""
    inorganic = {p for p, (name, _) in enumerate(net.pools) if name in net.facts.roles["inorganic-carbon"]}
    rates: dict[tuple[str, str], float] = defaultdict(float)
    for j, entry in enumerate(net.entries):
        made = sum(count for p, count in entry.items() if p in inorganic)
        if made and x[j] > _SMALL:
            rates[_what(net, j)] += made * float(x[j])
    for scalar, rate in scalars.items():
        drawn = sum(a for p, a in net.demands.get(scalar, {}).items() if p in inorganic)
        if drawn:
            rates[_drawer(net, scalar), "drawn"] -= drawn * rate
    return tuple(_entries("inorganic carbon", rates))


def _entries(pool: str, rates: Mapping[tuple[str, str], float]) -> list[Entry]:
    made = sum(rate for rate in rates.values() if rate > 0)
    listed = sorted(((what, kind, rate) for (what, kind), rate in rates.items() if abs(rate) > _SMALL), key=lambda e: -e[2])
    return [Entry(pool, what, kind, rate, abs(rate) / made if made else 0.0) for what, kind, rate in listed]


def _what(net: Network, j: int) -> tuple[str, str]:
    """(label, kind) of a column."""
    column = net.columns[j]
    if column.kind in ("enter", "leave"):
        return net.facts.compounds[column.name].label, "crossing"
    if column.kind == "spill":
        return net.facts.reactions[column.name].label, "other"
    row = net.case.rows[column.name]
    label = row.label if column.sign > 0 else f"{row.label}, backward"
    medium, fed = medium_of(net.host), {f.compound for f in net.case.feeds}
    if any(count < 0 and net.pools[p][1] == medium and net.pools[p][0] in fed for p, count in net.entries[j].items()):
        return label, "uptake"
    if any(r.column == j for r in open_refills(net)):
        return label, "refill"
    return label, "synthesis" if row.reaction in on_route(net.facts) else "other"


def _drawer(net: Network, scalar: str) -> str:
    if scalar.startswith("outlet."):
        return net.case.demands[int(scalar.partition(".")[2])].label
    return "biomass" if scalar == "growth" else scalar


def per_litre(net: Network, solved: aim.Aimed, density: float) -> PerLitre:
    """Oxygen, carbon dioxide, feed and heat per litre at a cell density in gDW/L."""
    role = net.facts.roles
    oxygen, carbon = _inward(net, solved.x, role["oxygen"]), -_inward(net, solved.x, role["inorganic-carbon"])
    feed = _inward(net, solved.x, [f.compound for f in net.case.feeds])
    known = next((q for q in net.host.quantities if q.kind == HEAT and q.about == net.host.slug), None)
    if known is None or oxygen < _SMALL:
        return PerLitre(density, density * oxygen, density * carbon, density * feed, None, None, None, known)
    each = density * oxygen / 1000.0
    span = None if known.low is None or known.high is None else (each * float(known.low), each * float(known.high))
    heat = each * float(known.value)
    return PerLitre(density, density * oxygen, density * carbon, density * feed, heat, span, heat / 3.6, known)


def _inward(net: Network, x: Floats, names: Iterable[str]) -> float:
    wanted = set(names)
    return float(sum(x[j] if c.kind == "enter" else -x[j] for j, c in enumerate(net.columns)
                     if c.kind in ("enter", "leave") and c.name in wanted))
