"""Which refills a case has: open ones with their groups and steps, closed ones with the reason they are closed.

A refill is a reaction outside all routes that makes skeletons in the direction it runs (see `skeletons`); nothing is
tagged. Refills that add inorganic carbon to a precursor in one compartment, by themselves or with the steps that feed
them, stand in for one another and form a group; any other refill shares one only with rows of the same reaction there.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from headrace.network.build import Network, terms_of
from headrace.network.skeletons import effect, on_route, turnover
from headrace.values.facts import Facts, HostReaction, Isozyme


@dataclass(frozen=True)
class Refill:
    """A refill of a case. column: its column if open. turns are skeletons per unit of rate; reason if closed."""

    row: str
    reaction: str
    sign: int
    compartment: str
    skeletons: float
    fixed: float
    column: int | None
    kind: str
    reason: str
    from_precursor: bool = True

    @property
    def slug(self) -> str:
        """The row's slug, marked when it refills running backwards."""
        return self.row if self.sign > 0 else f"{self.row}-in-reverse"

    @property
    def group(self) -> str:
        """Which refills it can stand in for."""
        what = "carboxylation" if self.fixed > 0 and self.from_precursor else self.reaction
        return f"{what}-{self.compartment}"


def inorganic_fixed(facts: Facts, reaction: str, sign: int) -> float:
    """Inorganic carbon that a turn in direction `sign` takes up (mol; negative = gives off)."""
    carbon = set(facts.roles["inorganic-carbon"])
    return -sign * sum(float(t.count) for t in facts.reactions[reaction].terms if t.compound in carbon)


def energy_used(facts: Facts, reaction: str, sign: int) -> float:
    """Energy-carrier bonds spent directly by a turn in direction `sign` (mol ATP; negative = made)."""
    release = facts.reactions[facts.roles["energy-release"][0]]
    charged = {t.compound for t in release.terms if t.count < 0 and facts.compounds[t.compound].carrier}
    return -sign * sum(float(t.count) for t in facts.reactions[reaction].terms if t.compound in charged)


def electrons_used(facts: Facts, reaction: str, sign: int) -> float:
    """Reduced two-electron carriers taken directly by a turn in direction `sign` (mol; negative = made)."""
    return -sign * sum(float(t.count) for t in facts.reactions[reaction].terms if t.compound in facts.electron_pairs)


def open_refills(net: Network) -> tuple[Refill, ...]:
    """All refills that may run in this case."""
    routes, found = on_route(net.facts), []
    for j, column in enumerate(net.columns):
        if column.kind != "row":
            continue
        row = net.case.rows[column.name]
        what = effect(net, j)
        if row.reaction in routes or what.made <= 1e-9:
            continue
        fixed, precursor = _fixed(net, row.slug, column.sign)
        found.append(Refill(row.slug, row.reaction, column.sign, _where(row), what.made, fixed, j,
                            net.case.levels[row.slug].kind, net.case.levels[row.slug].reason, precursor))
    return tuple(found)


def closed_refills(net: Network) -> tuple[Refill, ...]:
    """Refills that exist in the host or the graph but can't run here, each with its reason."""
    facts, case, routes, found = net.facts, net.case, on_route(net.facts), []
    for slug, row in sorted(case.rows.items()):
        made = turnover(facts, row.reaction)
        if row.reaction in routes or abs(made) < 1e-9 or facts.reactions[row.reaction].transport:
            continue
        signs = {"forward": (1,), "reverse": (-1,), "both": (1, -1)}[row.direction]
        level = case.levels[slug]
        for sign in (s for s in (1, -1) if s * made > 0):
            fixed = inorganic_fixed(facts, row.reaction, sign)
            if level.level == "off" and sign in signs:
                found.append(Refill(slug, row.reaction, sign, _where(row), sign * made, fixed, None, level.kind, level.reason))
            elif sign not in signs and fixed > 0:
                reason = "in this host it runs only in the direction that unmakes skeletons"
                found.append(Refill(slug, row.reaction, sign, _where(row), sign * made, fixed, None, "direction", reason))
    have = {row.reaction for row in case.rows.values()}
    absent = {a.reaction: a.reason for a in net.host.absences}
    cytosol = next(c.slug for c in net.host.compartments if c.role == "cytosol")
    for slug, sign in sorted(_elsewhere(facts) - {(r, s) for r in have for s in (1, -1)}):
        reason = absent.get(slug, "the host's facts do not list it")
        found.append(Refill(slug, slug, sign, cytosol, sign * turnover(facts, slug), inorganic_fixed(facts, slug, sign), None,
                            "absent", reason if reason.startswith("absent") else f"absent: {reason}"))
    return tuple(found)


