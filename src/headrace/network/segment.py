"""The part of the cycle that a refill serves: the running steps from what it makes to what the outlets drain.

Steps are rows that turn one acid of the cycle into another without making or unmaking skeletons, and carriers that bring
them across. Of all ways the shortest to each drained acid counts; the refill's own steps come first.
"""

from __future__ import annotations

from collections import defaultdict, deque
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from headrace.network.build import terms_of
from headrace.network.skeletons import on_route, turnover
from headrace.values.answers import DrainRow, RefillAnswer, RefillRow
from headrace.values.case import Case
from headrace.values.facts import Facts

RUNS = 1e-6  # mmol/gDW/h; below this a rate is noise
Pool = tuple[str, str]


@dataclass(frozen=True)
class Step:
    """A row that runs in direction sign (+1 as written)."""

    row: str
    sign: int


def segment(facts: Facts, case: Case, answer: RefillAnswer, refill: RefillRow, drains: Sequence[DrainRow]) -> tuple[Step, ...]:
    """The refill's steps, the refill, then the steps that it serves, in the order in which carbon goes through them."""
    rates = {row.reaction: row.rate for row in answer.rates if row.reaction in case.rows}
    own, sign = row_of(refill, case)
    chain = [Step(slug, 1 if rates.get(slug, 1.0) > 0 else -1) for slug in reversed(refill.steps)]
    start = [pool for pool, count in _acids(facts, case, own) if count * sign > 0]
    served = _shortest(_edges(facts, case, rates, {own, *refill.steps}), start, _drained(facts, case, drains))
    return (*chain, Step(own, sign), *(step for step in served if step.row != own))


def row_of(refill: RefillRow, case: Case) -> tuple[str, int]:
    """(row, direction) of a refill."""
    if refill.refill in case.rows:
        return refill.refill, 1 if case.rows[refill.refill].direction != "reverse" else -1
    return refill.refill.removesuffix("-in-reverse"), -1


def _drained(facts: Facts, case: Case, drains: Sequence[DrainRow]) -> set[Pool]:
    """The acids that product outlets drain; those that growth drains when no product drains any."""
    acids = [row for row in drains if row.net > RUNS and facts.compounds[row.compound].anchor]
    products = [row for row in acids if row.outlet in {demand.label for demand in case.demands}]
    return {(row.compound, row.compartment) for row in products or acids}


def _acids(facts: Facts, case: Case, row: str) -> list[tuple[Pool, float]]:
    terms = terms_of(facts, facts.hosts[case.host], case.rows[row])
    return [(pool, float(count)) for pool, count in terms if facts.compounds[pool[0]].anchor]


def _edges(facts: Facts, case: Case, rates: dict[str, float], without: set[str]) -> dict[Pool, list[tuple[Pool, Step]]]:
    """From each acid's pool to the pools that one running row makes of it."""
    routes = on_route(facts)
    found: dict[Pool, list[tuple[Pool, Step]]] = defaultdict(list)
    for slug, rate in sorted(rates.items()):
        reaction = case.rows[slug].reaction
        if abs(rate) < RUNS or slug in without or reaction in routes or abs(turnover(facts, reaction)) > 1e-9:
            continue
        step = Step(slug, 1 if rate > 0 else -1)
        acids, moved = _acids(facts, case, slug), facts.reactions[reaction].transport
        for pool, count in acids:
            for other, made in acids:
                if count * step.sign < 0 < made * step.sign and (pool[0] == other[0] or not moved):
                    found[pool].append((other, step))
    return found


def _shortest(edges: dict[Pool, list[tuple[Pool, Step]]], start: Iterable[Pool], wanted: set[Pool]) -> list[Step]:
    """The steps on a shortest way to each wanted pool, nearest first."""
    origins = list(start)
    came: dict[Pool, tuple[Pool, Step] | None] = dict.fromkeys(origins)
    queue = deque(origins)
    while queue:
        pool = queue.popleft()
        for other, step in edges.get(pool, []):
            if other not in came:
                came[other] = (pool, step)
                queue.append(other)
    steps: dict[Step, int] = {}
    for pool in sorted(wanted & set(came)):
        way = []
        at = came[pool]
        while at is not None:
            way.append(at[1])
            at = came[at[0]]
        for depth, step in enumerate(reversed(way)):
            steps[step] = min(depth, steps.get(step, depth))
    return sorted(steps, key=lambda step: (steps[step], step.row))
