"""Largest yields of an outlet, side by side, and what binds between them.

network ceiling: maximise the outlet's rate at a fixed total feed, growth and maintenance as stated (default none);
electron ceiling: gamma_S / gamma_P, degrees of reduction per mole (Roels 1983, from memory), no network;
carbon ceiling: the open network with ATP and electrons free, without and with inorganic carbon entering.
"""

from __future__ import annotations

import msgspec
import numpy as np

from headrace.network.aim import feed_columns
from headrace.network.build import Network, build, cytosol_of, place_of, programme
from headrace.network.closure import electrons
from headrace.solve.linear import INFINITY, Session
from headrace.values.answers import CeilingAnswer
from headrace.values.case import Case, Demand, Feed, Finding
from headrace.values.elements import molar_mass
from headrace.values.facts import Basis, Facts, HostReaction

FEED = 10.0


def ceiling(facts: Facts, expressed: Case, opened: Case, number: int, growth: float = 0.0) -> CeilingAnswer:
    """The ceilings of outlet `number` of a case, as expressed and open. growth in 1/h (0: no maintenance either)."""
    demand = expressed.demands[number]
    nets = {name: build(facts, _alone(case, number, growth)) for name, case in (("expressed", expressed), ("open", opened))}
    best = {name: largest(net) for name, net in nets.items()}
    fed = nets["open"]
    carbon_only = largest(fed, energy=True, power=True, inorganic=False)
    carbon_all = largest(fed, energy=True, power=True)
    electron = _electron_ceiling(facts, expressed, demand)
    found = best["expressed"]
    grams, carbon = _per_mass(facts, expressed, demand, found)
    words = [f for f in (_absent(facts, expressed, demand, best),) if f]
    return CeilingAnswer(
        outlet=demand.label, substrate=" with ".join(facts.compounds[f.compound].label for f in expressed.feeds),
        growth=growth, mol_per_mol=found, open_mol_per_mol=best["open"], g_per_g=grams, cmol_per_cmol=carbon,
        electron_ceiling_mol_per_mol=electron, carbon_ceiling_mol_per_mol=carbon_only,
        carbon_ceiling_with_co2_mol_per_mol=carbon_all,
        co2_rule="inorganic carbon may be fixed but none enters from outside (a second figure lets it enter freely)",
        binding=_binding(nets, best, electron, carbon_only),
        answer="infeasible" if found is None or found < 1e-9 else "feasible", findings=tuple(words))


def _alone(case: Case, number: int, growth: float) -> Case:
    """The case with this outlet alone, a fixed total feed, no maintenance unless it grows, and no limits on rates.

    A yield has no scale, so a limit in mmol/gDW/h says nothing about it (one of zero has closed its rows already).
    """
    shares = [f.uptake for f in case.feeds]
    total = sum(u for u in shares if u is not None)
    stated = all(u is not None for u in shares) and total > 0
    feeds = tuple(Feed(f.compound, FEED * (f.uptake or 0.0) / total if stated else (FEED if len(shares) == 1 else None))
                  for f in case.feeds)
    energy = dict(case.energy) if growth > 0 else {**case.energy, "maintenance": 0.0}
    demand = msgspec.structs.replace(case.demands[number], rate=0.0, yield_per_feed=None)
    return msgspec.structs.replace(case, demands=(demand,), growth=growth, growth_yield=None, feeds=feeds, energy=energy,
                                  limits=())


def largest(net: Network, energy: bool = False, power: bool = False, inorganic: bool = True) -> float | None:
    """Largest outlet rate per mole of total feed. energy / power: ATP / electrons free; inorganic: carbon may enter.

    None when even a rate of zero can't be met, infinity when nothing binds.
    """
    extra = ([discharge(net)] if energy else []) + (list(electron_sources(net)) if power else [])
    lp = programme(net, free={"outlet.0": {"outlet.0": 1.0}}, rates={k: v for k, v in net.rates.items() if k != "outlet.0"},
                   extra=[(e, 0.0, INFINITY) for e in extra])
    feeds = feed_columns(net)
    for j in feeds:
        if net.upper[j] == INFINITY:
            lp.col_upper[j] = FEED
        lp.col_lower[j] = 0.0
    if not inorganic:
        for j, column in enumerate(net.columns):
            if column.kind == "enter" and column.name in net.facts.roles["inorganic-carbon"]:
                lp.col_upper[j] = 0.0
    session = Session(lp)
    cap = np.zeros(session.columns)
    cap[feeds] = 1.0
    session.row(cap, 0.0, FEED)
    gain = np.zeros(session.columns)
    gain[len(net.columns)] = 1.0
    found = session.maximise(gain)
    if found.status == "unbounded":
        return float("inf")
    return found.objective / FEED if found.optimal else None


