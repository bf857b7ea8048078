"""Why a case can't be met, and which smallest changes would open it; every proposed change is verified by solving.

Shortage: an elastic LP that lets every anchor, precursor and drawn pool be topped up, each mole at its carbon count,
    minimise  sum c_p s_p   subject to   S v + s = d,   s >= 0
(three times that for pools that are only drawn, so that the root is named); its s_p are what is missing. Repairs: one network holds every closed row, absent refill and possible supplement, all
shut; each is opened alone and kept if the case becomes feasible. Where no single change does, a smallest joint set is
found by deletion from all of them.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import msgspec
import numpy as np

from headrace.network import aim
from headrace.network.build import Network, build, cytosol_of, medium_of, programme
from headrace.network.refills import Refill, closed_refills, steps
from headrace.solve.linear import INFINITY, Session
from headrace.values.answers import Repair, Shortage
from headrace.values.case import Case, Finding, Level, Supplement
from headrace.values.facts import Basis, Facts, HostReaction


@dataclass(frozen=True)
class Candidate:
    """One change that might open a case. columns: what it opens in the wide network."""

    words: str
    kind: str
    columns: tuple[int, ...]
    refill: bool


def explain(net: Network) -> tuple[tuple[Shortage, ...], tuple[Repair, ...], tuple[Finding, ...]]:
    """Shortage per pool, verified repairs, and findings in words for an infeasible case."""
    missing, surplus = shortage(net)
    words = [Finding("stop", "feasibility", s.pool, f"{s.pool} can't be served: {s.missing:.4g} mmol/gDW/h are missing")
             for s in missing]
    words += [Finding("stop", "feasibility", name, f"{rate:.4g} mmol/gDW/h of the stated {name} uptake can neither be used "
                      "nor leave; let something be released or leave the uptake out") for name, rate in surplus]
    found = repairs(net)
    if not found:
        words.append(Finding("stop", "feasibility", net.case.title, "no change that the facts offer (closed rows, absent "
                             "refills, supplements, by-products) opens this case; the rates asked for are out of reach"))
    return missing, found, tuple(words)


def shortage(net: Network) -> tuple[tuple[Shortage, ...], list[tuple[str, float]]]:
    """(pools that are short, mmol/gDW/h; feeds that can't be used up, name and rate)."""
    facts = net.facts
    drawn = {p for k in net.demands for p, a in net.demands[k].items() if a > 0}
    tops = [p for p, (name, place) in enumerate(net.pools)
            if p not in net.free and place != medium_of(net.host)
            and (facts.compounds[name].anchor or facts.compounds[name].precursor or p in drawn)]
    feeds = {f.compound for f in net.case.feeds}
    spare = [net.index[(f, medium_of(net.host))] for f in sorted(feeds) if (f, medium_of(net.host)) in net.index]
    extra = [({p: 1.0}, 0.0, INFINITY) for p in tops] + [({p: -1.0}, 0.0, INFINITY) for p in spare]
    session = Session(programme(net, extra=extra))
    cost, start = np.zeros(session.columns), session.columns - len(extra)
    served = _served(net)
    for i, p in enumerate(tops):
        name, place = net.pools[p]
        compound = facts.compounds[name]
        root = 1.0 if compound.anchor or compound.precursor else 3.0  # name the pool at the root, not what hangs on it
        root *= 1.0 - 0.01 * served.get(name, 0) + (0.0 if place == cytosol_of(net.host) else 0.05)
        cost[start + i] = root * (1.0 + compound.formula.get("C", 0))
    for i, p in enumerate(spare):
        cost[start + len(tops) + i] = 1.0 + facts.compounds[net.pools[p][0]].formula.get("C", 0)
    found = session.minimise(cost)
    if not found.optimal:
        return (), []
    x = found.x[start:]
    short = tuple(Shortage(_name(net, p), float(x[i])) for i, p in enumerate(tops) if x[i] > 1e-7)
    left = [(facts.compounds[net.pools[p][0]].label, float(x[len(tops) + i])) for i, p in enumerate(spare)
            if x[len(tops) + i] > 1e-7]
    return tuple(sorted(short, key=lambda s: -s.missing)), left


def _served(net: Network) -> dict[str, int]:
    """How many closed refills would make each anchor: of equal pools the one that they serve is named."""
    count: dict[str, int] = {}
    for reaction, sign in {(r.reaction, r.sign) for r in closed_refills(net) if r.kind != "direction"}:
        for term in net.facts.reactions[reaction].terms:
            if term.count * sign > 0 and net.facts.compounds[term.compound].anchor:
                count[term.compound] = count.get(term.compound, 0) + 1
    return count


def _name(net: Network, pool: int) -> str:
    compound, place = net.pools[pool]
    return f"{net.facts.compounds[compound].label} ({next(c.label for c in net.host.compartments if c.slug == place)})"


def repairs(net: Network, most: int = 12) -> tuple[Repair, ...]:
    """Verified single changes (refills first), or the members of one smallest joint change; plus a common scale."""
    wide, candidates = widen(net)
    base = programme(wide)
    every = {j for c in candidates for j in c.columns}
    for j in every:
        base.col_upper[j] = 0.0
    session = Session(base)
    found: list[Repair] = []
    for candidate in candidates:
        _set(session, candidate, INFINITY)
        if session.feasible():
            found.append(Repair(candidate.words, candidate.kind, _carbon(wide, session)))
        _set(session, candidate, 0.0)
        if len(found) >= most:
            break
    if not found:
        found = _joint(wide, session, candidates)
    scaled = _scale(net)
    return tuple(found) + ((scaled,) if scaled else ())


def _set(session: Session, candidate: Candidate, upper: float) -> None:
    for j in candidate.columns:
        session.bound(j, 0.0, upper)


def _carbon(net: Network, session: Session) -> float | None:
    found = session.minimise(aim.carbon_cost(net, session.columns))
    return found.objective if found.optimal else None


def _joint(net: Network, session: Session, candidates: list[Candidate]) -> list[Repair]:
    """One irreducible set by deletion: none of its members can be left out."""
    for candidate in candidates:
        _set(session, candidate, INFINITY)
    if not session.feasible():
        return []
    kept = []
    for candidate in reversed(candidates):
        _set(session, candidate, 0.0)
        if not session.feasible():
            _set(session, candidate, INFINITY)
            kept.append(candidate)
    carbon = _carbon(net, session)
    words = "; and ".join(c.words for c in reversed(kept))
    return [Repair(words, "joint", carbon)] if kept else []


def _scale(net: Network) -> Repair | None:
    """The largest common factor below 1 on all outlets and growth with which the case is feasible."""
    scaled = {k: r for k, r in net.rates.items() if k != "maintenance" and r > 0}
    if net.coupled or not scaled:
        return None
    lp = programme(net, free={"t": scaled}, rates={"maintenance": net.rates["maintenance"]})
    gain = np.zeros(len(lp.col_lower))
    gain[len(net.columns)] = 1.0
    found = Session(lp).maximise(gain)
    if not found.optimal or not 1e-6 < found.objective < 1:
        return None
    return Repair(f"lower all outlet rates and growth to {found.objective:.3g} of what is asked", "lower",
                  float(aim.carbon_cost(net, len(found.x)) @ found.x))


def widen(net: Network) -> tuple[Network, list[Candidate]]:
    """The case with every candidate present, and the candidates with the columns they open."""
    case, facts = net.case, net.facts
    refills = closed_refills(net)
    rows, levels = dict(case.rows), dict(case.levels)
    words: dict[str, tuple[str, str, bool]] = {}
    closed = {r.row for r in refills if r.kind != "direction"}
    for slug, level in case.levels.items():
        if level.level == "off":
            levels[slug] = Level("on", "open", "tried as a repair")
            words[slug] = (*_reopen_words(case, slug, level), slug in closed)
    for refill in refills:
        if refill.kind == "absent":
            rows[refill.row] = _new_row(facts, refill.row, cytosol_of(net.host), refill.sign)
            levels[refill.row] = Level("on", "added", "tried as a repair")
            words[refill.row] = (f"add {facts.reactions[refill.row].label}", "add", True)
    extra = [c for c in _supplements(net, rows) if c not in {s.compound for s in case.supplements}]
    out = [c for c in _releasable(net, rows) if c not in case.releases]
    wide = build(facts, msgspec.structs.replace(
        case, rows=rows, levels=levels, supplements=case.supplements + tuple(Supplement(c) for c in extra),
        releases=case.releases + tuple(out)))
    found = [Candidate(w, kind, tuple(wide.columns_of([slug])), refill) for slug, (w, kind, refill) in words.items()]
    found += _chains(wide, case, refills) + _regulators(wide, case)
    for kind, verb, names in (("enter", "supplement", extra), ("leave", "release", out)):
        for name in names:
            columns = tuple(j for j, c in enumerate(wide.columns) if c.kind == kind and c.name == name)
            found.append(Candidate(f"{verb} {facts.compounds[name].label}", verb, columns, False))
    found = [c for c in found if c.columns]
    order = {"reopen": 0, "regulator": 1, "express": 1, "add": 2, "supplement": 3, "release": 4}
    return wide, sorted(found, key=lambda c: (not c.refill, order.get(c.kind, 5), c.words))


def _chains(wide: Network, case: Case, refills: tuple[Refill, ...]) -> list[Candidate]:
    """A closed refill together with the closed steps that alone feed it (malate synthase with isocitrate lyase)."""
    found = []
    for refill in refills:
        if refill.row not in case.rows or refill.kind == "direction":
            continue
        closed = [s for s in steps(wide, refill) if s in case.levels and case.levels[s].level == "off"]
        if closed:
            rows = [refill.row, *closed]
            text = " with ".join(case.rows[r].label for r in rows)
            reasons = "; ".join(dict.fromkeys(case.levels[r].reason for r in rows))
            found.append(Candidate(f"open {text} ({reasons})", "express", tuple(wide.columns_of(rows)), True))
    return found


def _regulators(wide: Network, case: Case) -> list[Candidate]:
    """Regulators whose removal alone turns closed rows on."""
    rules = {rule.slug: rule for rule in wide.host.expressions if rule.removed_regulators and rule.level == "on"}
    opened: dict[str, list[str]] = {}
    for slug, row in case.rows.items():
        if case.levels[slug].level != "off" or case.levels[slug].kind == "removed":
            continue
        for rule in (rules[name] for name in row.expression if name in rules):
            for gene in rule.removed_regulators:
                opened.setdefault(gene, []).append(slug)
    return [Candidate(f"remove the regulator {gene} (turns on {', '.join(case.rows[r].label for r in rows)})", "regulator",
                      tuple(wide.columns_of(rows)), True) for gene, rows in sorted(opened.items())]


def _reopen_words(case: Case, slug: str, level: Level) -> tuple[str, str]:
    label = case.rows[slug].label
    if level.kind == "removed":
        return f"keep {label}", "reopen"
    return f"express {label} ({level.reason})", "express"


def _new_row(facts: Facts, reaction: str, place: str, sign: int) -> HostReaction:
    direction = "forward" if sign > 0 else "reverse"
    return HostReaction(reaction, facts.reactions[reaction].label, reaction, direction, Basis("recalled"), place=place)


def _crossing(net: Network, rows: dict[str, HostReaction], sign: int) -> Iterator[str]:
    """Compounds that some row can bring across from (sign -1) or to (sign +1) the medium."""
    medium, seen = medium_of(net.host), set()
    for row in rows.values():
        if medium not in (row.outer, row.inner):
            continue
        side = "outer" if row.outer == medium else "inner"
        ways = {"forward": (1,), "reverse": (-1,), "both": (1, -1)}[row.direction]
        for term in net.facts.reactions[row.reaction].terms:
            if term.side == side and any(term.count * w * sign > 0 for w in ways):
                seen.add(term.compound)
    yield from sorted(seen)


def _supplements(net: Network, rows: dict[str, HostReaction]) -> list[str]:
    feeds, known = {f.compound for f in net.case.feeds}, set(net.host.nutrients)
    roles = {n for members in net.facts.roles.values() for n in members}
    return [c for c in _crossing(net, rows, -1) if c not in feeds | known | roles
            and net.facts.compounds[c].formula.get("C", 0) > 0]


def _releasable(net: Network, rows: dict[str, HostReaction]) -> list[str]:
    known = set(net.host.nutrients) | {n for members in net.facts.roles.values() for n in members}
    feeds = {f.compound for f in net.case.feeds}
    return [c for c in _crossing(net, rows, 1) if c not in known | feeds]
