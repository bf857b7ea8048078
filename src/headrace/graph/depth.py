"""Kinetic constants, formation energies, concentrations, effects and vitamins: facts that stand below no host's address."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import Any, TypeVar

from headrace.graph import terms
from headrace.graph.convert import Entry, Reader
from headrace.values.basis import Basis
from headrace.values.depth import Concentration, Constant, Effect, FormationEnergy, Vitamin

Value = TypeVar("Value")
KINDS = {
    "turnover-number": "per-s",
    "michaelis-constant": "mmol-per-l",
    "specificity-constant": "per-mmol-per-l-s",
    "enzyme-mass": "kilodalton",
    "specific-activity": "u-per-mg",
}


def depth(reader: Reader) -> dict[str, Any]:
    """The fields of `Facts` that are read here, by name; each sorted by slug."""
    return {
        "kinetics": _all(reader, terms.KINETIC_CONSTANT, constant),
        "formation": _all(reader, terms.FORMATION_ENERGY, formation),
        "concentrations": _all(reader, terms.CONCENTRATION, concentration),
        "effects": _all(reader, terms.EFFECT, effect),
        "vitamins": vitamins(reader),
    }


def constant(entry: Entry) -> Constant:
    """A number about an enzyme; each kind has one unit."""
    kind = entry.ref(terms.QUANTITY_KIND, terms.KIND_BASE, terms.CONCEPT)
    unit = _unit(entry, KINDS.get(kind, ""))
    value, low, high = _range(entry)
    return Constant(
        slug=entry.slug(terms.NUMBER_BASE),
        host=_host(entry),
        enzyme=entry.ref(terms.ABOUT, terms.ENZYME_BASE, terms.ENZYME),
        kind=kind,
        value=value,
        unit=unit,
        origin=entry.word(terms.ORIGIN, terms.ORIGINS),
        basis=entry.basis(),
        compound=entry.ref(terms.HAS_COMPOUND, terms.COMPOUND_BASE, terms.COMPOUND, required=kind == "michaelis-constant"),
        genes=entry.texts(terms.GENE),
        low=low,
        high=high,
        condition=entry.text(terms.CONDITION, required=False),
    )


def formation(entry: Entry) -> FormationEnergy:
    """An energy of a species, or of a compound at a pH and an ionic strength."""
    _unit(entry, "kj-per-mol")
    species = bool(entry.says.get(terms.HYDROGENS))
    return FormationEnergy(
        slug=entry.slug(terms.NUMBER_BASE),
        compound=entry.ref(terms.ABOUT, terms.COMPOUND_BASE, terms.COMPOUND),
        value=entry.number(terms.VALUE) or Fraction(0),
        origin=entry.word(terms.ORIGIN, terms.ORIGINS),
        basis=entry.basis(),
        hydrogens=entry.whole(terms.HYDROGENS) if species else None,
        charge=entry.whole(terms.CHARGE) if species else None,
        ph=None if species else entry.number(terms.PH),
        ionic_strength=None if species else entry.number(terms.IONIC_STRENGTH),
        counted_from=entry.ref(terms.COUNTED_FROM, terms.COMPOUND_BASE, terms.COMPOUND, required=False),
    )


def concentration(entry: Entry) -> Concentration:
    """A concentration, of the whole cell unless a compartment of its host is named."""
    _unit(entry, "mmol-per-l")
    value, low, high = _range(entry)
    host = _host(entry)
    return Concentration(
        slug=entry.slug(terms.NUMBER_BASE),
        host=host,
        compound=entry.ref(terms.ABOUT, terms.COMPOUND_BASE, terms.COMPOUND),
        value=value,
        origin=entry.word(terms.ORIGIN, terms.ORIGINS),
        basis=entry.basis(),
        place=entry.ref(terms.PLACE, f"{terms.HOST_BASE}{host}/", terms.COMPARTMENT, required=False),
        low=low,
        high=high,
        feed=entry.ref(terms.FEED_ANY, terms.COMPOUND_BASE, terms.COMPOUND, required=False),
        oxygen=entry.word(terms.OXYGEN, terms.OXYGEN_STATES, required=False),
        condition=entry.text(terms.CONDITION, required=False),
    )


def effect(entry: Entry) -> Effect:
    """A compound that acts on an enzyme."""
    return Effect(
        slug=entry.slug(terms.EFFECT_BASE),
        enzyme=entry.ref(terms.HAS_ENZYME, terms.ENZYME_BASE, terms.ENZYME),
        effector=entry.ref(terms.EFFECTOR, terms.COMPOUND_BASE, terms.COMPOUND),
        sense=entry.word(terms.SENSE, terms.SENSES),
        basis=entry.basis(),
        host=entry.ref(terms.HAS_HOST, terms.HOST_BASE, terms.HOST, required=False),
    )


def vitamins(reader: Reader) -> tuple[Vitamin, ...]:
    """Vitamins, each with where the hosts have it from."""
    supplied: dict[str, dict[str, tuple[str, Basis]]] = {}
    for entry in reader.entries(terms.SUPPLY):
        vitamin = entry.ref(terms.HAS_VITAMIN, terms.VITAMIN_BASE, terms.VITAMIN)
        entry.slug(terms.SUPPLY_BASE)
        by_host = supplied.setdefault(vitamin, {})
        if (host := _host(entry)) in by_host:
            entry.fault("stated-twice", f"says a second time where {host} has {vitamin} from")
        by_host[host] = (entry.word(terms.SUPPLIED, terms.VITAMIN_SUPPLIES), entry.basis())
    found = []
    for entry in reader.entries(terms.VITAMIN):
        slug = entry.slug(terms.VITAMIN_BASE)
        hosts = sorted(supplied.get(slug, {}).items())
        found.append(
            Vitamin(
                slug=slug,
                label=entry.text(terms.LABEL),
                gives=entry.refs(terms.GIVES, terms.COMPOUND_BASE, terms.COMPOUND),
                basis=entry.basis(),
                compound=entry.ref(terms.HAS_COMPOUND, terms.COMPOUND_BASE, terms.COMPOUND, required=False),
                supplied={host: state for host, (state, _) in hosts},
                supplied_basis={host: basis for host, (_, basis) in hosts},
            )
        )
    return tuple(found)


def _all(reader: Reader, kind: str, make: Callable[[Entry], Value]) -> tuple[Value, ...]:
    return tuple(make(entry) for entry in reader.entries(kind))


def _host(entry: Entry) -> str:
    return entry.ref(terms.HAS_HOST, terms.HOST_BASE, terms.HOST)


def _unit(entry: Entry, wanted: str) -> str:
    unit = entry.ref(terms.HAS_UNIT, terms.UNIT_BASE, terms.UNIT)
    if unit not in ("", wanted) and wanted:
        entry.fault("wrong-unit", f"is in {unit}; such a number is in {wanted}")
    return unit


def _range(entry: Entry) -> tuple[Fraction, Fraction | None, Fraction | None]:
    value = entry.number(terms.VALUE) or Fraction(0)
    low, high = entry.number(terms.LOW, required=False), entry.number(terms.HIGH, required=False)
    if not (value if low is None else low) <= value <= (value if high is None else high):
        entry.fault("outside-range", f"is {value}, outside its own range {low} to {high}")
    return value, low, high
