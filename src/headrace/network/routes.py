"""Exact route vectors: what one mole of a compound takes, step by step, from the boundary pools of its host.

    sum_j S_ij v_j = b_i     for every pool i that is no boundary pool;  b = 1 for the compound that is made

The columns j are the steps of the compound's route and of the routes of what those steps take. Boundary pools are
free: anchors and precursors (each in its compartment), single coenzymes, minerals, gases, water and protons.
Coenzymes that come in forms (adenylates, electron pairs, one-carbon carriers) are free to change form, but their sum
is balanced in each compartment, so that nothing is made of a coenzyme. The solution must be unique; more than one, or
none, is a fault of the facts. Counts are moles per mole, exact. Needs are positive when used and negative when made.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from headrace.errors import FactsError
from headrace.graph.boundary import Boundary
from headrace.network.sites import Site, Step, site_of, sites_of, terms_of
from headrace.network.totals import Totals, totals
from headrace.solve.exact import Solution, solve
from headrace.values.answers import PoolTerm
from headrace.values.case import Case, Level
from headrace.values.facts import Facts, HostReaction, Route

Pool = tuple[str, str]
ON = Level("on", "expressed", "")


@dataclass(frozen=True)
class RouteVector:
    """What a composition of compounds takes. All figures per mole of the composition, exact.

    amounts: (compound, compartment) -> mole drawn (negative: given back). pools: anchors and precursors touched.
    needs: atp, reduced carriers by slug (membrane carriers together as quinol), co2, ammonium, oxygen, one-carbon:
    positive = used, negative = made. steps: reaction slug -> mole (negative: backward as written). rates: the same
    by step and compartment. skeletons: net over the anchors. crossings: boundary compound -> net mole taken.
    missing: steps for which the case has no row. against: steps that run against the direction of their rows.
    """

    amounts: Mapping[Pool, Fraction]
    pools: tuple[PoolTerm, ...]
    needs: dict[str, Fraction]
    steps: dict[str, Fraction]
    skeletons: Fraction
    routes: tuple[str, ...]
    recalled: bool
    rates: Mapping[Step, Fraction] = field(default_factory=dict)
    crossings: dict[str, Fraction] = field(default_factory=dict)
    readings: tuple[str, ...] = ()
    missing: tuple[str, ...] = ()
    against: tuple[str, ...] = ()


class RouteBook:
    """Route vectors of one case's host, made when asked for and kept.

    through: boundary compounds that are to be made by their own route after all (such as cytosolic acetyl-CoA from
    citrate). chosen: slugs of routes that go before others for the compounds they make.
    """

    def __init__(self, facts: Facts, case: Case) -> None:
        self._setup(facts, case.host, case.rows, case.levels)

    @classmethod
    def of_host(cls, facts: Facts, host: str) -> RouteBook:
        """A book for a host by itself, with every row of the host available."""
        book = cls.__new__(cls)
        rows = {row.slug: row for row in facts.hosts[host].reactions}
        book._setup(facts, host, rows, dict.fromkeys(rows, ON))
        return book

    def _setup(self, facts: Facts, host: str, rows: Mapping[str, HostReaction], levels: Mapping[str, Level]) -> None:
        self.facts, self.host, self.levels = facts, facts.hosts[host], levels
        self.boundary = Boundary(facts)
        self.rows: dict[str, list[HostReaction]] = {}
        for _, row in sorted(rows.items()):
            self.rows.setdefault(row.reaction, []).append(row)
        self._routes: dict[str, list[Route]] = {}
        for _, route in sorted(facts.routes.items()):
            if not route.hosts or host in route.hosts:
                self._routes.setdefault(route.makes, []).append(route)
        for found in self._routes.values():
            found.sort(key=self.rank)
        self._kept: dict[tuple[object, ...], RouteVector] = {}

    def routes(self, compound: str) -> tuple[Route, ...]:
        """The routes that this host may use for a compound, the one in force first."""
        return tuple(self._routes.get(compound, ()))

    def available(self) -> tuple[Route, ...]:
        """All routes that this host may use, by slug."""
        return tuple(sorted((route for found in self._routes.values() for route in found), key=lambda route: route.slug))

    def follows(self, compound: str) -> bool:
        """Whether a pool has a route here whose every step the case expresses, so that it can be followed further back."""
        return any(all(self._level(reaction) in ("on", "basal") for reaction in r.uses) for r in self.routes(compound)[:1])

    def vector(
        self, compound: str, place: str = "cytosol", *, chosen: Iterable[str] = (), through: Iterable[str] = ()
    ) -> RouteVector:
        """The vector of one mole of a compound. Raises FactsError when its route is absent, open or contradictory."""
        return self.sum({(compound, place): Fraction(1)}, chosen=chosen, through=through)

    def sum(self, amounts: Mapping[Pool, Fraction], *, chosen: Iterable[str] = (), through: Iterable[str] = ()) -> RouteVector:
        """The vector of a composition: {(compound, compartment): mole}; negative amounts are given back."""
        placed: dict[Pool, Fraction] = {}
        for (compound, place), amount in amounts.items():
            pool = (compound, self._home(compound, place))
            placed[pool] = placed.get(pool, Fraction(0)) + amount
        key = (tuple(sorted(placed.items())), tuple(sorted(chosen)), tuple(sorted(through)))
        if key not in self._kept:
            rates, used = self._solve(*key)
            free = self.boundary.free - set(through)
            self._kept[key] = self._describe(placed, rates, totals(self, rates, placed, free), used)
        return self._kept[key]

    def _describe(
        self, amounts: Mapping[Pool, Fraction], rates: dict[Step, Fraction], sums: Totals, used: tuple[str, ...]
    ) -> RouteVector:
        steps: dict[str, Fraction] = {}
        for step, rate in rates.items():
            steps[step.reaction] = steps.get(step.reaction, Fraction(0)) + rate
        bases = [self.facts.routes[slug].basis for slug in used] + [self.facts.reactions[slug].basis for slug in steps]
        readings = tuple(sorted({basis.reading for basis in bases}))
        return RouteVector(
            amounts=dict(amounts),
            pools=sums.pools,
            needs=sums.needs,
            steps=steps,
            skeletons=sum((p.taken - p.returned for p in sums.pools if self.facts.compounds[p.compound].anchor), Fraction(0)),
            routes=used,
            recalled="recalled" in readings,
            rates=rates,
            crossings=sums.crossings,
            readings=readings,
            missing=tuple(sorted({s.reaction for s in rates if s.reaction not in self.rows})),
            against=tuple(sorted({s.reaction for s, rate in rates.items() if self._against(s, rate)})),
        )

    def _against(self, step: Step, rate: Fraction) -> bool:
        rows = [row for row in self.rows.get(step.reaction, ()) if site_of(row) == step.site]
        return bool(rows) and not any(row.direction in ("both", "forward" if rate > 0 else "reverse") for row in rows)

    def _home(self, compound: str, place: str) -> str:
        if self.facts.compounds[compound].membrane:
            return next(c.slug for c in self.host.compartments if c.role == "membrane")
        return place

    def rank(self, route: Route) -> tuple[int, int, bool, bool, str]:
        """Routes whose steps the case expresses go first; then preferred ones; then the host's own; then by name."""
        levels = [self._level(reaction) for reaction in route.uses]
        return (levels.count(""), levels.count("off"), not route.preferred, not route.hosts, route.slug)

    def _level(self, reaction: str) -> str:
        """The best level of the rows that catalyse a reaction: on, basal or off; "" when there is no row."""
        return max((self.levels[row.slug].level for row in self.rows.get(reaction, ())), key=_strength, default="")

    def _solve(
        self, amounts: tuple[tuple[Pool, Fraction], ...], chosen: tuple[str, ...], through: tuple[str, ...]
    ) -> tuple[dict[Step, Fraction], tuple[str, ...]]:
        free = self.boundary.free - set(through)
        made = {pool: (self._made_as(pool[0]), amount) for pool, amount in amounts if pool[0] not in free and amount}
        made = {pool: found for pool, found in made.items() if found[0]}
        if not made:
            return {}, ()
        routes = self._closure({name for name, _ in made.values()}, chosen, free)
        steps = sorted({step for route in routes for step in self.steps(route)})
        rows: dict[Pool, int] = {}
        columns = [self._column(step, rows, free) for step in steps]
        right = [Fraction(0)] * len(rows)
        for (compound, place), (_, amount) in made.items():
            number = rows.get((self.boundary.form.get(compound, compound), place))
            if number is None:
                words = f"no step of its route makes {compound} in the {place} of {self.host.slug}"
                raise FactsError(words, node=f"compound/{compound}")
            right[number] += amount
        answer = solve(columns, right)
        if answer.status != "unique":
            names = ", ".join(sorted({compound for compound, _ in made}))
            raise FactsError(self._complaint(answer, steps, rows, names), node="; ".join(sorted(r.slug for r in routes)[:3]))
        rates = {step: rate for step, rate in zip(steps, answer.x, strict=True) if rate}
        running = {s.reaction for s in rates}
        return rates, tuple(sorted(route.slug for route in routes if running.intersection(route.uses)))

    def _made_as(self, compound: str) -> str:
        """The compound whose route makes this one: itself, or for a form of a moiety another form; "" for a moiety without."""
        if compound not in self.boundary.form or self._routes.get(compound):
            return compound
        mates = (name for name, form in self.boundary.form.items() if form == self.boundary.form[compound])
        return next((name for name in sorted(mates) if self._routes.get(name)), "")

    def _closure(self, compounds: set[str], chosen: tuple[str, ...], free: frozenset[str]) -> list[Route]:
        """The routes of compounds and, in turn, of every other compound that their steps name and that has a route."""
        found: dict[str, Route] = {}
        waiting = sorted(compounds)
        for name in waiting:
            if not self._routes.get(name):
                raise FactsError(
                    f"{self.host.slug} has no route for {name}",
                    node=f"compound/{name}",
                    hint="a route is a hr:Route that hr:makes the compound; it may be bound to other hosts by hr:host",
                )
        while waiting:
            name = waiting.pop()
            routes = self._routes.get(name)
            if name in found or (name in free and name not in compounds) or not routes:
                continue
            found[name] = next((r for r in routes if r.slug in chosen), routes[0])
            for reaction in found[name].uses:
                waiting.extend(term.compound for term in self.facts.reactions[reaction].terms)
        return [found[name] for name in sorted(found)]

    def steps(self, route: Route) -> Iterable[Step]:
        """The steps of a route, at their sites. Raises FactsError for a carrier that the host lacks or a site left open."""
        for reaction in route.uses:
            for site in sites_of(self.host, self.rows.get(reaction, ()), self.facts.reactions[reaction], route):
                yield Step(reaction, site)

    def _column(self, step: Step, rows: dict[Pool, int], free: frozenset[str] | set[str]) -> dict[int, Fraction]:
        column: dict[int, Fraction] = {}
        for (compound, place), count in terms_of(self.facts, self.host, step):
            if compound not in free:
                number = rows.setdefault((self.boundary.form.get(compound, compound), place), len(rows))
                column[number] = column.get(number, Fraction(0)) + count
        return {number: count for number, count in column.items() if count}

    def _complaint(self, answer: Solution, steps: list[Step], rows: Mapping[Pool, int], made: str) -> str:
        if answer.status == "many":
            names = ", ".join(f"{steps[j].reaction} ({steps[j].site.words()})" for j in answer.free)
            return f"the route to {made} has more than one solution in {self.host.slug}; not determined: {names}"
        names = ", ".join(f"{c} in the {p}" for (c, p), number in rows.items() if number in (answer.clash or {}))
        return f"the route to {made} can't be balanced in {self.host.slug}; at odds: {names}"


def _strength(level: str) -> int:
    return ("off", "basal", "on").index(level)


__all__ = ["PoolTerm", "RouteBook", "RouteVector", "Site", "Step"]
