"""The requirement of each refill: least, nominal, most; what a case can't do without; how a group splits.

Requirement = forward rate of a refill, mmol/gDW/h, at the aim (nominal) and over all its optima (least, most).
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction

import numpy as np
from msgspec.structs import replace

from headrace.graph.boundary import own_carbon
from headrace.network import aim, repair
from headrace.network.build import Network, programme
from headrace.network.closure import closure, crossings, drawn, free_crossings
from headrace.network.model import ExactBound
from headrace.network.refills import (
    Refill,
    closed_refills,
    energy_used,
    genes_text,
    open_refills,
    steps,
)
from headrace.network.skeletons import label, ledger
from headrace.solve.linear import INFINITY, Session, Solution
from headrace.values.answers import (
    DrainRow,
    Draw,
    FeedRow,
    GroupRow,
    Ledger,
    LedgerRow,
    RateRow,
    RefillAnswer,
    RefillRow,
)
from headrace.values.facts import Facts, Quantity


def drain_rows(facts: Facts, draws: Sequence[Draw], scalars: Mapping[str, float]) -> tuple[DrainRow, ...]:
    """Draws times their rates, one row per outlet and pool (mmol/gDW/h). Draws of one outlet in one pool are summed."""
    cells: dict[tuple[str, str, str], list[float]] = {}
    for draw in draws:
        rate = float(np.prod([scalars.get(k, 0.0) for k in draw.scale]))
        for term in draw.pools:
            cell = cells.setdefault((draw.label, term.compound, term.place), [0.0, 0.0, 0.0])
            for i, part in enumerate((term.taken, term.returned, term.shuttled)):
                cell[i] += float(part) * rate
    rows = []
    for (outlet, compound, place), (taken, returned, shuttled) in cells.items():
        if max(taken, returned, shuttled) < 1e-12:
            continue
        net, about = taken - returned, facts.compounds[compound]
        rows.append(DrainRow(outlet, f"{about.label} ({place})", compound, place, taken, returned, shuttled, net,
                             net * own_carbon(facts, compound), net * float(facts.contents.get(compound, 0))))
    return tuple(sorted(rows, key=lambda r: (r.outlet, -abs(r.skeletons), -abs(r.carbon_net), r.pool)))


def require(net: Network, draws: Sequence[Draw] = (), resolve: repair.Resolve | None = None) -> RefillAnswer:
    """Answer one case: ledger, requirements, closed refills; or the shortage and repairs when it can't be met.

    resolve: the scenario with changes, so that a repair is also verified in the case that it makes.
    """
    shared, solved = in_force(net)
    if not isinstance(solved, aim.Aimed):
        return _infeasible(net, draws, resolve)
    rates = {j: solved.rate(j) for j in range(len(net.columns))}
    opened = open_refills(net)
    groups = _groups(net, solved, opened, shared is not net)
    rows = [_row(net, solved, r, groups) for r in opened] + [_closed(net, r) for r in closed_refills(net)]
    law = _by_group(ledger(net, rates, solved.scalars, draws), rows, [g for g, _ in groups.values()])
    inside = crossings(net, solved.x) + free_crossings(net, solved.x, solved.scalars)
    out = drawn(net, solved.scalars)
    least = aim.least_carbon(net) if not aim.is_free(net) else None
    return RefillAnswer(
        answer="feasible", aim=solved.words, drains=drain_rows(net.facts, draws, solved.scalars),
        ledger=law, refills=tuple(rows), groups=tuple(g for g, _ in groups.values()),
        feed=_feeds(net, rates), crossings=inside, drawn=out, shortage=(), repairs=(), closure=closure(net, inside + out),
        removals=_removals(net, solved), rates=_rates(net, solved), energy=_energy(net, solved), scalars=solved.scalars,
        surplus_carbon=None if least is None else solved.carbon - least,
        cycling_cap=None if not net.case.slack else net.case.slack * solved.total, design_cover=design_cover(net))


def _by_group(law: Ledger, rows: Sequence[RefillRow], groups: Sequence[GroupRow]) -> Ledger:
    """The ledger with refilled rows by requirement: a member where its share is known, else its group as one row.

    Which member of a group a solution happens to use means nothing; the group's total does.
    """
    kept = [r for r in law.rows if r.kind != "refilled"]
    for group in groups:
        members = [r for r in rows if r.open and r.group == group.group]
        if all(r.nominal is not None for r in members):
            kept += [LedgerRow("right", "refilled", r.label, r.compartment, (r.nominal or 0.0) * r.skeletons_per_turn)
                     for r in members if r.nominal]
        elif group.nominal:
            kept.append(LedgerRow("right", "refilled", f"{group.label}, split open", members[0].compartment,
                                  group.nominal * members[0].skeletons_per_turn))
    return replace(law, rows=tuple(sorted(kept, key=lambda r: (r.side, r.kind, -r.skeletons))))


def rate_ranges(net: Network) -> tuple[RateRow, ...]:
    """The net rate of every row at the aim with its least and most over the optima (within the case's slack)."""
    _, solved = in_force(net)
    if not isinstance(solved, aim.Aimed):
        return ()
    found = []
    for row in _rates(net, solved):
        weights = {j: float(c.sign) for j, c in enumerate(net.columns) if c.kind in ("row", "spill") and c.name == row.reaction}
        found.append(RateRow(row.reaction, row.rate, *solved.range(weights)))
    return tuple(found)


def _infeasible(net: Network, draws: Sequence[Draw], resolve: repair.Resolve | None) -> RefillAnswer:
    shortage, repairs, words = repair.explain(net, resolve)
    scalars = {**net.rates, **dict.fromkeys(net.coupled, 0.0)}
    return RefillAnswer(
        answer="infeasible", aim=aim.AIM_FREE if aim.is_free(net) else aim.AIM_FIXED,
        drains=drain_rows(net.facts, draws, scalars), ledger=None,
        refills=tuple([_idle(net, r) for r in open_refills(net)] + [_closed(net, r) for r in closed_refills(net)]),
        groups=(), feed=(), crossings=(), drawn=(), shortage=shortage, repairs=repairs, closure={}, scalars=scalars,
        findings=words)


def _feeds(net: Network, rates: Mapping[int, float]) -> tuple[FeedRow, ...]:
    return tuple(FeedRow(net.columns[j].name, rates[j], rates[j] * net.facts.compounds[net.columns[j].name].formula.get("C", 0))
                 for j in aim.feed_columns(net))


def _energy(net: Network, solved: aim.Aimed) -> dict[str, float]:
    """ATP spent by demand and spilled, mmol/gDW/h; P/O where the host's facts give it."""
    release = net.facts.roles["energy-release"][0]
    spilled = sum(solved.rate(j) for j, c in enumerate(net.columns) if _reaction(net, j) == release)
    grown = net.case.energy.get("growth-associated-atp", 0.0) * solved.scalars.get("growth", 0.0)
    return {"maintenance": net.case.energy.get("maintenance", 0.0), "growth": grown, "spilled": spilled}


def _reaction(net: Network, j: int) -> str:
    column = net.columns[j]
    if column.kind == "spill":
        return column.name
    return net.case.rows[column.name].reaction if column.kind == "row" else ""


def _rates(net: Network, solved: aim.Aimed) -> tuple[RateRow, ...]:
    total: dict[str, float] = defaultdict(float)
    for j, column in enumerate(net.columns):
        if column.kind in ("row", "spill"):
            total[column.name] += column.sign * solved.rate(j)
    return tuple(RateRow(name, rate) for name, rate in sorted(total.items()))


def _removals(net: Network, solved: aim.Aimed) -> tuple[RateRow, ...]:
    found = ledger(net, {j: solved.rate(j) for j in range(len(net.columns))}, {})
    return tuple(RateRow(r.what, r.skeletons) for r in found.rows if r.kind == "removed")


def _stated_shares(net: Network, rows: Sequence[str]) -> dict[str, Quantity]:
    """Sourced shares of a group's rows in its requirement, where at most one row is left over (it takes the rest)."""
    stated = {q.about: q for q in net.host.quantities if q.kind == "split-share" and q.about in rows}
    return stated if len(rows) > 1 and len(rows) - len(stated) <= 1 else {}


def in_force(net: Network) -> tuple[Network, aim.Aimed | Solution]:
    """(the network that the answer rests on, its solution for the aim): with measured splits as bounds where they can hold."""
    shared = with_shares(net)
    solved = aim.solve(shared)
    if isinstance(solved, aim.Aimed) or shared is net:
        return shared, solved
    return net, aim.solve(net)


def with_shares(net: Network) -> Network:
    """The network with each measured split as a bound: (1 - share) v_row - share * (the group's other rows) = 0."""
    members: dict[str, list[Refill]] = defaultdict(list)
    for refill in open_refills(net):
        members[refill.group].append(refill)
    bounds = []
    for refills in members.values():
        for row, quantity in _stated_shares(net, sorted({r.row for r in refills})).items():
            share = quantity.value
            weights = {r.column: 1 - share if r.row == row else -share for r in refills if r.column is not None}
            bounds.append((f"measured share of {row}", ExactBound(weights, {}, Fraction(0), Fraction(0))))
    return net.bounded(bounds)


def _groups(
    net: Network, solved: aim.Aimed, opened: Iterable[Refill], shares_hold: bool
) -> dict[str, tuple[GroupRow, list[Refill]]]:
    members: dict[str, list[Refill]] = defaultdict(list)
    for refill in opened:
        members[refill.group].append(refill)
    found = {}
    for name, refills in sorted(members.items()):
        columns = [r.column for r in refills if r.column is not None]
        low, high = _clean(solved.range(dict.fromkeys(columns, 1.0)))
        nominal = sum(solved.rate(j) for j in columns)
        capacity = _capacity(net, [r.row for r in refills])
        found[name] = (GroupRow(
            name, group_label(net, refills), tuple(sorted(r.slug for r in refills)), max(low, 0.0), nominal, high,
            capacity, _cover(capacity, nominal), aim.necessary(net, columns), _split(net, refills, shares_hold)[0]), refills)
    return found


def _clean(ends: tuple[float, float]) -> tuple[float, float]:
    """A range without what the optima's tolerance leaves: below 1e-6 mmol/gDW/h nothing runs."""
    low, high = (0.0 if abs(end) < 1e-6 else end for end in ends)
    return low, high


def group_label(net: Network, refills: Sequence[Refill]) -> str:
    """A group's name for people: what its members do, and where."""
    where = next(c.label for c in net.host.compartments if c.slug == refills[0].compartment)
    what = "carboxylation" if refills[0].fixed > 0 else net.facts.reactions[refills[0].reaction].label
    return f"{what} in the {where}"


def _cover(capacity: float | None, nominal: float | None) -> float | None:
    return capacity / nominal if capacity is not None and nominal is not None and nominal > 1e-9 else None


def _capacity(net: Network, rows: Sequence[str]) -> float | None:
    """The largest total rate of these rows by the case's limits; None if any of them is unlimited."""
    used, total = set(), 0.0
    for limit in net.case.limits:
        if any(r in limit.rows for r in rows):
            used |= set(limit.rows) & set(rows)
            total += limit.rate
    return total if used == set(rows) else None


def _split(net: Network, refills: Sequence[Refill], shares_hold: bool) -> tuple[str, dict[str, float]]:
    """Why and how a group's requirement is shared: (reason, share per refill slug); no shares = open."""
    rows = sorted({r.row for r in refills})
    if len(refills) == 1:
        return "only member", {refills[0].slug: 1.0}
    stated = _stated_shares(net, rows)
    if stated and shares_hold and len(rows) == len(refills):
        shares = {row: float(q.value) for row, q in stated.items()}
        shares |= {row: 1.0 - sum(shares.values()) for row in rows if row not in stated}
        source = next(iter(stated.values()))
        texts = [net.facts.sources[s].text for s in source.basis.sources if s in net.facts.sources]
        return f"measured share: {'; '.join(texts) or 'no source'}", {r.slug: shares[r.row] for r in refills}
    capacity = {r.slug: _capacity(net, [r.row]) for r in refills}
    known = [c for c in capacity.values() if c is not None]
    if len(known) == len(refills) and sum(known) > 0:
        return "in proportion to capacity", {k: (c or 0.0) / sum(known) for k, c in capacity.items()}
    if stated:
        return "open: the measured share can't hold in this case", {}
    return "open: no fact or capacity says how these share", {}


def _row(net: Network, solved: aim.Aimed, refill: Refill, groups: Mapping[str, tuple[GroupRow, list[Refill]]]) -> RefillRow:
    assert refill.column is not None
    group, members = groups[refill.group]
    low, high = _clean(solved.range({refill.column: 1.0}))
    reason, shares = group.split, _split(net, members, group.split.startswith("measured"))[1]
    nominal = shares[refill.slug] * (group.nominal or 0.0) if shares else (0.0 if high < 1e-9 else None)
    if nominal is None and abs(high - low) < 1e-6 * max(1.0, high):
        nominal, reason = solved.rate(refill.column), "fixed by the balance"
    capacity = _capacity(net, [refill.row])
    base = _idle(net, refill, steps(net, refill, list(solved.x[: len(net.columns)])))
    return replace(base, least=max(low, 0.0), nominal=nominal, most=high, split=reason, capacity=capacity,
                    cover=_cover(capacity, nominal), necessary=aim.necessary(net, [refill.column]))


def _closed(net: Network, refill: Refill) -> RefillRow:
    return _idle(net, refill)


def _idle(net: Network, refill: Refill, chain: tuple[str, ...] = ()) -> RefillRow:
    """A refill's facts without rates (closed, or the case is infeasible)."""
    facts, row = net.facts, net.case.rows.get(refill.row)
    reaction = facts.reactions[refill.reaction]
    enzyme = facts.enzymes.get(reaction.enzyme)
    basis = row.basis if row else reaction.basis
    sequence = [refill.reaction] + [net.case.rows[s].reaction for s in chain]
    signs = [refill.sign] + [1 if net.case.rows[s].direction != "reverse" else -1 for s in chain]
    cofactors = tuple(dict.fromkeys(reaction.cofactors + (enzyme.cofactors if enzyme else ())))
    name = row.label if row else reaction.label
    return RefillRow(
        refill=refill.slug, label=name if refill.sign > 0 else f"{name}, in reverse", group=refill.group,
        ec=reaction.ec, compartment=refill.compartment, steps=chain, skeletons_per_turn=refill.skeletons, least=None,
        nominal=None, most=None, split="", capacity=_capacity(net, [refill.row]) if row else None, cover=None,
        necessary=False, open=refill.column is not None, reason=refill.reason,
        atp=sum(energy_used(facts, r, s) for r, s in zip(sequence, signs, strict=True)),
        carbon_fixed=sum(max(0.0, _fixed(facts, r, s)) for r, s in zip(sequence, signs, strict=True)),
        genes=genes_text(row.isozymes) if row else "", cofactors=cofactors, reading=basis.reading,
        source="; ".join(facts.sources[s].text for s in basis.sources if s in facts.sources))


def _fixed(facts: Facts, reaction: str, sign: int) -> float:
    carbon = set(facts.roles["inorganic-carbon"])
    return -sign * sum(float(t.count) for t in facts.reactions[reaction].terms if t.compound in carbon)


def design_cover(net: Network) -> float | None:
    """The largest common factor on all outlets and growth that the case's limits allow, feed as needed.

    maximise t  subject to  S v = maintenance + t * (all other demands); None when nothing limits it or none is stated.
    """
    if not net.case.limits or net.coupled:
        return None
    scaled = {k: r for k, r in net.rates.items() if k != "maintenance" and r > 0}
    if not scaled:
        return None
    lp = programme(net, free={"t": scaled}, rates={"maintenance": net.rates["maintenance"]})
    for j in aim.feed_columns(net):
        lp.col_lower[j], lp.col_upper[j] = 0.0, INFINITY
    gain = np.zeros(len(lp.col_lower))
    gain[len(net.columns)] = 1.0
    found = Session(lp).maximise(gain)
    return found.objective if found.optimal else None


__all__ = ["design_cover", "drain_rows", "label", "require"]
