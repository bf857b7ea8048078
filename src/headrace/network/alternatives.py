"""All smallest sets of refills that carry a case, each with its price.

Every refill is shut; a set is wanted if the case can be met with its members alone (and the rest of the host) and can't
with any of them left out (`headrace.solve.sets`: exact, by levels). With changes, refills that are closed take part through
the change that opens them; where even all of those do not suffice, so does every other change.

Each set is then solved for the aim with just its members open: least feed carbon (mmol C/gDW/h), then least total rate,
whose rates give what its members and the steps that feed them spend: ATP and reduced carriers (mmol/gDW/h, negative where
made) and the inorganic carbon that they fix.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from headrace.network import aim
from headrace.network.build import Network, build, programme
from headrace.network.capacity import enzyme_mass
from headrace.network.changes import STRAIN, SURROUNDINGS, Option, Wide, widen
from headrace.network.refills import Refill, electrons_used, energy_used, inorganic_fixed, open_refills, steps
from headrace.solve.linear import INFINITY, Floats, Programme, Session
from headrace.solve.sets import Found, smallest
from headrace.values.case import Case
from headrace.values.facts import Facts

Span = tuple[float, float]
SEARCHED = 600
_IDLE = 1e-7


@dataclass(frozen=True)
class Choice:
    """A refill that is open, or a change that opens one (or anything else). change and reason are empty for open refills."""

    slug: str
    label: str
    columns: tuple[int, ...]
    change: str = ""
    kind: str = "open"
    reason: str = ""


@dataclass(frozen=True)
class Alternative:
    """A set of refills with its price. set: slugs; changes: what opens those that are closed, and why they are.

    carbon: least feed carbon; extra: above the best set's. total: least total rate with it. atp, redox, fixed: spent and
    fixed by the members and the steps that feed them. enzyme: mg/gDW of their enzymes, low and high (None if any is not
    known; kinetics are those of the direction as written). rates: mmol/gDW/h of each refill.
    """

    set: tuple[str, ...]
    labels: tuple[str, ...]
    changes: tuple[str, ...]
    reasons: tuple[str, ...]
    carbon: float
    extra: float
    total: float
    atp: float
    redox: float
    fixed: float
    enzyme: Span | None
    rates: dict[str, float]


@dataclass(frozen=True)
class Alternatives:
    """rows: best first. found: how many sets there are (or were found, if the search is not complete)."""

    rows: tuple[Alternative, ...]
    candidates: tuple[Choice, ...]
    search: Found

    @property
    def found(self) -> int:
        """How many sets were found."""
        return len(self.search.sets)


def alternatives(net: Network, changes: bool = False, searched: int = SEARCHED,
                 step: Callable[[int], None] = lambda found: None) -> Alternatives:
    """All smallest sets of refills of a case (with changes: of refills and changes), ranked by feed carbon, ATP, reduced
    carriers, carbon fixed and enzyme, in that order. searched: stop after so many sets (`search.complete` then says so).
    """
    wide, lp, choices = candidates(net, changes)
    found = smallest(lp, [choice.columns for choice in choices], most=searched, levels=None if not changes else 4, step=step)
    pricing = _Pricing(wide, lp, choices)
    rows = [row for row in (pricing.row(numbers) for numbers in _unlike(choices, found.sets)) if row is not None]
    best = min((row.carbon for row in rows), default=0.0)
    rows = [dataclasses.replace(row, extra=row.carbon - best) for row in rows]
    return Alternatives(tuple(sorted(rows, key=_rank)), tuple(choices), found)


def of_case(facts: Facts, case: Case, changes: bool = False) -> Alternatives:
    """`alternatives` of a case's network."""
    return alternatives(build(facts, case), changes)


def candidates(net: Network, changes: bool = False) -> tuple[Network, Programme, tuple[Choice, ...]]:
    """(the network, its programme, the choices): the refills that are open and, with changes, what opens others."""
    if not changes:
        return net, programme(net), tuple(_open(net, refill) for refill in open_refills(net))
    wide = widen(net)
    has = {(refill.row, refill.sign) for refill in open_refills(net)}
    is_open = [_open(wide.net, r) for r in open_refills(wide.net) if (r.row, r.sign) in has]
    kept = [option for option in wide.options if option.refills]
    lp = _without(wide, kept)
    if not Session(lp).feasible():
        kept = [option for option in wide.options if option.kind in STRAIN | SURROUNDINGS and option.present is None]
        lp = _without(wide, kept)
    return wide.net, lp, (*is_open, *(_changed(option) for option in kept))


def _open(net: Network, refill: Refill) -> Choice:
    assert refill.column is not None
    name = net.case.rows[refill.row].label
    return Choice(refill.slug, name if refill.sign > 0 else f"{name}, in reverse", (refill.column,))


def _changed(option: Option) -> Choice:
    slug = " with ".join(option.refills) or option.words
    return Choice(slug, option.words, option.columns, option.words, option.kind, option.reason)


