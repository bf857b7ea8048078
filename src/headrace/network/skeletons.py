"""The skeleton ledger: drained + released + removed = refilled + supplied, whole and per compartment.

Every compound has a content y (skeletons per mole). A reaction inside one compartment whose sum y S is positive in
the direction it runs makes skeletons (a refill), negative unmakes them (a removal; on a route: the entry into a
coenzyme, counted as drained). Reactions that join compartments carry y S of each side across.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from headrace.network.build import Column, Network
from headrace.values.answers import CompartmentLedger, Draw, Ledger, LedgerRow
from headrace.values.facts import Facts

SMALL = 1e-12


@dataclass(frozen=True)
class Effect:
    """What one unit of a column does to skeletons. made: net new ones (whole cell and medium). by: per compartment."""

    made: float
    by: dict[str, float]


def effect(net: Network, number: int) -> Effect:
    """The skeleton effect of one column."""
    by: dict[str, float] = defaultdict(float)
    contents = net.facts.contents
    for pool, count in net.entries[number].items():
        compound, place = net.pools[pool]
        y = float(contents.get(compound, 0))
        if y:
            by[place] += y * count
    return Effect(sum(by.values()), {k: v for k, v in by.items() if abs(v) > SMALL})


def turnover(facts: Facts, reaction: str) -> float:
    """Skeletons made by one forward turn of a reaction (negative: unmade), wherever it runs."""
    return sum(float(facts.contents.get(t.compound, 0)) * float(t.count) for t in facts.reactions[reaction].terms)


def on_route(facts: Facts) -> frozenset[str]:
    """Reactions that some route uses: never refills or removals."""
    return frozenset(r for route in facts.routes.values() for r in route.uses)


def label(net: Network, column: Column) -> str:
    """How a column is shown: the row's label, or the compound's name."""
    if column.kind == "row":
        return net.case.rows[column.name].label
    return net.facts.compounds[column.name].label if column.name in net.facts.compounds else column.name


def ledger(net: Network, x: Mapping[int, float], scalars: Mapping[str, float], draws: Sequence[Draw] = ()) -> Ledger:
    """The ledger of given rates. x: rate per column; scalars: rate per demand scalar. All terms >= 0, mmol/gDW/h.

    What outlets drain comes from their exact route vectors (`draws`), all else from contents and rates: y S v = y d
    holds for any y, so only two independent accounts can disagree, and a wrong content or a dropped return leaves a
    residual. A scalar without a draw is drained by contents alone.
    """
    rows: list[LedgerRow] = []
    routes = on_route(net.facts)
    medium = next(c.slug for c in net.host.compartments if c.role == "medium")
    for scalar, rate in scalars.items():
        own = [d for d in draws if scalar in d.scale]
        rows.extend(_from_draws(net, own, scalars) if own else _drained(net, scalar, rate))
    for number, rate in x.items():
        if abs(rate) < SMALL:
            continue
        column, what = net.columns[number], effect(net, number)
        if column.kind in ("enter", "leave"):
            if abs(what.made) > SMALL:
                side, crossing = ("right", "supplied") if column.kind == "enter" else ("left", "released")
                rows.append(LedgerRow(side, crossing, label(net, column), medium, abs(what.made) * rate))
            continue
        if abs(what.made) > SMALL:
            place = max(what.by, key=lambda k: abs(what.by[k]))
            kind = _kind(net, column, what.made, routes)
            if kind == "drained" and draws:  # the entry into a coenzyme: part of that outlet's route vector
                continue
            rows.append(LedgerRow("left" if what.made < 0 else "right", kind, label(net, column), place,
                                  abs(what.made) * rate))
    return _sum(net, rows, x, scalars)


def _kind(net: Network, column: Column, made: float, routes: frozenset[str]) -> str:
    if made > 0:
        return "refilled"
    if column.kind != "row" or net.case.rows[column.name].reaction not in routes:
        return "removed"
    terms = net.facts.reactions[net.case.rows[column.name].reaction].terms
    coenzyme = any(net.facts.compounds[t.compound].carrier and t.count * column.sign > 0 for t in terms)
    return "drained" if coenzyme else "removed"


def _from_draws(net: Network, draws: Sequence[Draw], scalars: Mapping[str, float]) -> list[LedgerRow]:
    places = {f"outlet.{i}": d.place for i, d in enumerate(net.case.demands)}
    home = next(c.slug for c in net.host.compartments if c.role == "cytosol")
    total: dict[tuple[str, str], float] = defaultdict(float)
    for draw in draws:
        rate = 1.0
        for scalar in draw.scale:
            rate *= scalars.get(scalar, 0.0)
        total[draw.label, places.get(draw.scale[0]) or home] += float(draw.skeletons) * rate
    return [LedgerRow("left", "drained", what, place, value) for (what, place), value in total.items() if abs(value) > SMALL]


def _drained(net: Network, scalar: str, rate: float) -> list[LedgerRow]:
    names = {f"outlet.{i}": d.label for i, d in enumerate(net.case.demands)} | {"growth": "biomass"}
    taken: dict[str, float] = defaultdict(float)
    for pool, amount in net.demands.get(scalar, {}).items():
        compound, place = net.pools[pool]
        taken[place] += float(net.facts.contents.get(compound, 0)) * amount * rate
    return [LedgerRow("left", "drained", names.get(scalar, scalar), place, value)
            for place, value in sorted(taken.items()) if abs(value) > SMALL]


def _sum(net: Network, rows: list[LedgerRow], x: Mapping[int, float], scalars: Mapping[str, float]) -> Ledger:
    total: dict[str, float] = defaultdict(float)
    for row in rows:
        total[row.kind] += row.skeletons
    residual = total["drained"] + total["released"] + total["removed"] - total["refilled"] - total["supplied"]
    parts = _compartments(net, rows, x, scalars)
    return Ledger(total["drained"], total["released"], total["removed"], total["refilled"], total["supplied"], residual,
                  tuple(sorted(rows, key=lambda r: (r.side, r.kind, -r.skeletons))), parts)


def _compartments(net: Network, rows: list[LedgerRow], x: Mapping[int, float],
                  scalars: Mapping[str, float]) -> tuple[CompartmentLedger, ...]:
    cells: dict[str, dict[str, float]] = {c.slug: defaultdict(float) for c in net.host.compartments}
    medium = next(c.slug for c in net.host.compartments if c.role == "medium")
    for row in rows:
        if row.compartment != medium and row.kind in ("drained", "removed", "refilled"):
            cells[row.compartment][row.kind] += row.skeletons
    for number, rate in x.items():
        if abs(rate) < SMALL or net.columns[number].kind in ("enter", "leave"):
            continue
        what = effect(net, number)
        if len(what.by) < 2 and abs(what.made) > SMALL:
            continue
        main = max(what.by, key=lambda k: abs(what.by[k])) if abs(what.made) > SMALL else ""
        outside = what.by.get(medium, 0.0)
        for place, value in what.by.items():
            moved = (value - what.made if place == main else value) * rate
            if place == medium or abs(moved) < SMALL:
                continue
            if abs(outside) > SMALL and len(what.by) == 2:
                cells[place]["supplied" if moved > 0 else "released"] += abs(moved)
            else:
                cells[place]["carried-in" if moved > 0 else "carried-out"] += abs(moved)
    return tuple(_cell(place, c) for place, c in cells.items() if place != medium and any(abs(v) > 1e-9 for v in c.values()))


def _cell(place: str, c: Mapping[str, float]) -> CompartmentLedger:
    get = lambda k: c.get(k, 0.0)  # noqa: E731
    residual = (get("drained") + get("released") + get("removed") + get("carried-out")
                - get("refilled") - get("supplied") - get("carried-in"))
    return CompartmentLedger(place, get("drained"), get("released"), get("removed"), get("carried-out"),
                             get("refilled"), get("supplied"), get("carried-in"), residual)
