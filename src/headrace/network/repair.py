"""Why a case can't be met, and the smallest changes that open it; every proposed change is verified by solving.

One wide programme holds every option of `changes`, all shut; the smallest sets that make it feasible are found exactly
(`headrace.solve.sets`): first among changes of the strain, then of its surroundings, then of both together. None of the
parts of a set can be left out. Amounts (a limit to raise, an uptake, a rate to lower) are the least that suffice. Each set
is solved once more by itself and, where the scenario can be resolved anew, in the case that its changes make.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from headrace.errors import InputError
from headrace.network import aim
from headrace.network.build import Network, build, programme
from headrace.network.changes import ORDER, STRAIN, SURROUNDINGS, Option, Wide, measured, widen
from headrace.network.shortage import shortage
from headrace.solve.linear import Programme, Session
from headrace.solve.sets import smallest
from headrace.values.answers import Repair, Shortage
from headrace.values.case import Case, Finding
from headrace.values.changes import Change, Scale

Resolve = Callable[[Sequence[Change]], Case]
MOST = 20
LEVELS = 3


@dataclass(frozen=True)
class Mended:
    """A repair with the changes that make each of its parts."""

    repair: Repair
    parts: tuple[tuple[Change, ...], ...]

    @property
    def changes(self) -> tuple[Change, ...]:
        """All changes, each once."""
        return tuple(dict.fromkeys(change for part in self.parts for change in part))


def explain(net: Network, resolve: Resolve | None = None) -> tuple[tuple[Shortage, ...], tuple[Repair, ...], tuple[Finding, ...]]:
    """Shortage per pool, verified repairs, and findings in words for an infeasible case.

    resolve: the scenario with changes, so that repairs are verified in the case that they make.
    """
    missing, surplus = shortage(net)
    words = [Finding("stop", "feasibility", s.pool, f"{s.pool} can't be served: {s.missing:.4g} mmol/gDW/h are missing")
             for s in missing]
    words += [Finding("stop", "feasibility", name, f"{rate:.4g} mmol/gDW/h of the stated {name} uptake can neither be used "
                      "nor leave; let something be released or leave the uptake out") for name, rate in surplus]
    found = tuple(each.repair for each in mend(net, resolve))
    opening = [r.change + (f" (now: {r.reason})" if r.reason and r.reason not in r.change else "") for r in found if r.refills]
    if opening:
        words.append(Finding("note", "feasibility", net.case.title, f"closed refills that would open it: {'; '.join(opening)}"))
    if not found:
        words.append(Finding("stop", "feasibility", net.case.title, "no change that the facts offer (closed rows, absent "
                             "refills, supplements, by-products) opens this case; the rates asked for are out of reach"))
    return missing, found, tuple(words)


def repairs(net: Network, most: int = MOST) -> tuple[Repair, ...]:
    """The repairs of `mend` alone."""
    return tuple(each.repair for each in mend(net, most=most))


def mend(net: Network, resolve: Resolve | None = None, most: int = MOST) -> tuple[Mended, ...]:
    """The smallest verified changes of an infeasible case, those that open a refill first; then rates to lower."""
    wide = widen(net)
    sets = [*_search(wide, STRAIN, most), *_search(wide, SURROUNDINGS, most)] or _search(wide, STRAIN | SURROUNDINGS, most)
    found = [m for m in (_mended(wide, each) for each in _unlike(wide, sets)) if m is not None]
    found = sorted(found, key=lambda m: _wanted(m.repair))[:most] + _lowered(net, wide)
    if resolve is None:
        return tuple(found)
    return tuple(m for m in found if _holds(net, resolve, m.changes))


def _wanted(repair: Repair) -> tuple[int, bool, int, float, str]:
    kind = ORDER.index(repair.kind) if repair.kind in ORDER else len(ORDER)
    return len(repair.parts), not repair.refills, kind, repair.aim if repair.aim is not None else np.inf, repair.change


def _search(wide: Wide, kinds: Collection[str], most: int) -> list[tuple[int, ...]]:
    """The smallest sets of options of these kinds, as numbers of options; the others stay shut."""
    chosen = [k for k, option in enumerate(wide.options) if option.kind in kinds]
    lp = _shut(wide, [k for k in range(len(wide.options)) if k not in chosen], keep=chosen)
    if not Session(lp).feasible():
        return []
    found = smallest(lp, [wide.options[k].columns for k in chosen], levels=LEVELS, first_level=True, most=4 * most, solves=3000)
    return [tuple(chosen[k] for k in each) for each in found.sets if each]


def _shut(wide: Wide, options: Collection[int], keep: Collection[int] = ()) -> Programme:
    """The programme with these options' columns at zero, but for those that an option of `keep` has as well."""
    kept = {j for k in keep for j in wide.options[k].columns}
    columns = [j for k in options for j in wide.options[k].columns if j not in kept]
    upper = wide.programme.col_upper.copy()
    upper[columns] = 0.0
    return dataclasses.replace(wide.programme, col_upper=upper)


