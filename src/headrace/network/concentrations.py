"""Which range of concentration a compound may have in a case: measured in the host, else in other hosts, else assumed.

A measured range goes from the lowest lower limit to the highest upper one of the facts that fit the feed (of all of them
where none does). A value for the whole cell holds in the cytosol; elsewhere only values for that compartment do. What
other hosts measured is used for coenzymes and for small ions, which hosts keep alike; anything else gets the usual range.
A case without oxygen takes only what was measured so, but for those coenzymes and ions that carry no electrons.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from headrace.values.case import Case
from headrace.values.depth import Concentration
from headrace.values.facts import Facts


@dataclass(frozen=True)
class Range:
    """low, high in mol/L. origin: measured | other hosts | assumed; sources: slugs."""

    low: float
    high: float
    origin: str
    sources: tuple[str, ...] = ()


def concentration(
    facts: Facts, case: Case, compound: str, place: str, usual: tuple[float, float], measured: bool = True
) -> Range:
    """The range of a compound in a compartment. usual: mol/L, for what was not measured. measured False: only that."""
    fitting = ("absent",) if case.oxygen == "anaerobic" else ("present", "")
    steady = _alike(facts, compound) and compound not in {*facts.electron_pairs, *facts.electron_pairs.values()}
    known = [each for each in facts.concentrations if measured and each.compound == compound]
    known = [each for each in known if steady or each.oxygen in fitting]
    own = _here(facts, case.host, place, [each for each in known if each.host == case.host])
    fed = {feed.compound for feed in case.feeds}
    if own:
        return _spanned([each for each in own if each.feed in fed] or own, "measured")
    if known and _alike(facts, compound):
        return _spanned(known, "other hosts")
    return Range(*usual, "assumed")


def _here(facts: Facts, host: str, place: str, known: Sequence[Concentration]) -> list[Concentration]:
    """Values for the compartment itself, else those of the whole cell where it is the cytosol (or the membrane)."""
    exact = [each for each in known if each.place == place]
    roles = {space.slug: space.role for space in facts.hosts[host].compartments}
    return exact or ([each for each in known if not each.place] if roles.get(place) in ("cytosol", "membrane") else [])


def _alike(facts: Facts, compound: str) -> bool:
    about = facts.compounds[compound]
    roles = {slug for role in ("inorganic-carbon", "mineral", "ammonium") for slug in facts.roles.get(role, ())}
    return about.carrier or compound in roles


def _spanned(known: Iterable[Concentration], origin: str) -> Range:
    each = list(known)
    low = min(float(one.value if one.low is None else one.low) for one in each)
    high = max(float(one.value if one.high is None else one.high) for one in each)
    return Range(low / 1000, high / 1000, origin, tuple(sorted({slug for one in each for slug in one.basis.sources})))