def _without(wide: Wide, kept: Sequence[Option]) -> Programme:
    """The wide programme with all options shut but these."""
    keep = {j for option in kept for j in option.columns}
    upper = wide.programme.col_upper.copy()
    upper[[j for option in wide.options for j in option.columns if j not in keep]] = 0.0
    return dataclasses.replace(wide.programme, col_upper=upper)


def _unlike(choices: Sequence[Choice], sets: Sequence[tuple[int, ...]]) -> list[tuple[int, ...]]:
    """The sets that open no more than another one (a chain beside the one step that suffices), nor the same once more."""
    opened = [frozenset(j for k in numbers for j in choices[k].columns) for numbers in sets]
    return [numbers for i, numbers in enumerate(sets)
            if not any(other < opened[i] or other == opened[i] and k < i for k, other in enumerate(opened))]


def _rank(row: Alternative) -> tuple[float, ...]:
    enzyme = row.enzyme[1] if row.enzyme else math.inf
    return (*(round(v, 6) for v in (row.carbon, row.atp, row.redox, -row.fixed)), enzyme, len(row.set), len(row.changes))


class _Pricing:
    """Solves one set after the other, warm."""

    def __init__(self, net: Network, lp: Programme, choices: Sequence[Choice]) -> None:
        self.net, self.choices = net, choices
        self.governed = {j for choice in choices for j in choice.columns}
        self.upper = lp.col_upper
        self.refills = {r.column: r for r in open_refills(net) if r.column is not None}
        self.free = aim.is_free(net) or any(s.rate is None for s in net.case.supplements)
        self.carbon = aim.carbon_cost(net, len(lp.col_lower))
        self.total = aim.total_cost(net, len(lp.col_lower))
        self.main = Session(lp)
        self.row_ = self.main.row(self.carbon, -INFINITY, INFINITY)
        self.least = self.main if aim.is_free(net) else Session(_as_needed(net, lp))

    def row(self, numbers: tuple[int, ...]) -> Alternative | None:
        """The set solved for the aim; None if it fails when solved by itself."""
        opened = {j for k in numbers for j in self.choices[k].columns}
        for session in {id(s): s for s in (self.main, self.least)}.values():
            for j in self.governed:
                session.bound(j, 0.0, float(self.upper[j]) if j in opened else 0.0)
        self.main.bound_row(self.row_, -INFINITY, INFINITY)
        first = self.least.minimise(self.carbon)
        if self.free and aim.is_free(self.net):
            self.main.bound_row(self.row_, -INFINITY, first.objective * (1 + aim.TIGHT) + 1e-9 if first.optimal else INFINITY)
        second = self.main.minimise(self.total)
        if not (first.optimal and second.optimal):
            return None
        members = [self.choices[k] for k in numbers]
        return self._priced(members, second.x, first.objective, second.objective, opened)

    def _priced(self, members: Sequence[Choice], x: Floats, carbon: float, total: float, opened: set[int]) -> Alternative:
        net, facts = self.net, self.net.facts
        rates, spent, masses = dict[str, float](), np.zeros(3), list[Span | None]()
        for j in sorted(opened):
            refill, rate = self.refills.get(j), float(x[j])
            if refill is None or rate < _IDLE:
                continue
            rates[refill.slug] = rate
            chain = [(refill.row, refill.sign), *((s, self._way(s, x)) for s in steps(net, refill, x[: len(net.columns)]))]
            for row, sign in chain:
                reaction = net.case.rows[row].reaction
                spent += rate * np.array([energy_used(facts, reaction, sign), electrons_used(facts, reaction, sign),
                                          max(0.0, inorganic_fixed(facts, reaction, sign))])
                masses.append(enzyme_mass(facts, net.case, row, sign, rate) if sign > 0 else None)
        known = [m for m in masses if m is not None]
        enzyme = (sum(m[0] for m in known), sum(m[1] for m in known)) if known and len(known) == len(masses) else None
        changed = [member for member in members if member.change]
        atp, redox, fixed = (float(v) for v in spent)
        return Alternative(
            tuple(sorted(member.slug for member in members)), tuple(member.label for member in members),
            tuple(member.change for member in changed), tuple(member.reason for member in changed), carbon, 0.0, total,
            atp, redox, fixed, enzyme, rates)

    def _way(self, row: str, x: Floats) -> int:
        """The direction in which a row runs."""
        return 1 if sum(self.net.columns[j].sign * x[j] for j in self.net.columns_of([row])) >= 0 else -1


def _as_needed(net: Network, lp: Programme) -> Programme:
    """The programme with feeds taken as needed."""
    lower, upper = lp.col_lower.copy(), lp.col_upper.copy()
    for j in aim.feed_columns(net):
        lower[j], upper[j] = 0.0, INFINITY
    return dataclasses.replace(lp, col_lower=lower, col_upper=upper)
