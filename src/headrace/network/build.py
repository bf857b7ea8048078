"""From a case to its network: pools, columns and the demands that a programme draws.

    S v = sum_k r_k d_k        over all balanced pools,   lower <= v <= upper,   v >= 0

Columns are a row's forward or backward run, or a compound entering or leaving the medium; d_k is what one unit of
scalar k ("growth", "maintenance", "outlet.0") draws from the pools, r_k its rate. Rates are mmol/gDW/h.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from fractions import Fraction

import numpy as np

from headrace.errors import FactsError
from headrace.network.model import Bound, Column, Exact, ExactBound, Network, Pool
from headrace.solve.linear import INFINITY, Floats, Programme
from headrace.values.case import Case
from headrace.values.facts import Basis, Facts, Host, HostReaction

__all__ = ["Bound", "Column", "Network", "Pool", "build", "cytosol_of", "exactly", "medium_of", "place_of", "programme",
           "terms_of"]

ZERO, ONE = Fraction(0), Fraction(1)


def place_of(facts: Facts, host: Host, row: HostReaction, compound: str, side: str) -> str:
    """The compartment of one participant: the membrane for membrane-bound compounds, else the row's own places."""
    if facts.compounds[compound].membrane:
        return next(c.slug for c in host.compartments if c.role == "membrane")
    if side == "outer":
        return row.outer
    return row.inner if side == "inner" or not row.place else row.place


def terms_of(facts: Facts, host: Host, row: HostReaction) -> list[tuple[Pool, Fraction]]:
    """(pool, count) of a row as written; count < 0 is taken."""
    reaction = facts.reactions[row.reaction]
    return [((t.compound, place_of(facts, host, row, t.compound, t.side)), t.count) for t in reaction.terms]


def exactly(value: float) -> Fraction:
    """A number of the case as the decimal that it prints as (0.15 = 3/20). Raises ValueError for infinity."""
    return Fraction(repr(float(value)))


def medium_of(host: Host) -> str:
    """The host's medium compartment."""
    return next(c.slug for c in host.compartments if c.role == "medium")


def cytosol_of(host: Host) -> str:
    """The host's cytosol."""
    return next(c.slug for c in host.compartments if c.role == "cytosol")


def build(facts: Facts, case: Case) -> Network:
    """Lay out the network of one case. Raises FactsError where facts contradict one another."""
    maker = _Maker(facts, case)
    maker.add_rows()
    maker.add_crossings()
    maker.add_demands()
    maker.add_bounds()
    return maker.finish()


