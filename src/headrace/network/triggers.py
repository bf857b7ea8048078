"""Which rows of the finding rules hold for a case: each trigger is looked up in what the case feeds, runs and draws.

The rows were made once from the facts (`headrace.graph.findings`); nothing is queried here.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from headrace.values.answers import Draw, RefillAnswer, RefillRow
from headrace.values.case import Case
from headrace.values.depth import RuleRow
from headrace.values.facts import Facts, HostReaction

RUNS = 1e-6  # mmol/gDW/h; below this a rate is noise


@dataclass(frozen=True)
class State:
    """What a case feeds, runs and draws. refill, runs, opened: "enzyme/…", "reaction/…", "host/HOST/ROW"; else compounds."""

    refill: frozenset[str]
    runs: frozenset[str]
    opened: frozenset[str]
    drained: frozenset[str]
    made: frozenset[str]
    feed: frozenset[str]
    oxygen: str
    supplied: frozenset[str]


def fired(facts: Facts, case: Case, answer: RefillAnswer, draws: Sequence[Draw]) -> tuple[RuleRow, ...]:
    """The rows whose every filled trigger holds, in the order of the facts."""
    state = state_of(facts, case, answer, draws)
    return tuple(row for row in facts.rule_rows if row.host in ("", case.host) and holds(row, state))


def holds(row: RuleRow, state: State) -> bool:
    """Whether all triggers of a row hold (its host aside)."""
    named = ("refill", "runs", "opened", "drained", "made", "feed")
    met = all(not getattr(row, name) or getattr(row, name) in getattr(state, name) for name in named)
    return met and row.oxygen in ("", state.oxygen) and (not row.missing or row.missing not in state.supplied)


def state_of(facts: Facts, case: Case, answer: RefillAnswer, draws: Sequence[Draw]) -> State:
    """Read the state off an answer; an infeasible one runs nothing."""
    running = [row.reaction for row in answer.rates if abs(row.rate) > RUNS and row.reaction in case.rows]
    leaned = [slug for row in answer.refills if leans_on(row) for slug in (_row_of(row, case), *row.steps) if slug]
    asked = [draw for draw in draws if not _is_growth(draw) and _rate(draw, answer.scalars) > RUNS]
    fed = frozenset(feed.compound for feed in case.feeds)
    return State(
        refill=_names(facts, case, leaned),
        runs=_names(facts, case, running),
        opened=_names(facts, case, [slug for slug in running if case.levels[slug].kind in ("open", "added")]),
        drained=frozenset(term.compound for draw in asked for term in draw.pools if term.taken > term.returned),
        made=frozenset(name for draw in asked for name in made_on_the_way(facts, draw)) | _products(case),
        feed=fed,
        oxygen="absent" if case.oxygen == "anaerobic" else "present",
        supplied=fed | {extra.compound for extra in case.supplements},
    )


def leans_on(row: RefillRow) -> bool:
    """Whether a case uses a refill: at its nominal rate, or at its largest where the split is open."""
    rate = row.most if row.nominal is None else row.nominal
    return row.open and (rate or 0.0) > RUNS


def made_on_the_way(facts: Facts, draw: Draw) -> frozenset[str]:
    """Compounds that steps of a draw make: no coenzyme, no compound of a role, and none that only carries nitrogen.

    A nitrogen carrier is made from an acid of the cycle in one step and gives the same acid back in another.
    """
    takes: dict[str, set[str]] = defaultdict(set)
    gives: dict[str, set[str]] = defaultdict(set)
    for reaction, rate in draw.steps.items():
        sides = _sides(facts, reaction, rate)
        for name in sides[1]:
            takes[name] |= {other for other in sides[0] if facts.compounds[other].anchor}
        for name in sides[0]:
            gives[name] |= {other for other in sides[1] if facts.compounds[other].anchor}
    roles = {slug for members in facts.roles.values() for slug in members}
    return frozenset(
        name for name in takes
        if not facts.compounds[name].carrier and name not in roles and takes[name].isdisjoint(gives[name])
    )


def _sides(facts: Facts, reaction: str, rate: Fraction) -> tuple[list[str], list[str]]:
    terms = facts.reactions[reaction].terms
    return [t.compound for t in terms if t.count * rate < 0], [t.compound for t in terms if t.count * rate > 0]


def _products(case: Case) -> frozenset[str]:
    return frozenset(name for demand in case.demands for name, amount in demand.draws.items() if amount > 0)


def _names(facts: Facts, case: Case, rows: Iterable[str]) -> frozenset[str]:
    """Rows under all the names that a rule may call them by."""
    found: set[str] = set()
    for slug in rows:
        row: HostReaction = case.rows[slug]
        enzyme = facts.reactions[row.reaction].enzyme
        found |= {f"host/{case.host}/{slug}", f"reaction/{row.reaction}"} | ({f"enzyme/{enzyme}"} if enzyme else set())
    return frozenset(found)


def _row_of(row: RefillRow, case: Case) -> str:
    slug = row.refill.removesuffix("-in-reverse")
    return row.refill if row.refill in case.rows else slug if slug in case.rows else ""


def _is_growth(draw: Draw) -> bool:
    return "growth" in draw.scale


def _rate(draw: Draw, scalars: Mapping[str, float]) -> float:
    rate = 1.0
    for name in draw.scale:
        rate *= scalars.get(name, 0.0)
    return rate