def _unlike(wide: Wide, sets: Sequence[tuple[int, ...]]) -> list[tuple[int, ...]]:
    """The sets that open no more than another set does (a chain beside the one step that suffices)."""
    opened = [frozenset(j for k in each for j in wide.options[k].columns) for each in sets]
    return [each for each, mine in zip(sets, opened, strict=True) if not any(other < mine for other in opened)]


def _mended(wide: Wide, numbers: Sequence[int]) -> Mended | None:
    """A set as a repair, with its least amounts; None if it fails when solved by itself."""
    lp = _shut(wide, [k for k in range(len(wide.options)) if k not in numbers], keep=numbers)
    session = Session(lp)
    options = [wide.options[k] for k in numbers]
    giving = np.zeros(session.columns)
    for option in options:
        if option.present is not None:
            giving[list(option.columns)] = 1.0 / max(option.present, 1e-6)
    least = session.minimise(giving)
    if not least.optimal:
        return None
    session.row(giving, -np.inf, least.objective * (1 + 1e-9) + 1e-12)
    cost = aim.carbon_cost(wide.net, session.columns)
    for option in options:
        if option.kind == "uptake":
            cost[list(option.columns)] = _carbon(wide.net, option.about) * (1 if option.words.startswith("raise") else -1)
    found = session.minimise(cost)
    done = [measured(option, float(sum(least.x[j] for j in option.columns))) for option in options]
    return _as_repair(done, found.objective if found.optimal else None)


def _carbon(net: Network, compound: str) -> float:
    return float(net.facts.compounds[compound].formula.get("C", 0))


def _as_repair(options: Sequence[Option], carbon: float | None) -> Mended:
    parts = tuple(option.words for option in options)
    reasons = "; ".join(dict.fromkeys(option.reason for option in options if option.reason))
    refills = tuple(dict.fromkeys(slug for option in options for slug in option.refills))
    kind = options[0].kind if len(options) == 1 else "joint"
    repair = Repair("; and ".join(parts), kind, carbon, parts, reasons, refills)
    return Mended(repair, tuple(option.changes for option in options))


def _lowered(net: Network, wide: Wide) -> list[Mended]:
    """Each rate that alone could be lowered, where several are asked for; and the largest common factor on all of them."""
    numbers = [k for k, option in enumerate(wide.options) if option.kind == "lower"]
    single = [_mended(wide, [k]) for k in numbers] if len(numbers) > 1 else []
    common = _scale(net)
    return [m for m in single if m is not None] + ([common] if common else [])


def _scale(net: Network) -> Mended | None:
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
    factor = Fraction(int(found.objective * 10**6), 10**6)
    words = f"lower all outlet rates and growth to {float(factor):.4g} of what is asked"
    names = [demand.outlet for demand in net.case.demands] + (["growth"] if net.rates.get("growth") else [])
    carbon = float(aim.carbon_cost(net, len(found.x)) @ found.x)
    return Mended(Repair(words, "lower", carbon, (words,)), (tuple(Scale(name, factor) for name in dict.fromkeys(names)),))


def _holds(net: Network, resolve: Resolve, changes: Sequence[Change]) -> bool:
    """Whether the case that the changes make is feasible."""
    try:
        case = resolve(changes)
    except InputError:
        return False  # a change that the scenario's own statements contradict is no repair
    return Session(programme(build(net.facts, case))).feasible()
