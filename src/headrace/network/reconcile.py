"""Measured rates against the balances: recoveries, reconciled rates, the test for gross errors and what would explain one.

    sum over crossings of rate * atoms per molecule = sum of what biomass takes up       for C, N, P, S, metals, electrons

Biomass has the composition that the host's facts give it. Water, protons and minerals are not measured, so that a balance
that holds one of them checks nothing; electrons (see `closure`) stand for hydrogen, oxygen and charge together. What the
scenario states and nobody measured counts as exact. Least squares and test: `headrace.solve.squares`.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from msgspec.structs import replace

from headrace.network.build import Network
from headrace.network.closure import SKIPPED, electrons
from headrace.solve import squares
from headrace.values.answers import RefillAnswer
from headrace.values.case import Case, Finding
from headrace.values.facts import Facts
from headrace.values.measured import Reading, Reconciled, Reconciliation, Recovery, Suspicion

LEVEL = 0.05
_SAID = 4
_FAR = 3  # standard errors between what the network asks for and what was measured
_NAMES = {"C": "carbon", "N": "nitrogen", "P": "phosphorus", "S": "sulfur"}


@dataclass(frozen=True)
class _Item:
    """One rate of the balances. content: amount of each balance per unit, into the cell positive."""

    label: str
    compound: str
    direction: str
    rate: float
    error: float
    content: dict[str, float]
    read: bool = False
    exact: bool = False

    @property
    def free(self) -> bool:
        return math.isnan(self.rate)

    @property
    def assumed(self) -> bool:
        """A by-product that nobody measured or stated, taken as 0."""
        return not (self.read or self.exact or self.free)


def reconcile(net: Network) -> Reconciliation:
    """Reconcile the readings of the network's case (mmol/gDW/h, growth 1/h); the case itself is not changed."""
    items = _items(net)
    names = sorted({name for item in items for name in item.content}, key=lambda name: (name not in _NAMES, name))
    matrix = np.array([[item.content.get(name, 0.0) for item in items] for name in names])
    rates, errors = np.array([item.rate for item in items]), np.array([item.error for item in items])
    forgotten = [i for i, item in enumerate(items) if item.assumed]
    base = squares.fit(matrix, rates, errors)
    found = squares.suspects(matrix, rates, errors, forgotten) if base.p < LEVEL else ()
    suspicions = tuple(_suspicion(items[each.index], each) for each in found)
    to_blame = [each for each, said in zip(found, suspicions, strict=True) if said.explains]
    best = to_blame[0].fit if len(to_blame) == 1 else base
    verdict = "not checked" if base.freedom == 0 else "gross error" if base.p < LEVEL else "consistent"
    rows = [_row(net, item, i, base, best) for i, item in enumerate(items) if i not in forgotten]
    return Reconciliation(
        verdict=verdict, named=_named(verdict, base, suspicions), recoveries=_recoveries(net.facts, items),
        rates=tuple(row for row in rows if row is not None), suspicions=suspicions, h=base.h, freedom=base.freedom, p=base.p,
        gap=base.gap, balances=tuple(_NAMES.get(name, name) for name in names), level=LEVEL,
        respiratory_quotient=_quotient(net.facts, net.case.measured))


def sized(case: Case, found: Reconciliation) -> Case:
    """The case with its growth, feeds, outlets and measured by-products at the reconciled rates."""
    rates = {row.compound: row for row in found.rates if row.sized and row.reconciled is not None}
    values = {slug: max(0.0, row.reconciled or 0.0) for slug, row in rates.items()}
    feeds = tuple(replace(feed, uptake=values.get(feed.compound, feed.uptake)) for feed in case.feeds)
    demands = tuple(
        replace(demand, rate=values[own], yield_per_feed=None) if (own := _own(demand.draws)) in values else demand
        for demand in case.demands)
    taken = {feed.compound for feed in feeds} | {_own(demand.draws) for demand in demands} | {""}
    fixed = {slug: values[slug] * (1 if row.direction == "uptake" else -1) for slug, row in rates.items() if slug not in taken}
    growing = {"growth": values[""], "growth_yield": None} if "" in values else {}
    return replace(case, feeds=feeds, demands=demands, fixed={**case.fixed, **fixed}, **growing)


def findings(net: Network, found: Reconciliation, answer: RefillAnswer) -> tuple[Finding, ...]:
    """What the measured rates say about themselves, about what the scenario states, and about the network's own answer."""
    return tuple(_findings(net, found, answer))