def discharge(net: Network) -> dict[int, float]:
    """A column that charges ATP for nothing: the energy-releasing reaction backwards, in the cytosol."""
    release = net.facts.reactions[net.facts.roles["energy-release"][0]]
    return {net.index[(t.compound, cytosol_of(net.host))]: -float(t.count) for t in release.terms}


def electron_sources(net: Network) -> list[dict[int, float]]:
    """Columns that reduce or oxidise each two-electron carrier for nothing, in every compartment where it is a pool."""
    found = []
    proton = net.facts.roles["proton"][0]
    for reduced, oxidised in net.facts.electron_pairs.items():
        hydrogens = net.facts.compounds[reduced].formula.get("H", 0) - net.facts.compounds[oxidised].formula.get("H", 0)
        for (name, place), pool in net.index.items():
            other = net.index.get((oxidised, place))
            if name != reduced or other is None:
                continue
            home = cytosol_of(net.host) if net.facts.compounds[reduced].membrane else place
            entry = {pool: 1.0, other: -1.0}
            acid = net.index.get((proton, home))
            if acid is not None:
                entry[acid] = entry.get(acid, 0.0) - hydrogens
            found += [entry, {k: -v for k, v in entry.items()}]
    return found


def _electron_ceiling(facts: Facts, case: Case, demand: Demand) -> float | None:
    """gamma of the feed over gamma of the product, mol/mol; None for feeds without stated shares or an oxidised product."""
    shares = [f.uptake for f in case.feeds]
    if len(shares) > 1 and not all(shares):
        return None
    weights = [1.0] if len(shares) == 1 else [float(u or 0) / sum(float(v or 0) for v in shares) for u in shares]
    fed = sum(w * electrons(facts.compounds[f.compound].formula, facts.compounds[f.compound].charge)
              for w, f in zip(weights, case.feeds, strict=True))
    made = sum(float(n) * electrons(facts.compounds[c].formula, facts.compounds[c].charge) for c, n in demand.draws.items())
    return fed / made if made > 0 else None


def _per_mass(facts: Facts, case: Case, demand: Demand, molar: float | None) -> tuple[float | None, float | None]:
    if molar is None or len(case.feeds) != 1:
        return None, None
    fed = facts.compounds[case.feeds[0].compound]
    mass = demand.molar_mass or sum(float(n) * molar_mass(facts.compounds[c].formula) for c, n in demand.draws.items())
    carbon = sum(float(n) * facts.compounds[c].formula.get("C", 0) for c, n in demand.draws.items())
    fed_carbon = fed.formula.get("C", 0)
    return molar * mass / molar_mass(fed.formula), molar * carbon / fed_carbon if fed_carbon else None


def _binding(nets: dict[str, Network], best: dict[str, float | None], electron: float | None,
             carbon: float | None) -> tuple[str, ...]:
    """What holds the expressed ceiling down, found by relaxing one thing at a time."""
    here = best["expressed"] or 0.0
    more = lambda v: v is not None and v > here * (1 + 1e-6) + 1e-9  # noqa: E731
    found = []
    if more(best["open"]):
        found.append("expression")
    if more(largest(nets["expressed"], energy=True)):
        found.append("ATP")
    if more(largest(nets["expressed"], power=True)):
        found.append("electrons")
    if (carbon is not None and not more(carbon)) or not found:
        found.append("carbon")
    if electron is not None and abs(here - electron) < 1e-6 * electron and "electrons" not in found:
        found.append("electrons")
    return tuple(found)


def _absent(facts: Facts, case: Case, demand: Demand, best: dict[str, float | None]) -> Finding | None:
    if (best["expressed"] or 0) > 1e-9:
        return None
    why = "as expressed it can't be made" if (best["open"] or 0) > 1e-9 else "the host lacks a way to it"
    host, row = facts.hosts[case.host], _row(demand)
    pools = [f"{facts.compounds[c].label} in the {place_of(facts, host, row, c, '')}" for c in demand.draws]
    return Finding("stop", "ceiling", demand.label, f"{' and '.join(pools)}: {why}; name missing enzymes under [strain] add")


def _row(demand: Demand) -> HostReaction:
    return HostReaction("", "", "", "forward", Basis("seen"), place=demand.place)
