"""The design beside the strain that exists: what runs now, what is needed, and how many times as much that is.

    fold = needs / now     None where nothing runs now, or where a rate is not known
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping

from headrace.values.answers import DrainRow, RefillAnswer
from headrace.values.facts import Facts
from headrace.values.fold import Fold

_NOISE = 1e-9


def folds(facts: Facts, now: RefillAnswer, needs: RefillAnswer) -> tuple[Fold, ...]:
    """Groups, refills, drained pools, feeds, oxygen and CO2 of two feasible answers on one host (mmol/gDW/h).

    Whatever runs in neither is left out. () when one of the answers is infeasible.
    """
    if "infeasible" in (now.answer, needs.answer):
        return ()
    return tuple(row for row in _rows(facts, now, needs) if max(row.now or 0.0, row.needs or 0.0) > _NOISE)


def _rows(facts: Facts, now: RefillAnswer, needs: RefillAnswer) -> Iterator[Fold]:
    both = (now, needs)
    yield from _pairs("group", *(((g.group, g.label, g.nominal) for g in each.groups) for each in both))
    yield from _pairs("refill", *(((r.refill, r.label, r.nominal) for r in each.refills if r.open) for each in both))
    yield from _pairs("drain", _pools(now.drains), _pools(needs.drains))
    label = {slug: compound.label for slug, compound in facts.compounds.items()}
    yield from _pairs("feed", *(((f.substrate, f"uptake of {label[f.substrate]}", f.uptake) for f in each.feed) for each in both))
    for role, words, sign in (("oxygen", "uptake of", 1), ("carbon-dioxide", "release of", -1)):
        names = facts.roles[role]
        named = {name: f"{words} {label[name]}" for name in names}
        yield from _pairs("crossing", *(_crossings(each, named, sign) for each in both))


def _crossings(answer: RefillAnswer, named: Mapping[str, str], sign: int) -> Iterator[tuple[str, str, float | None]]:
    for each in answer.crossings:
        if each.compound in named:
            yield each.compound, named[each.compound], sign * each.rate


def _pools(rows: Iterable[DrainRow]) -> Iterator[tuple[str, str, float | None]]:
    """Net skeletons drained per pool, all outlets together."""
    total: dict[str, float] = {}
    for row in rows:
        total[row.pool] = total.get(row.pool, 0.0) + row.skeletons
    yield from ((pool, f"drain of {pool}", rate) for pool, rate in total.items())


def _pairs(
    kind: str, now: Iterable[tuple[str, str, float | None]], needs: Iterable[tuple[str, str, float | None]]
) -> Iterator[Fold]:
    """Rows by slug, in the order of the design. What only one side lists runs at 0 on the other."""
    one = {slug: (label, rate) for slug, label, rate in now}
    two = {slug: (label, rate) for slug, label, rate in needs}
    for slug in (*two, *(slug for slug in one if slug not in two)):
        label = (two.get(slug) or one[slug])[0]
        runs, asked = one.get(slug, (label, 0.0))[1], two.get(slug, (label, 0.0))[1]
        known = runs is not None and asked is not None and runs > _NOISE
        yield Fold(kind, slug, label, runs, asked, asked / runs if known and asked is not None and runs else None)