def _findings(net: Network, found: Reconciliation, answer: RefillAnswer) -> Iterator[Finding]:
    host = net.case.host
    if found.verdict == "gross error":
        test = f"chi-square {found.h:.4g} with {found.freedom} degrees of freedom, p = {found.p:.2g}"
        yield Finding("caution", "measured", host, f"the measured rates do not balance ({test}): {found.named}")
    if found.verdict == "not checked":
        yield Finding("note", "measured", host, "no balance checks the measured rates: O2 uptake and CO2 release would")
    ways = {(column.kind, column.name) for column in net.columns if column.kind in ("enter", "leave")}
    for slug, rate in net.case.fixed.items():
        if rate and ("enter" if rate > 0 else "leave", slug) not in ways:
            words = "was measured, and no way across the membrane runs in this case: its rate is left out"
            yield Finding("caution", "measured", slug, f"{net.facts.compounds[slug].label} {words}")
    crossing = {each.compound: each.rate for each in answer.crossings}
    for row in found.rates if answer.answer == "feasible" else ():
        if row.measured is None or row.error is None or row.sized or row.compound not in net.facts.compounds:
            continue
        predicted = crossing.get(row.compound, 0.0) * (1 if row.direction == "uptake" else -1)
        if abs(predicted - row.measured) > _FAR * row.error:
            asked = f"the network asks for {predicted:.4g} mmol/gDW/h at the reconciled rates"
            yield Finding("caution", "measured", row.compound, f"{row.direction} of {row.label}: {asked}; "
                          f"{row.measured:.4g} +- {row.error:.4g} was measured")


def _items(net: Network) -> list[_Item]:
    """Readings, stated rates, what crosses unmeasured, and by-products that may have been forgotten (taken as 0)."""
    facts, case = net.facts, net.case
    readings = {reading.compound: reading for reading in case.measured}
    items = [_reading(net, reading) for reading in case.measured]
    stated: list[tuple[str, str, str, float | None]]
    stated = [(facts.compounds[feed.compound].label, feed.compound, "uptake", feed.uptake) for feed in case.feeds]
    stated += [(demand.label, _own(demand.draws), "release", demand.rate) for demand in case.demands]
    stated.append(("growth", "", "growth", case.growth))
    for (label, compound, direction, rate), content in zip(stated, _stated_contents(net), strict=True):
        if compound not in readings and (rate is None or rate > 0):
            known_rate = math.nan if rate is None else rate
            items.append(_Item(label, compound, direction, known_rate, 0.0, content, exact=rate is not None))
    known = {item.compound for item in items}
    role = facts.roles
    inorganic = {*role["inorganic-carbon"], *role["carbon-dioxide"]}
    crossing = {*net.host.nutrients, *role["water"], *role["proton"]} - inorganic
    crossing -= set(role["oxygen"]) if case.oxygen == "anaerobic" else set()
    crossing |= set() if known & inorganic else set(role["carbon-dioxide"])
    for slug in sorted(crossing - known):
        way, sign = ("release", -1) if slug in inorganic else ("uptake", 1)
        items.append(_Item(facts.compounds[slug].label, slug, way, math.nan, 0.0, _content(facts, slug, sign)))
    state = "absent" if case.oxygen == "anaerobic" else "present"
    usual = {release.compound for release in net.host.releases if release.oxygen in ("", state)} | set(case.releases)
    for slug in sorted(usual - known - crossing):
        if facts.compounds[slug].formula.get("C"):
            items.append(_Item(facts.compounds[slug].label, slug, "release", 0.0, 0.0, _content(facts, slug, -1)))
    return items


def _reading(net: Network, reading: Reading) -> _Item:
    sign = 1 if reading.direction == "uptake" else -1
    content = _content(net.facts, reading.compound, sign) if reading.compound else _biomass(net)
    return _Item(reading.label, reading.compound, reading.direction, reading.rate, reading.error, content, read=True)


def _stated_contents(net: Network) -> Iterable[dict[str, float]]:
    for feed in net.case.feeds:
        yield _content(net.facts, feed.compound, 1)
    for demand in net.case.demands:
        yield _sum(net.facts, {compound: -float(count) for compound, count in demand.draws.items()})
    yield _biomass(net)


def _biomass(net: Network) -> dict[str, float]:
    """What one gram of dry cells takes, negative: the sums of its composition (ATP spent for growth cancels)."""
    amounts: dict[str, float] = {}
    for pool, amount in net.demands.get("growth", {}).items():
        amounts[net.pools[pool][0]] = amounts.get(net.pools[pool][0], 0.0) - amount
    return _sum(net.facts, amounts)


def _sum(facts: Facts, amounts: Mapping[str, float]) -> dict[str, float]:
    total: dict[str, float] = {}
    for slug, amount in amounts.items():
        for name, count in _content(facts, slug, amount).items():
            total[name] = total.get(name, 0.0) + count
    return total


def _content(facts: Facts, slug: str, amount: float) -> dict[str, float]:
    compound = facts.compounds[slug]
    content = {element: amount * count for element, count in compound.formula.items() if element not in SKIPPED}
    gamma = electrons(compound.formula, compound.charge)
    return content | ({"electrons": amount * gamma} if gamma else {})