def _elsewhere(facts: Facts) -> set[tuple[str, int]]:
    """(reaction, direction) of all refills that some host has: what another host lacks is named from these."""
    routes = on_route(facts)
    ways = {"forward": (1,), "reverse": (-1,), "both": (1, -1)}
    return {(row.reaction, sign) for host in facts.hosts.values() for row in host.reactions for sign in ways[row.direction]
            if row.reaction not in routes
            and not (facts.reactions[row.reaction].transport or facts.reactions[row.reaction].lumped)
            and sign * turnover(facts, row.reaction) > 1e-9
            and any(t.count * sign > 0 and facts.compounds[t.compound].anchor for t in facts.reactions[row.reaction].terms)}


def _where(row: HostReaction) -> str:
    return row.place or row.inner


def steps(net: Network, refill: Refill, rates: Iterable[float] | None = None) -> tuple[str, ...]:
    """The zero-content steps whose flux a refill forces, nearest first (isocitrate lyase for malate synthase)."""
    return tuple(row for row, _ in _walk(net, refill.row, refill.sign, rates)[0])


def _walk(net: Network, row: str, sign: int,
          rates: Iterable[float] | None = None) -> tuple[list[tuple[str, int]], set[str]]:
    """(steps with their direction, compounds where the walk ends).

    Walks back from each taken compound that has no content, is no boundary pool and no coenzyme, as long as one
    reaction alone makes it (of several, the one that runs).
    """
    chain: list[tuple[str, int]] = []
    ends: set[str] = set()
    if row not in net.case.rows:
        return chain, ends
    wanted = _taken(net, row, sign)
    seen: set[tuple[str, str]] = set()
    x = list(rates) if rates is not None else None
    while wanted and len(chain) < 8:
        pool = wanted.pop(0)
        if pool in seen:
            continue
        seen.add(pool)
        if not _intermediate(net, pool):
            ends.add(pool[0])
            continue
        makers = [j for j in _makers(net, pool) if net.columns[j].name != row]
        if x is not None and len(makers) > 1:
            makers = [j for j in makers if x[j] > 1e-9] or makers
        if len({net.columns[j].name for j in makers}) != 1:
            continue
        step = (net.columns[makers[0]].name, net.columns[makers[0]].sign)
        if step not in chain:
            chain.append(step)
            wanted += _taken(net, *step)
    return chain, ends


def _taken(net: Network, row: str, sign: int) -> list[tuple[str, str]]:
    return [pool for pool, count in terms_of(net.facts, net.host, net.case.rows[row]) if count * sign < 0]


def _fixed(net: Network, row: str, sign: int) -> tuple[float, bool]:
    """(inorganic carbon that a refill adds with its steps, whether a precursor stands at their beginning)."""
    chain, ends = _walk(net, row, sign)
    fixed = sum(inorganic_fixed(net.facts, net.case.rows[r].reaction, s) for r, s in [(row, sign), *chain])
    return fixed, any(net.facts.compounds[c].precursor for c in ends)


def _intermediate(net: Network, pool: tuple[str, str]) -> bool:
    compound = net.facts.compounds[pool[0]]
    roles = {name for members in net.facts.roles.values() for name in members}
    plain = compound.anchor or compound.carrier or compound.precursor or compound.slug in roles
    return not plain and compound.slug not in net.host.nutrients and net.facts.contents.get(compound.slug, 0) == 0 \
        and compound.formula.get("C", 0) > 0


def _makers(net: Network, pool: tuple[str, str]) -> Iterator[int]:
    number = net.index.get(pool)
    for j, column in enumerate(net.columns):
        if number is not None and column.kind == "row" and net.entries[j].get(number, 0.0) > 0:
            yield j


def genes_text(isozymes: tuple[Isozyme, ...]) -> str:
    """Gene logic in words: "sdhA with sdhB; or frdA"."""
    return "; or ".join(" with ".join(i.genes) for i in isozymes)
