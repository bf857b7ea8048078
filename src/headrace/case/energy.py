"""Energy quantities in force: the host's facts under the case's oxygen, or what the scenario states instead."""

from __future__ import annotations

from fractions import Fraction

from msgspec import UNSET, Struct

from headrace import units
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.values.facts import Quantity

# Kind of quantity -> (key of [energy], unit kind, whether a case can do without).
STATED = {
    "maintenance": ("maintenance", units.MOLAR_RATE, False),
    "growth-associated-atp": ("growth-associated-atp", units.CONTENT, False),
    "basal-level": ("basal-level", units.CONTENT, True),
}
# How messages call a kind, where its slug with blanks does not read well.
WORDS = {"growth-associated-atp": "growth-associated ATP", "protons-per-nadh": "protons per NADH"}


class Energy(Struct, frozen=True):
    """Values in force by kind, and the slugs of the facts they come from."""

    values: dict[str, float]
    quantities: tuple[str, ...]


def energy(sheet: Sheet, oxygen: str) -> Energy:
    """Maintenance, growth-associated ATP and the basal level; protons per ATP where a P/O is stated.

    oxygen: present | absent. The quantity with that condition goes before the general one.
    Raises InputError when neither facts nor scenario have a value that is needed.
    """
    values: dict[str, float] = {}
    used: list[str] = []
    for kind, (key, unit, spare) in STATED.items():
        stated = getattr(sheet.document.energy, key.replace("-", "_"))
        if stated is not UNSET:
            with sheet.at(f"energy.{key}"):
                values[kind] = float(units.read(stated, unit).value)
        elif (found := known(sheet, kind, oxygen)) is not None:
            values[kind] = float(found.value)
            used.append(found.slug)
        elif not spare:
            with sheet.at(f"energy.{key}"):
                missing = f"no {_words(kind)} is known for {sheet.host.label}"
                raise InputError(missing, accepted=f"{key} in [energy]: {unit.accepted}")
    if sheet.document.energy.p_o_nadh is not UNSET:
        protons, quantity = _protons_per_atp(sheet, oxygen)
        values["protons-per-atp"] = float(protons)
        used.append(quantity)
    return Energy(values, tuple(used))


def known(sheet: Sheet, kind: str, oxygen: str) -> Quantity | None:
    """The host's own quantity of a kind, with a finding when it is only recalled or meant for the other oxygen state."""
    own = [q for q in sheet.host.quantities if q.kind == kind and q.about == sheet.host.slug]
    other = "present" if oxygen == "absent" else "absent"
    for condition in (oxygen, "", other):
        found = next((quantity for quantity in own if quantity.condition == condition), None)
        if found is None:
            continue
        words = f"{_words(kind)} {found.text} {sheet.facts.units.get(found.unit, found.unit)}"
        if condition == other:
            states = {"present": "with oxygen", "absent": "without oxygen"}
            message = f"{words} was measured {states[other]}; none {states[oxygen]} is known"
            sheet.say("caution", "other-condition", found.slug, message, found.basis)
        if found.basis.reading == "recalled":
            sheet.say("note", "recalled-input", found.slug, f"{words} is recalled, not confirmed", found.basis)
        return found
    return None


def _words(kind: str) -> str:
    return WORDS.get(kind, kind.replace("-", " "))


def _protons_per_atp(sheet: Sheet, oxygen: str) -> tuple[Fraction, str]:
    """n = (protons per NADH) / (P/O), less what the export of an ATP takes: so that the stated P/O holds."""
    with sheet.at("energy.p-o-nadh"):
        ratio = units.read(sheet.document.energy.p_o_nadh, units.RATIO).value
        per_nadh = known(sheet, "protons-per-nadh", oxygen)
        if per_nadh is None:
            raise InputError(f"no protons per NADH are known for {sheet.host.label}", hint="leave p-o-nadh out")
        export = next((q.value for q in sheet.host.quantities if q.kind == "protons-per-atp-export"), Fraction(0))
        protons = per_nadh.value / ratio - export
        if protons < 1:  # an ATP synthase moves whole protons
            highest = float(per_nadh.value / (export + 1))
            raise InputError(
                "the P/O is out of reach of the respiratory chain", accepted=f"up to {highest:.2f} mol/mol"
            )
        return protons, per_nadh.slug