def _own(draws: Mapping[str, object]) -> str:
    """The compound that an outlet is, when it is one; else a name that no reading has."""
    return next(iter(draws)) if len(draws) == 1 else "several compounds"


def _row(net: Network, item: _Item, index: int, base: squares.Fit, best: squares.Fit) -> Reconciled | None:
    """A rate as shown; None for an unmeasured one that the balances don't determine."""
    value, error = float(best.x[index]), float(best.errors[index])
    if not item.read and (math.isnan(value) or not item.exact and abs(value) < 1e-12):
        return None
    inorganic = {name for role in ("inorganic-carbon", "carbon-dioxide", "oxygen") for name in net.facts.roles[role]}
    organic = not item.compound or item.compound in net.facts.compounds and "C" in net.facts.compounds[item.compound].formula
    known = None if math.isnan(value) else value
    shift = (known - item.rate) / item.error if item.read and known is not None else None
    return Reconciled(item.label, item.compound, item.direction, item.rate if item.read or item.exact else None,
                      item.error if item.read else None, known, None if known is None else error, shift,
                      base.checked[index], item.read and organic and item.compound not in inorganic, item.exact)


def _suspicion(item: _Item, suspect: squares.Suspect) -> Suspicion:
    value, error = float(suspect.fit.x[suspect.index]), float(suspect.fit.errors[suspect.index])
    passes = suspect.fit.freedom > 0 and suspect.fit.p >= LEVEL and not value < 0
    return Suspicion("reading" if item.read else "forgotten", item.label, item.compound, item.direction, suspect.fit.h,
                     suspect.fit.freedom, suspect.fit.p, None if math.isnan(value) else value,
                     None if math.isnan(error) else error, passes)


def _named(verdict: str, base: squares.Fit, suspicions: Sequence[Suspicion]) -> str:
    """What a gross error is put down to, in words."""
    if verdict != "gross error":
        return ""
    explain = [each for each in suspicions if each.explains]
    if not explain and base.freedom == 1:
        return f"one balance alone can't tell which: {', '.join(each.label for each in suspicions)}"
    if not explain:
        return "no single reading and no usual by-product explains it: several are wrong, or the errors are stated too small"
    said = [_blame(each) for each in sorted(explain, key=lambda each: (round(each.h, 6), each.kind != "reading"))]
    more = f"; and {len(said) - _SAID} more" if len(said) > _SAID else ""
    return said[0] if len(said) == 1 else f"any one of these would explain it: {'; '.join(said[:_SAID])}{more}"


def _blame(each: Suspicion) -> str:
    unit = "mmol/gDW/h" if each.compound else "1/h"
    rate = "" if each.would_be is None else f" (the balances ask for {each.would_be:.4g} {unit})"
    if each.kind == "forgotten":
        return f"{each.label} leaves unmeasured{rate}"
    what = each.label if each.direction == "growth" else f"{each.direction} of {each.label}"
    return f"the reading of {what}{rate}"


def _recoveries(facts: Facts, items: Sequence[_Item]) -> tuple[Recovery, ...]:
    """Carbon and electrons, and nitrogen where its source was measured."""
    fed = any(item.read and item.direction == "uptake" and item.content.get("N") for item in items)
    return tuple(_recovery(facts, items, name) for name in ("C", "electrons", *(("N",) if fed else ())))


def _recovery(facts: Facts, items: Sequence[_Item], name: str) -> Recovery:
    """found / taken, where what leaves, biomass, and electrons passed to oxygen are found."""
    taken = found = taken_error = found_error = 0.0
    counted, missing = [], []
    for item in items:
        content = item.content.get(name, 0.0)
        if not content:
            continue
        if item.free:
            missing.append(item.label)
            continue
        amount, error = content * item.rate, content * item.error
        if amount > 0:
            taken, taken_error = taken + amount, taken_error + error**2
        elif amount < 0:
            found, found_error = found - amount, found_error + error**2
            counted.append(item.label)
    share = found / taken if taken > 0 and not missing else None
    error_ = None if share is None else math.sqrt(found_error + share**2 * taken_error) / taken
    return Recovery(_NAMES.get(name, name), taken, found, share, error_, tuple(counted), tuple(missing))


def _quotient(facts: Facts, readings: Sequence[Reading]) -> float | None:
    """CO2 released per O2 taken up, as measured."""
    rates = {(reading.compound, reading.direction): reading.rate for reading in readings}
    made = next((rates[name, "release"] for name in facts.roles["carbon-dioxide"] if (name, "release") in rates), None)
    used = next((rates[name, "uptake"] for name in facts.roles["oxygen"] if (name, "uptake") in rates), None)
    return made / used if made is not None and used else None
