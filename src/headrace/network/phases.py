"""A plan of phases over time: biomass integrated exactly, rates times the integral, the peak, and which phase binds.

    X(t) = X0 exp(mu t),   integral of X over T hours = X0 (exp(mu T) - 1) / mu   (X0 T where mu = 0),   total = q * integral

q in mmol/gDW/h, X in gDW/L, totals in mmol/L. Within a phase all specific rates are constant, so that rates per litre are
largest at its end (mu >= 0). Litres are those of the plan's start: what a feed adds to the volume does not dilute here.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from msgspec.structs import replace

from headrace.values.answers import RefillAnswer, Result
from headrace.values.elements import neutral_mass
from headrace.values.facts import Facts
from headrace.values.phases import Carried, Flow, Phase, PhaseRow, Plan

_NOISE = 1e-9


def integral(start: float, growth: float, hours: float) -> float:
    """gDW h/L of cells that start at `start` gDW/L and grow at `growth` 1/h for `hours`.

    >>> integral(2.0, 0.0, 3.0), round(integral(1.0, math.log(2), 1.0) * math.log(2), 12)
    (6.0, 1.0)
    """
    return start * hours if growth == 0 else start * math.expm1(growth * hours) / growth


def plan(phases: Sequence[Phase], results: Sequence[Result]) -> Plan:
    """The plan of phases that were answered one by one, in order (one result per phase)."""
    rows, begins, biomass, said = list[PhaseRow](), 0.0, 0.0, list[str]()
    for phase, result in zip(phases, results, strict=True):
        start = biomass if phase.biomass is None else phase.biomass
        if rows and phase.biomass is not None and abs(phase.biomass - biomass) > 1e-6 * biomass:
            said.append(f"{phase.name} starts with {phase.biomass:.4g} gDW/L as stated; {rows[-1].name} ends with {biomass:.4g}")
        rows.append(_phase(phase, result, begins, start))
        begins, biomass = begins + phase.hours, rows[-1].end
    binding, because = _binds(rows)
    rows = [replace(row, binds=row.name == binding) for row in rows]
    if rows[0].answer == "infeasible" or any(row.answer == "infeasible" for row in rows):
        said.append("totals leave out the phases that can't run")
    whole = sum(row.integral for row in rows)
    drained, refilled = (sum(getattr(row, name) * row.integral for row in rows) for name in ("drained", "refilled"))
    return Plan(tuple(rows), begins, whole, biomass, tuple(_groups(rows, whole)), tuple(_flows(rows, biomass)), drained, refilled,
                binding, because, tuple(said))


def _phase(phase: Phase, result: Result, begins: float, start: float) -> PhaseRow:
    answer = result.answer
    assert isinstance(answer, RefillAnswer)
    growth = answer.scalars.get("growth", result.case.growth or 0.0)
    end, over = start * math.exp(growth * phase.hours), integral(start, growth, phase.hours)
    groups = tuple(
        Carried(g.group, g.label, g.nominal, g.nominal, g.nominal * end, g.nominal * over, g.capacity, g.cover)
        for g in answer.groups if g.nominal is not None)
    covers = [group.cover for group in groups if group.cover is not None]
    law = answer.ledger
    return PhaseRow(phase.name, phase.hours, begins, growth, start, end, over, answer.answer, law.net_drain if law else 0.0,
                    law.refilled if law else 0.0, min(covers, default=None), False, groups,
                    tuple(_crossing_flows(result, answer, end, over)))


def _crossing_flows(result: Result, answer: RefillAnswer, end: float, over: float) -> Iterator[Flow]:
    """Feeds, products, oxygen and CO2 of a phase, each positive in its own direction."""
    facts = result.facts
    for feed in answer.feed:
        label, mass = facts.compounds[feed.substrate].label, _mass(facts, feed.substrate)
        yield _flow("feed", feed.substrate, label, mass, feed.uptake, end, over)
    for number, demand in enumerate(result.case.demands):
        rate = answer.scalars.get(f"outlet.{number}", 0.0)
        yield _flow("product", demand.outlet, demand.label, demand.molar_mass or None, rate, end, over)
    for role in ("oxygen", "carbon-dioxide"):
        for crossing in answer.crossings:
            if crossing.compound in facts.roles[role]:
                kind = "taken" if crossing.rate > 0 else "made"
                label = facts.compounds[crossing.compound].label
                yield _flow(kind, crossing.compound, label, _mass(facts, crossing.compound), abs(crossing.rate), end, over)


def _mass(facts: Facts, slug: str) -> float:
    compound = facts.compounds[slug]
    return float(neutral_mass(compound.formula, compound.charge))


def _flow(kind: str, what: str, label: str, mass: float | None, rate: float, end: float, over: float) -> Flow:
    total = rate * over
    return Flow(kind, what, label, total, None if mass is None else total * mass / 1000, total / end if end else 0.0, rate * end)


def _groups(rows: Sequence[PhaseRow], whole: float) -> Iterator[Carried]:
    """Each group over the plan: its mean over the integrated biomass, peaks and total; cover at its worst."""
    for slug in dict.fromkeys(group.group for row in rows for group in row.groups):
        mine = [group for row in rows for group in row.groups if group.group == slug]
        total = sum(group.total for group in mine)
        covers = [group.cover for group in mine if group.cover is not None]
        capacities = [group.capacity for group in mine if group.capacity is not None]
        peak, at_end = max(group.rate for group in mine), max(group.at_end for group in mine)
        yield Carried(slug, mine[0].label, total / whole if whole else 0.0, peak, at_end, total,
                      min(capacities, default=None), min(covers, default=None))


def _flows(rows: Sequence[PhaseRow], biomass: float) -> Iterator[Flow]:
    for key in dict.fromkeys((flow.kind, flow.what) for row in rows for flow in row.flows):
        mine = [flow for row in rows for flow in row.flows if (flow.kind, flow.what) == key]
        total, grams = sum(flow.total for flow in mine), [flow.grams for flow in mine]
        mass = None if None in grams else sum(each for each in grams if each is not None)
        yield Flow(*key, mine[0].label, total, mass, total / biomass if biomass else 0.0, max(flow.at_end for flow in mine))


def _binds(rows: Sequence[PhaseRow]) -> tuple[str, str]:
    """The phase that asks most of the strain, and why: one that can't run, else the least cover, else the most refilled."""
    stuck = next((row for row in rows if row.answer == "infeasible"), None)
    if stuck is not None:
        return stuck.name, "it can't run"
    covered = [row for row in rows if row.cover is not None]
    if covered:
        worst = min(covered, key=lambda row: row.cover or 0.0)
        group = min((g for g in worst.groups if g.cover is not None), key=lambda g: g.cover or 0.0)
        return worst.name, f"its cover is the least: {group.cover:.4g} for {group.label}"
    most = max(rows, key=lambda row: row.refilled)
    if most.refilled < _NOISE:
        return rows[0].name, "no refill runs in any phase; the first is shown"
    return most.name, f"it asks for most to be refilled: {most.refilled:.4g} mmol/gDW/h of skeletons"
