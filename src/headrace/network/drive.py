"""Energetics of a case's refills: energies of each step that a refill serves, and the largest driving force they share.

Conditions are those of each compartment's facts unless stated. Carriers, and steps whose formation energies are not
known, are named and left out of the driving force.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from math import log

from headrace.network.build import terms_of
from headrace.network.concentrations import Range, concentration
from headrace.network.driving import Driving, Key, Pair, max_min
from headrace.network.energetics import Condition, Energies, ReactionEnergy
from headrace.network.segment import Step, row_of, segment
from headrace.network.triggers import leans_on
from headrace.values.answers import DrainRow, RefillAnswer, RefillRow
from headrace.values.case import Case
from headrace.values.facts import Facts

TENFOLD = log(10)
UNKNOWN_RATIO = (0.1, 10.0)


@dataclass(frozen=True)
class Settings:
    """What a scenario may state: pH and ionic strength (mol/L) of every compartment, and the usual range (mol/L).

    measured: whether measured concentrations are used. ratio: range of reduced over oxidised coenzyme where neither
    was measured.
    """

    ph: float | None = None
    ionic_strength: float | None = None
    usual: tuple[float, float] = (1e-6, 1e-2)
    measured: bool = True
    ratio: tuple[float, float] = UNKNOWN_RATIO


@dataclass(frozen=True)
class DriveStep:
    """One step: its standard transformed energy in the direction it runs (kJ/mol), and its force at the optimum.

    counted: whether it is part of the driving force; if not, `why`. weight: how far the step limits it (0 to 1).
    """

    row: str
    place: str
    energy: ReactionEnergy
    force: float | None = None
    weight: float = 0.0
    counted: bool = True
    why: str = ""


@dataclass(frozen=True)
class Lever:
    """A concentration at its bound: raising (up) or lowering it tenfold changes the driving force by gain (kJ/mol)."""

    compound: str
    place: str
    up: bool
    gain: float


@dataclass(frozen=True)
class Drive:
    """The energetics of one refill, whose row is `row`. force: the max-min driving force (kJ/mol).

    force is None when no step has a known energy. worst: the row that limits it most. levers: largest gain first.
    conditions and ranges: what it was computed at.
    """

    refill: str
    row: str
    steps: tuple[DriveStep, ...]
    force: float | None
    worst: str = ""
    levers: tuple[Lever, ...] = ()
    conditions: dict[str, Condition] = field(default_factory=dict)
    ranges: dict[Key, Range] = field(default_factory=dict)

    @property
    def ratio(self) -> tuple[Lever | None, Lever | None]:
        """The best concentration to raise and the best to lower."""
        ups = (lever for lever in self.levers if lever.up)
        downs = (lever for lever in self.levers if not lever.up)
        return next(ups, None), next(downs, None)

    @property
    def recalled(self) -> tuple[str, ...]:
        """Compounds of counted steps whose formation energies no source confirms."""
        return tuple(dict.fromkeys(name for step in self.steps if step.counted for name in step.energy.recalled))


def drives(
    facts: Facts, case: Case, answer: RefillAnswer, drains: Sequence[DrainRow], settings: Settings | None = None
) -> tuple[Drive, ...]:
    """The energetics of each refill that the case uses, in the order of the answer; none when it is infeasible."""
    energies, stated = Energies(facts), settings or Settings()
    return tuple(_drive(energies, case, answer, row, drains, stated) for row in answer.refills if leans_on(row))


def condition(facts: Facts, host: str, place: str, settings: Settings) -> Condition:
    """pH and ionic strength of a compartment: stated, else the host's fact, else pH 7 and 0.25 mol/L."""
    known = {q.kind: float(q.value) for q in facts.hosts[host].quantities if q.about == place}
    ph = settings.ph if settings.ph is not None else known.get("ph", 7.0)
    strength = settings.ionic_strength if settings.ionic_strength is not None else known.get("ionic-strength", 0.25)
    return Condition(ph, strength)


