"""The rates measured on a strain: names to compounds, units to mmol/gDW/h, errors to standard errors."""

from __future__ import annotations

from fractions import Fraction

from msgspec import UNSET

from headrace import units
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.units import Amount, Kind
from headrace.values.elements import neutral_mass
from headrace.values.facts import Compound
from headrace.values.measured import Reading


def readings(sheet: Sheet) -> tuple[Reading, ...]:
    """All measured rates of [measured]. Raises InputError for unknown names, a compound read twice, and an error of 0."""
    stated = sheet.document.measured
    if stated is UNSET:
        return ()
    found: list[Reading] = []
    if stated.growth is not UNSET:
        key = "measured.growth"
        rate = _read(sheet, f"{key}.rate", stated.growth.rate, units.GROWTH_RATE)
        error = _error(sheet, f"{key}.error", stated.growth.error, units.GROWTH_ERROR, rate)
        found.append(Reading("growth", "", "growth", float(rate.value), float(error), key))
    for direction, table in (("uptake", stated.uptake), ("release", stated.release)):
        for name, reading in table.items():
            key = f"measured.{direction}.{name}"
            with sheet.at(key):
                compound = sheet.compound(name)
                if compound.slug in {each.compound for each in found}:
                    raise InputError(f"{compound.label} is measured twice", read=name, accepted="each compound once")
            rate = _read(sheet, f"{key}.rate", reading.rate, units.RATE)
            error = _error(sheet, f"{key}.error", reading.error, units.RATE_ERROR, rate)
            factor = _moles(compound, rate)
            amounts = float(rate.value * factor), float(error * factor)
            found.append(Reading(compound.label, compound.slug, direction, *amounts, key))
    return tuple(found)


def _read(sheet: Sheet, key: str, text: str, kind: Kind) -> Amount:
    with sheet.at(key):
        return units.read(text, kind)


def _error(sheet: Sheet, key: str, text: str, kind: Kind, rate: Amount) -> Fraction:
    """The standard error in the unit of the rate."""
    with sheet.at(key):
        amount = units.read(text, kind)
        value = amount.value * rate.value / 100 if amount.unit == "%" else amount.value
        if amount.unit not in ("%", rate.unit):
            raise InputError("the error has another unit than the rate", read=text, accepted=f"{rate.unit}, or %")
        if value <= 0:
            raise InputError("a standard error of 0 would make the reading exact", read=text, accepted="an error above 0")
        return value


def _moles(compound: Compound, rate: Amount) -> Fraction:
    """What turns the rate's unit into mmol/gDW/h."""
    if rate.unit == "mmol/gDW/h":
        return Fraction(1)
    return units.mass_to_rate(Fraction(1), neutral_mass(compound.formula, compound.charge))
