"""Sampled values put into a case: each input's target takes the value, everything else stays."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from fractions import Fraction

from msgspec.structs import replace

from headrace.values.case import Case
from headrace.values.facts import Facts, Host
from headrace.values.uncertainty import Input

Both = tuple[Facts, Case]


def apply(facts: Facts, case: Case, given: Sequence[Input], values: Sequence[float]) -> Both:
    """Facts and case with these values in place of the inputs' nominal ones (in the inputs' own units)."""
    for each, value in zip(given, values, strict=True):
        facts, case = _TARGETS[each.target](facts, case, each, float(value))
    return facts, case


def _growth(facts: Facts, case: Case, about: Input, value: float) -> Both:
    return facts, replace(case, growth=value) if case.growth is not None else replace(case, growth_yield=value)


def _outlet(facts: Facts, case: Case, about: Input, value: float) -> Both:
    number = int(about.index)
    old = case.demands[number]
    new = replace(old, rate=value) if old.rate is not None else replace(old, yield_per_feed=value)
    return facts, replace(case, demands=(*case.demands[:number], new, *case.demands[number + 1 :]))


def _feed(facts: Facts, case: Case, about: Input, value: float) -> Both:
    number = int(about.index)
    new = replace(case.feeds[number], uptake=value)
    return facts, replace(case, feeds=(*case.feeds[:number], new, *case.feeds[number + 1 :]))


def _supplement(facts: Facts, case: Case, about: Input, value: float) -> Both:
    supplements = tuple(replace(each, rate=value) if each.compound == about.index else each for each in case.supplements)
    return facts, replace(case, supplements=supplements)


def _oxygen(facts: Facts, case: Case, about: Input, value: float) -> Both:
    return facts, replace(case, oxygen_rate=value)


def _energy(facts: Facts, case: Case, about: Input, value: float) -> Both:
    return facts, replace(case, energy={**case.energy, about.index: value})


def _p_o(facts: Facts, case: Case, about: Input, value: float) -> Both:
    return facts, replace(case, energy={**case.energy, "protons-per-atp": about.factor / value - about.offset})


def _limit(facts: Facts, case: Case, about: Input, value: float) -> Both:
    limits = tuple(replace(each, rate=value) if each.label == about.index else each for each in case.limits)
    return facts, replace(case, limits=limits)


def _protein(facts: Facts, case: Case, about: Input, value: float) -> Both:
    """All limits that rest on the protein fraction move together."""
    limits = tuple(each if each.low is None else replace(each, rate=each.rate * value) for each in case.limits)
    return facts, replace(case, limits=limits)


def _quantity(kind: str) -> Callable[[Facts, Case, Input, float], Both]:
    def put(facts: Facts, case: Case, about: Input, value: float) -> Both:
        host = facts.hosts[case.host]
        own = (kind, about.index)
        quantities = tuple(replace(q, value=Fraction(value)) if (q.kind, q.about) == own else q for q in host.quantities)
        return _with_host(facts, replace(host, quantities=quantities)), case

    return put


def _composition(facts: Facts, case: Case, about: Input, value: float) -> Both:
    host, factor = facts.hosts[case.host], Fraction(value)
    parts = tuple(replace(p, amount=p.amount * factor) if p.fraction == about.index else p for p in host.composition)
    return _with_host(facts, replace(host, composition=parts)), case


def _with_host(facts: Facts, host: Host) -> Facts:
    return replace(facts, hosts={**facts.hosts, host.slug: host})


_TARGETS: dict[str, Callable[[Facts, Case, Input, float], Both]] = {
    "growth": _growth,
    "outlet": _outlet,
    "feed": _feed,
    "supplement": _supplement,
    "oxygen-rate": _oxygen,
    "energy": _energy,
    "p-o": _p_o,
    "limit": _limit,
    "protein": _protein,
    "split": _quantity("split-share"),
    "share-of-feed": _quantity("share-of-feed"),
    "composition": _composition,
}