def _drive(
    energies: Energies, case: Case, answer: RefillAnswer, refill: RefillRow, drains: Sequence[DrainRow], settings: Settings
) -> Drive:
    facts, (own, _) = energies.facts, row_of(refill, case)
    path = segment(facts, case, answer, refill, drains)
    steps = [_step(energies, case, step, settings) for step in path]
    counted = [(step, made) for step, made in zip(path, steps, strict=True) if made.counted]
    conditions = {made.place: condition(facts, case.host, made.place, settings) for _, made in counted}
    if not counted:
        return Drive(refill.refill, own, tuple(steps), None, conditions=conditions)
    counts = [_counts(energies, case, step) for step, _ in counted]
    ranges = {key: _range(energies, case, key, conditions, settings) for key in sorted({k for each in counts for k in each})}
    pairs = _pairs(facts, ranges, settings)
    values = [made.energy.value or 0.0 for _, made in counted]
    found = max_min(values, counts, {key: (each.low, each.high) for key, each in ranges.items()}, pairs)
    numbers = {step.row: number for number, (step, _) in enumerate(counted)}
    shown = tuple(_solved(made, found, numbers.get(step.row)) for step, made in zip(path, steps, strict=True))
    worst = max(shown, key=lambda step: step.weight)
    return Drive(refill.refill, own, shown, found.force, worst.row, _levers(facts, found), conditions, ranges)


def _step(energies: Energies, case: Case, step: Step, settings: Settings) -> DriveStep:
    facts, row = energies.facts, case.rows[step.row]
    if facts.reactions[row.reaction].transport:
        why = "a carrier: its energy depends on the membrane"
        return DriveStep(step.row, row.inner, ReactionEnergy(None), counted=False, why=why)
    found = energies.reaction(row.reaction, step.sign, condition(facts, case.host, row.place, settings))
    if found.value is None:
        names = ", ".join(facts.compounds[name].label for name in found.missing)
        return DriveStep(step.row, row.place, found, counted=False, why=f"no formation energy is known of {names}")
    return DriveStep(step.row, row.place, found)


def _counts(energies: Energies, case: Case, step: Step) -> dict[Key, float]:
    """Compounds with a concentration of their own, per turn; forms of inorganic carbon are one."""
    facts = energies.facts
    silent = {*facts.roles.get("water", ()), *facts.roles.get("proton", ())}
    found: dict[Key, float] = {}
    for (compound, place), count in terms_of(facts, facts.hosts[case.host], case.rows[step.row]):
        if compound not in silent:
            key = (energies.hydrated(compound)[0] or compound, place)
            found[key] = found.get(key, 0.0) + step.sign * float(count)
    return {key: count for key, count in found.items() if count}


def _range(energies: Energies, case: Case, key: Key, conditions: dict[str, Condition], settings: Settings) -> Range:
    """The range of a compound; for inorganic carbon that of the form that was measured, over its share in the whole."""
    compound, place = key
    group, _ = energies.hydrated(compound)
    forms = sorted(energies.facts.roles["inorganic-carbon"]) if group else [compound]
    found = [concentration(energies.facts, case, form, place, settings.usual, settings.measured) for form in forms]
    best = min(range(len(forms)), key=lambda number: ("measured", "other hosts", "assumed").index(found[number].origin))
    chosen = found[best]
    if not group or chosen.origin == "assumed":
        return chosen
    at = conditions.get(place) or condition(energies.facts, case.host, place, settings)
    share = energies.share(forms[best], at)
    return Range(chosen.low / share, chosen.high / share, chosen.origin, chosen.sources)


def _pairs(facts: Facts, ranges: dict[Key, Range], settings: Settings) -> list[Pair]:
    """Reduced and oxidised coenzymes of which neither was measured keep a ratio within the stated one."""
    found = []
    for (compound, place), own in ranges.items():
        other = (facts.electron_pairs.get(compound, ""), place)
        if other in ranges and own.origin == "assumed" and ranges[other].origin == "assumed":
            found.append(Pair((compound, place), other, *settings.ratio))
    return found


def _solved(step: DriveStep, found: Driving, number: int | None) -> DriveStep:
    if number is None:
        return step
    return DriveStep(step.row, step.place, step.energy, found.forces[number], found.weights[number])


def _levers(facts: Facts, found: Driving) -> tuple[Lever, ...]:
    """Largest gain first; of equal ones coenzymes last, since a cell can hardly change them."""
    each = (Lever(*key, slope > 0, abs(slope) * TENFOLD) for key, slope in found.slopes.items())
    return tuple(sorted(each, key=lambda lever: (-round(lever.gain, 6), facts.compounds[lever.compound].carrier, lever.compound)))
