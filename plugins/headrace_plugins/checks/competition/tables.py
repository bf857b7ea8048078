"""The tables of competition, from what the network says."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence

from headrace.api import AddedTable, Bend, BudgetEntry, Case, Curve, DrainRow, Facts, PerLitre, Price, TableColumn

RATE, CARBON, PER = "mmol/gDW/h", "mol C/mol", "mol/mol"
_MINOR = 0.01  # of all that is made; smaller entries of a budget are put together
Cell = str | tuple[str, ...] | float | bool | None


def name_of(case: Case, scalar: str) -> str:
    """A demand's label: the outlet's, or growth."""
    return case.demands[int(scalar.partition(".")[2])].label if scalar.startswith("outlet.") else scalar


def shared(facts: Facts, rows: Sequence[DrainRow]) -> AddedTable:
    """Pools from which two outlets or more take."""
    takers: dict[tuple[str, str], list[DrainRow]] = defaultdict(list)
    for row in rows:
        if row.net > 1e-9 and facts.compounds[row.compound].formula.get("C") and not facts.compounds[row.compound].carrier:
            takers[row.compound, row.compartment].append(row)
    columns = (
        TableColumn("compound", "pool"),
        TableColumn("compartment", "in"),
        TableColumn("outlets", "outlets"),
        TableColumn("net", "taken in all, net", RATE, number=True),
        TableColumn("largest", "of that by the largest", number=True),
    )
    found: list[tuple[Cell, ...]] = []
    for (compound, place), each in sorted(takers.items(), key=lambda item: -sum(row.net for row in item[1])):
        if len({row.outlet for row in each}) > 1:
            total = sum(row.net for row in each)
            listed = tuple(f"{row.outlet} {row.net:.4g}" for row in sorted(each, key=lambda row: -row.net))
            found.append((facts.compounds[compound].label, place, listed, total, max(row.net for row in each) / total))
    return AddedTable("shared_pools", "Where outlets meet", columns, tuple(found), empty="No two outlets take from one pool.")


def priced(facts: Facts, case: Case, found: Sequence[Price]) -> AddedTable:
    """One more mole of each outlet; one more gram of dry cells for growth."""
    columns = (
        TableColumn("outlet", "one more of"),
        TableColumn("per", "per"),
        TableColumn("carbon", "feed carbon", CARBON, number=True),
        TableColumn("feed", "feed"),
        TableColumn("refill", "refill", PER, number=True),
        TableColumn("refills", "refills", detail=True),
        TableColumn("oxygen", "oxygen", PER, number=True),
        TableColumn("carbon_dioxide", "CO2", PER, number=True),
    )
    rows = tuple(
        (
            name_of(case, price.scalar),
            "gDW" if price.scalar == "growth" else "mol",
            _float(price.carbon),
            tuple(f"{float(amount):.4g} {facts.compounds[name].label}" for name, amount in price.feed.items()),
            _float(price.refill),
            tuple(f"{float(amount):.4g} {slug}" for slug, amount in price.refills.items()),
            _float(price.oxygen),
            _float(price.carbon_dioxide),
        )
        for price in found
    )
    note = (
        "Growth is priced in mmol per gram of dry cells. Feed is the least that is needed; refill, oxygen and CO2 follow the aim."
    )
    return AddedTable("prices", "What one more costs", columns, rows, note=note)


def traded(case: Case, found: Sequence[Price]) -> AddedTable:
    """What of the other outlets one more takes away, at the same feed."""
    columns = (
        TableColumn("outlet", "one more of"),
        TableColumn("instead", "takes away from"),
        TableColumn("lost", "lost", number=True),
    )
    rows = tuple(
        (name_of(case, price.scalar), name_of(case, other), float(lost))
        for price in found
        for other, lost in price.instead.items()
    )
    note = "At the least feed that the case needs; mol per mol, growth in gDW per mmol or mmol per gDW."
    return AddedTable("instead", "In terms of one another", columns, rows, note=note, empty="There is one outlet only.")


def bends(case: Case, curves: Sequence[Curve]) -> AddedTable:
    """The need of refill where it bends."""
    columns = (
        TableColumn("outlet", "outlet"),
        TableColumn("rate", "rate", RATE, number=True),
        TableColumn("yield", "yield", PER, number=True),
        TableColumn("refill", "refill needed", RATE, number=True),
        TableColumn("per_mole", "per mole from here on", PER, number=True),
        TableColumn("feed", "feed", RATE, number=True),
        TableColumn("is", "what it is"),
        TableColumn("starts", "starts here", detail=True),
        TableColumn("stops", "stops here", detail=True),
    )
    rows: list[tuple[Cell, ...]] = []
    for each in curves:
        name, last = name_of(case, each.scalar), len(each.bends) - 1
        own = [_bend(name, each.at(each.asked), "asked for")]
        for number, bend in enumerate(each.bends):
            what = "lowest" if number == 0 else "bend" if number < last else "largest" if each.largest else "end of the table"
            own.append(_bend(name, bend, what, number < last))
        rows += sorted(own, key=lambda row: float(row[1]))  # type: ignore[arg-type]
    note = (
        "Exact pieces of the case's programme, limits on refills lifted; between two rows the need is a straight line in the"
        " rate."
    )
    title, empty = "Refill needed as an outlet grows", "No outlet is asked for."
    return AddedTable("breakpoints", title, columns, tuple(rows), note=note, empty=empty)


def _bend(outlet: str, bend: Bend, what: str, goes_on: bool = True) -> tuple[Cell, ...]:
    slope = float(bend.slope) if goes_on else None
    rates = (float(bend.rate), _float(bend.yields), float(bend.need), slope, float(bend.feed))
    return (outlet, *rates, what, bend.starts, bend.stops)


def lines(case: Case, curves: Sequence[Curve]) -> AddedTable:
    """Stated capacities of refills, and the yield that each carries."""
    columns = (
        TableColumn("outlet", "outlet"),
        TableColumn("capacity_of", "capacity of"),
        TableColumn("capacity", "capacity", RATE, number=True),
        TableColumn("carries_rate", "carries a rate of", RATE, number=True),
        TableColumn("carries_yield", "and a yield of", PER, number=True),
    )
    rows = tuple(
        (name_of(case, each.scalar), line.what, float(line.capacity), _float(line.rate), _float(line.yields))
        for each in curves
        for line in each.crossings
    )
    note = "Where the whole need is put on it; empty where it carries all that the table reaches, or nothing at all."
    empty = "No capacity of a refill is stated."
    return AddedTable("capacity_lines", "What capacities carry", columns, rows, note=note, empty=empty)


def budgets(entries: Sequence[BudgetEntry]) -> AddedTable:
    """Sources and uses of each pool; those below one per cent put together."""
    columns = (
        TableColumn("pool", "pool"),
        TableColumn("what", "source or use"),
        TableColumn("kind", "kind"),
        TableColumn("rate", "made (+) or used (-)", RATE, number=True),
        TableColumn("share", "of what is made", number=True),
    )
    rows: list[tuple[Cell, ...]] = []
    for pool in dict.fromkeys(entry.pool for entry in entries):
        own = [entry for entry in entries if entry.pool == pool]
        minor = [entry for entry in own if entry.share < _MINOR]
        rows += [(entry.pool, entry.what, entry.kind, entry.rate, entry.share) for entry in own if entry.share >= _MINOR]
        if minor:
            rest = sum(entry.rate for entry in minor)
            what = f"{len(minor)} smaller ones" if len(minor) > 1 else minor[0].what
            kind = "other" if len(minor) > 1 else minor[0].kind
            rows.append((pool, what, kind, rest, sum(entry.share for entry in minor)))
    note = "The pools that refills take from, and inorganic carbon in all its forms and compartments; each sums to zero."
    return AddedTable("budgets", "Budgets", columns, tuple(rows), note=note, empty="No refill is open.")


def litre(facts: Facts, found: PerLitre) -> AddedTable:
    """Oxygen, carbon dioxide, feed and heat of a litre."""
    columns = (
        TableColumn("density", "cells", "gDW/L", number=True),
        TableColumn("oxygen", "oxygen uptake", "mmol/L/h", number=True),
        TableColumn("carbon_dioxide", "CO2 given off", "mmol/L/h", number=True),
        TableColumn("feed", "feed", "mmol/L/h", number=True),
        TableColumn("heat", "heat", "kJ/L/h", number=True),
        TableColumn("heat_low", "heat, low", "kJ/L/h", number=True, detail=True),
        TableColumn("heat_high", "heat, high", "kJ/L/h", number=True, detail=True),
        TableColumn("watts", "heat", "W/L", number=True),
        TableColumn("heat_per_oxygen", "heat per oxygen", "kJ/mol", number=True, detail=True),
    )
    low, high = found.heat_span or (None, None)
    known = found.heat_per_oxygen
    row = (
        found.density,
        found.oxygen,
        found.carbon_dioxide,
        found.feed,
        found.heat,
        low,
        high,
        found.watts,
        None if known is None else float(known.value),
    )
    return AddedTable("per_litre", "Per litre", columns, (row,), note=_heat_note(facts, found), single=True)


def _heat_note(facts: Facts, found: PerLitre) -> str:
    known = found.heat_per_oxygen
    if known is None:
        return "The facts of this host give no heat per oxygen."
    if found.heat is None:
        return "Heat is counted from oxygen uptake; without oxygen it is not known from these facts."
    cited = "; ".join(facts.sources[slug].text for slug in known.basis.sources if slug in facts.sources)
    basis = f"{known.origin}, {known.basis.reading}: {known.basis.note}; {cited}"
    return f"Heat at {float(known.value):g} kJ per mol of oxygen ({basis})."


def _float(value: object) -> float | None:
    return None if value is None else float(value)  # type: ignore[arg-type]