class _Maker:
    """Collects the parts of one network; `build` calls its steps in order."""

    def __init__(self, facts: Facts, case: Case) -> None:
        self.facts, self.case, self.host = facts, case, facts.hosts[case.host]
        self.medium, self.cytosol = medium_of(self.host), cytosol_of(self.host)
        self.index: dict[Pool, int] = {}
        self.columns: list[Column] = []
        self.entries: list[dict[int, Fraction]] = []
        self.lower: list[Fraction | None] = []
        self.upper: list[Fraction | None] = []
        self.demands: dict[str, dict[int, Fraction]] = {}
        self.labels: list[str] = []
        self.bounds: list[ExactBound] = []

    def pool(self, pool: Pool) -> int:
        return self.index.setdefault(pool, len(self.index))

    def column(self, column: Column, terms: Iterable[tuple[Pool, Fraction]], lower: float = 0.0, upper: float = INFINITY) -> None:
        entry: dict[int, Fraction] = {}
        for pool, count in terms:
            number = self.pool(pool)
            signed = count if column.sign > 0 else -count
            entry[number] = entry[number] + signed if number in entry else signed
        self.columns.append(column)
        self.entries.append({k: v for k, v in entry.items() if v})
        self.lower.append(_limit(lower))
        self.upper.append(_limit(upper))

    def add_rows(self) -> None:
        for slug, row in sorted(self.case.rows.items()):
            if self.case.levels[slug].level == "off":
                continue
            terms = self._stated_coupling(row, terms_of(self.facts, self.host, row))
            if row.direction in ("forward", "both"):
                self.column(Column("row", slug), terms)
            if row.direction in ("reverse", "both"):
                self.column(Column("row", slug, -1), terms)
        release = self.facts.reactions[self.facts.roles["energy-release"][0]]
        place = {t.compound: (t.compound, self.cytosol) for t in release.terms}
        if not any(r.reaction == release.slug and self.case.levels[s].level != "off" for s, r in self.case.rows.items()):
            self.column(Column("spill", release.slug), [(place[t.compound], t.count) for t in release.terms])

    def _stated_coupling(self, row: HostReaction, terms: list[tuple[Pool, Fraction]]) -> list[tuple[Pool, Fraction]]:
        """The row's terms, with another number of motive protons per ATP where the case states one.

        What is taken more from the membrane comes out as plain protons where the row works, so atoms and charge stay.
        """
        stated = self.case.energy.get("protons-per-atp")
        if stated is None:
            return terms
        motive, protons = self.facts.roles["motive-proton"], self.facts.roles["proton"]
        release = self.facts.reactions[self.facts.roles["energy-release"][0]]
        charged = {t.compound for t in release.terms if t.count < 0 and self.facts.compounds[t.compound].carrier}
        made = sum(count for (name, _), count in terms if name in charged)
        taken = -sum(count for (name, _), count in terms if name in motive)
        if made <= 0 or taken <= 0:
            return terms
        more = exactly(stated) * made - taken
        here = next((pool for pool, _ in terms if pool[0] in protons), (protons[0], row.place or row.inner))
        membrane = next(pool for pool, _ in terms if pool[0] in motive)
        return [*terms, (membrane, -more), (here, more)]

    def add_crossings(self) -> None:
        case, medium = self.case, self.medium
        role = self.facts.roles
        enter: dict[str, tuple[float, float]] = {n: (0.0, INFINITY) for n in self.host.nutrients}
        for name in role["oxygen"]:
            if case.oxygen == "anaerobic":
                enter.pop(name, None)
            elif case.oxygen == "limited":
                enter[name] = (0.0, float(case.oxygen_rate or 0.0))
        for extra in case.supplements:
            enter[extra.compound] = (0.0, INFINITY if extra.rate is None else extra.rate)
        for feed in case.feeds:
            enter[feed.compound] = (0.0, INFINITY) if feed.uptake is None else (feed.uptake, feed.uptake)
        enter |= {name: (rate, rate) for name, rate in case.fixed.items() if rate >= 0}
        out = {name: (-rate, -rate) for name, rate in case.fixed.items() if rate < 0}
        leave = set(self.host.nutrients) - set(role["oxygen"]) | set(role["carbon-dioxide"]) | {*case.releases, *out}
        fixed = {f.compound for f in case.feeds}
        for name, (low, high) in sorted(enter.items()):
            if name in fixed or (name, medium) in self.index:
                self.column(Column("enter", name), [((name, medium), ONE)], low, high)
        for name in sorted(leave):
            if (name, medium) in self.index:
                self.column(Column("leave", name), [((name, medium), -ONE)], *out.get(name, (0.0, INFINITY)))

    def draw(self, scalar: str, pool: Pool, amount: Fraction) -> None:
        entry = self.demands.setdefault(scalar, {})
        number = self.pool(pool)
        entry[number] = entry.get(number, ZERO) + amount

    def add_demands(self) -> None:
        case, facts = self.case, self.facts
        present = "absent" if case.oxygen == "anaerobic" else "present"
        for part in self.host.composition:
            if part.oxygen in ("", present):
                place = place_of(facts, self.host, _anywhere(part.place), part.compound, "")
                self.draw("growth", (part.compound, place), part.amount)
        self._energy("growth", exactly(case.energy.get("growth-associated-atp", 0.0)))
        self._energy("maintenance", ONE)
        for number, demand in enumerate(case.demands):
            for compound, count in demand.draws.items():
                place = place_of(facts, self.host, _anywhere(demand.place), compound, "")
                self.draw(f"outlet.{number}", (compound, place), count)
                if self.host.proton_convention == "inside-balanced":  # it leaves the cell without charge
                    acid = count * -facts.compounds[compound].charge
                    self.draw(f"outlet.{number}", (facts.roles["proton"][0], place), acid)

    def _energy(self, scalar: str, amount: Fraction) -> None:
        for term in self.facts.reactions[self.facts.roles["energy-release"][0]].terms:
            self.draw(scalar, (term.compound, self.cytosol), -term.count * amount)

    def bound(self, label: str, coefficients: dict[int, Fraction], scalars: dict[str, Fraction],
              lower: Fraction | None, upper: Fraction | None) -> None:
        self.labels.append(label)
        self.bounds.append(ExactBound(coefficients, scalars, lower, upper))

    def add_bounds(self) -> None:
        case = self.case
        basal = case.energy.get("basal-level")
        fed = {f.compound for f in case.feeds}
        feeds = [j for j, c in enumerate(self.columns) if c.kind == "enter" and c.name in fed]
        runs: dict[str, list[int]] = {}
        for j, column in enumerate(self.columns):
            if column.kind == "row":
                runs.setdefault(column.name, []).append(j)
                if case.levels[column.name].level == "basal":
                    if basal is None:
                        raise FactsError(f"row {column.name} is at basal level but host {case.host} states no basal-level")
                    self.bound(f"basal level of {column.name}", {j: ONE}, {"growth": -exactly(basal)}, None, ZERO)
        for limit in case.limits:
            used = dict.fromkeys((j for row in dict.fromkeys(limit.rows) for j in runs.get(row, ())), ONE)
            if used:
                self.bound(f"limit of {limit.label}", used, {}, None, exactly(limit.rate))
        for quantity in self.host.quantities:
            if quantity.kind == "share-of-feed" and quantity.about in runs:
                share = dict.fromkeys(runs[quantity.about], ONE) | dict.fromkeys(feeds, -quantity.value)
                self.bound(f"share of the feed for {quantity.about}", share, {}, None, ZERO)
        for number, demand in enumerate(case.demands):
            if demand.rate is None:
                share = dict.fromkeys(feeds, -exactly(demand.yield_per_feed or 0.0))
                self.bound(f"yield of {demand.label}", share, {f"outlet.{number}": ONE}, ZERO, ZERO)
        if case.growth is None:
            share = dict.fromkeys(feeds, -exactly(case.growth_yield or 0.0))
            self.bound("biomass yield", share, {"growth": ONE}, ZERO, ZERO)

    def finish(self) -> Network:
        role, host = self.facts.roles, self.host
        kinds = {c.slug: c.role for c in host.compartments}
        protons, motive = set(role["proton"]), set(role["motive-proton"])
        inside = host.proton_convention == "inside-balanced"
        free = set()
        for (compound, place), number in self.index.items():
            if compound in role["water"] or (compound in motive and inside):
                free.add(number)
            elif compound in protons and (not inside or kinds[place] == "medium"):
                free.add(number)
        rates = {"maintenance": exactly(self.case.energy.get("maintenance", 0.0))}
        coupled = []
        for number, demand in enumerate(self.case.demands):
            if demand.rate is None:
                coupled.append(f"outlet.{number}")
            else:
                rates[f"outlet.{number}"] = exactly(demand.rate)
        if self.case.growth is None:
            coupled.append("growth")
        else:
            rates["growth"] = exactly(self.case.growth)
        exact = Exact(tuple(self.entries), tuple(self.lower), tuple(self.upper), self.demands, tuple(self.bounds), rates)
        return Network(self.facts, host, self.case, tuple(self.index), tuple(self.columns), tuple(map(_rounded, self.entries)),
                       np.array([INFINITY if v is None else float(v) for v in self.upper]),
                       np.array([-INFINITY if v is None else float(v) for v in self.lower]), frozenset(free),
                       {scalar: _rounded(draws) for scalar, draws in self.demands.items()},
                       tuple(b.rounded(label) for label, b in zip(self.labels, self.bounds, strict=True)),
                       {scalar: float(rate) for scalar, rate in rates.items()}, tuple(coupled), exact, dict(self.index))


