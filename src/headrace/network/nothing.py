"""Nothing from nothing: without a feed no ATP, electrons, motive protons or skeletons arise, in any expression state.

One LP per state: every probe is a sink capped at 1 mmol/gDW/h; maximise their sum. The sum is zero if and only if no
probe can run at all. Inorganic nutrients, CO2 among them, may enter freely. The open state holds every row of the
host in every direction it is listed with, so what holds there holds in each expression state.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import msgspec
import numpy as np

from headrace.network.build import Network, build, cytosol_of, medium_of, programme
from headrace.solve.linear import Session
from headrace.values.case import Case
from headrace.values.facts import Facts, Host


@dataclass(frozen=True)
class Leak:
    """A probe that runs without a feed: what arises, at which rate of at most 1, in which state, by which rows."""

    host: str
    state: str
    probe: str
    rate: float
    rows: tuple[str, ...]


def probes(net: Network) -> Iterator[tuple[str, dict[int, float]]]:
    """(what must not arise, the sink column that would carry it away)."""
    facts, index, inside = net.facts, net.index, cytosol_of(net.host)
    release = facts.reactions[facts.roles["energy-release"][0]]
    yield "ATP", {index[(t.compound, inside)]: float(t.count) for t in release.terms}
    motive, proton = facts.roles["motive-proton"][0], facts.roles["proton"][0]
    membrane = next(c.slug for c in net.host.compartments if c.role == "membrane")
    if net.host.proton_convention == "inside-balanced":
        yield "motive protons", {index[(proton, inside)]: 1.0}  # a proton that must be pumped out
    elif (motive, membrane) in index:
        yield "motive protons", {index[(motive, membrane)]: -1.0}
    for reduced, oxidised in facts.electron_pairs.items():
        hydrogens = facts.compounds[reduced].formula.get("H", 0) - facts.compounds[oxidised].formula.get("H", 0)
        for (name, place), pool in index.items():
            if name == reduced and (oxidised, place) in index:
                acid = index.get((proton, inside if facts.compounds[reduced].membrane else place))
                sink = {pool: -1.0, index[(oxidised, place)]: 1.0}
                if acid is not None:
                    sink[acid] = sink.get(acid, 0.0) + hydrogens
                yield f"{facts.compounds[reduced].label} ({place})", sink
    for (name, place), pool in index.items():
        if facts.contents.get(name, 0) > 0 and place != medium_of(net.host):
            yield f"skeletons as {facts.compounds[name].label} ({place})", {pool: -1.0}


def leaks(facts: Facts, case: Case, state: str) -> list[Leak]:
    """Every probe that runs in a case without feeds (empty = nothing from nothing holds)."""
    net = build(facts, case)
    named = list(probes(net))
    lp = programme(net, free={}, rates={}, extra=[(sink, 0.0, 1.0) for _, sink in named])
    session = Session(lp)
    gain = np.zeros(session.columns)
    gain[len(net.columns):] = 1.0
    found = session.maximise(gain)
    if not found.optimal:
        return [Leak(case.host, state, f"the programme came back {found.status}", float("nan"), ())]
    running = [(name, float(found.x[len(net.columns) + i])) for i, (name, _) in enumerate(named)]
    rows = tuple(sorted({c.name for j, c in enumerate(net.columns) if found.x[j] > 1e-7 and c.kind == "row"}))
    return [Leak(case.host, state, name, rate, rows) for name, rate in running if rate > 1e-7]


def bare(host: Host, case: Case, oxygen: str) -> Case:
    """A case without feeds, supplements, demands and growth under one oxygen supply."""
    return msgspec.structs.replace(case, feeds=(), demands=(), supplements=(), growth=0.0, growth_yield=None,
                                   oxygen=oxygen, oxygen_rate=None, energy={**case.energy, "maintenance": 0.0})


def prove(facts: Facts, cases: Iterable[tuple[str, Case]]) -> list[Leak]:
    """Leaks over many states: (name of the state, its case), each tried with and without oxygen."""
    found: list[Leak] = []
    for state, case in cases:
        for oxygen in ("aerobic", "anaerobic"):
            found += leaks(facts, bare(facts.hosts[case.host], case, oxygen), f"{state}, {oxygen}")
    return found