def _rounded(entry: Mapping[int, Fraction]) -> dict[int, float]:
    return {number: value.numerator / value.denominator for number, value in entry.items()}


def _limit(value: float) -> Fraction | None:
    if value == 0.0:
        return ZERO
    return None if math.isinf(value) else exactly(value)


def _anywhere(place: str) -> HostReaction:
    """A stand-in row, so that drawn compounds are placed by the same rule as reactants."""
    return HostReaction("", "", "", "forward", Basis("seen"), place=place)


def programme(net: Network, free: Mapping[str, Mapping[str, float]] | None = None,
              rates: Mapping[str, float] | None = None,
              extra: Iterable[tuple[Mapping[int, float], float, float]] = ()) -> Programme:
    """The LP of a network. rates: fixed scalars (default: the case's), on the right-hand side only.

    free: extra columns after the network's own, name -> {scalar: coefficient}, each >= 0 (a yield-coupled scalar is
    always one). extra: further columns {pool: coefficient}, lower, upper, placed last.
    """
    free = {k: {k: 1.0} for k in net.coupled} if free is None else free
    fixed = dict(net.rates if rates is None else rates)
    n_pools, n_bounds = len(net.pools), len(net.bounds)
    right = np.zeros(n_pools)
    for scalar, rate in fixed.items():
        for pool, amount in net.demands.get(scalar, {}).items():
            right[pool] += amount * rate
    row_lower, row_upper = right.copy(), right.copy()
    for pool in net.free:
        row_lower[pool], row_upper[pool] = -INFINITY, INFINITY
    shift = np.array([sum(b.scalars.get(k, 0.0) * r for k, r in fixed.items()) for b in net.bounds])
    row_lower = np.concatenate([row_lower, np.array([b.lower for b in net.bounds]) - shift])
    row_upper = np.concatenate([row_upper, np.array([b.upper for b in net.bounds]) - shift])
    columns: list[dict[int, float]] = [dict(e) for e in net.entries]
    for number, bound in enumerate(net.bounds):
        for j, coefficient in bound.coefficients.items():
            columns[j][n_pools + number] = columns[j].get(n_pools + number, 0.0) + coefficient
    lower, upper = list(net.lower), list(net.upper)
    for mix in free.values():
        entry: dict[int, float] = {}
        for scalar, coefficient in mix.items():
            for pool, amount in net.demands.get(scalar, {}).items():
                entry[pool] = entry.get(pool, 0.0) - amount * coefficient
            for number, bound in enumerate(net.bounds):
                if scalar in bound.scalars:
                    entry[n_pools + number] = entry.get(n_pools + number, 0.0) + bound.scalars[scalar] * coefficient
        columns.append(entry)
        lower.append(0.0)
        upper.append(INFINITY)
    for entry_, low, high in extra:
        columns.append(dict(entry_))
        lower.append(low)
        upper.append(high)
    return _assemble(columns, row_lower, row_upper, np.array(lower), np.array(upper), n_pools + n_bounds)


def _assemble(columns: list[dict[int, float]], row_lower: Floats, row_upper: Floats, lower: Floats, upper: Floats,
              n_rows: int) -> Programme:
    starts, rows, values = [0], [], []
    for entry in columns:
        for row in sorted(entry):
            if entry[row]:
                rows.append(row)
                values.append(entry[row])
        starts.append(len(rows))
    assert len(row_lower) == n_rows
    return Programme(np.array(starts, dtype=np.int32), np.array(rows, dtype=np.int32), np.array(values, dtype=float),
                     row_lower, row_upper, lower, upper)
