"""A measured activity as a capacity: how the assay was done decides what the enzyme carries in the cell.

    v = 60 a p e s f      a: U/mg of extract protein, p: g protein/gDW, e: share of the protein in the extract,
    v = 60/1000 a s f     a: U/gDW;  s: saturation in the cell, f = q10 ^ ((culture - assay temperature) / 10 C)

1 U = 1 umol/min. What is left out counts as 1: the capacity is then an upper bound.
"""

from __future__ import annotations

from fractions import Fraction

from msgspec import UNSET, UnsetType

from headrace import units
from headrace.case.energy import known
from headrace.case.sheet import Sheet
from headrace.errors import InputError

Capacity = tuple[float, str, float | None, float | None]


def capacity_of(sheet: Sheet, text: str, oxygen: str) -> Capacity:
    """A stated limit in mmol/gDW/h: rate, where it comes from, and the range that the host's protein fraction has."""
    amount = units.read(text, units.CAPACITY)
    if amount.unit == "mmol/gDW/h":
        return float(amount.value), "stated in the scenario", None, None
    factor, words = _in_the_cell(sheet)
    if amount.unit == "U/gDW":
        return float(amount.value * Fraction(60, 1000)) * factor, f"{text} stated in the scenario{words}", None, None
    fraction = known(sheet, "protein-fraction", oxygen)
    if fraction is None:
        accepted = 'a rate such as "2.0 mmol/gDW/h", or an activity per dry cells in U/gDW'
        raise InputError(f"no protein fraction is known for {sheet.host.label}", read=text, accepted=accepted)
    extract, share = _extract(sheet)
    origin = f"{text} of protein stated in the scenario, with {fraction.text} g protein per gDW{extract}{words}"
    rate, low, high = (
        None if value is None else float(units.activity_to_rate(amount.value, value)) * factor * share
        for value in (fraction.value, fraction.low, fraction.high)
    )
    assert rate is not None
    return rate, origin, low, high


def _extract(sheet: Sheet) -> tuple[str, float]:
    text = sheet.document.capacity.extract_protein
    if text is UNSET:
        return "", 1.0
    with sheet.at("capacity.extract-protein"):
        return f", {text} of it in the extract", float(units.read(text, units.SHARE).value) / 100


def _in_the_cell(sheet: Sheet) -> tuple[float, str]:
    """What saturation and temperature make of an activity, and that in words."""
    stated, factor, words = sheet.document.capacity, 1.0, ""
    if stated.saturation is not UNSET:
        with sheet.at("capacity.saturation"):
            factor *= float(units.read(stated.saturation, units.SHARE).value) / 100
            words += f", at {stated.saturation} saturation"
    assay, culture = (_temperature(sheet, name) for name in ("assay-temperature", "culture-temperature"))
    if stated.q10 is not UNSET:
        with sheet.at("capacity.q10"):
            if assay is None or culture is None:
                raise InputError("q10 needs both temperatures", accepted="assay-temperature and culture-temperature beside it")
            factor *= float(units.read(stated.q10, units.FACTOR).value) ** ((culture - assay) / 10)
            words += f", brought from {assay:g} C to {culture:g} C at {stated.q10} per 10 C"
    elif assay is not None and culture is not None and assay != culture:
        message = f"activities were measured at {assay:g} C and the culture runs at {culture:g} C; they count as they are"
        sheet.say("caution", "assay-temperature", sheet.host.slug, f"{message} (state q10 to bring them there)")
    return factor, words


def _temperature(sheet: Sheet, name: str) -> float | None:
    text: str | UnsetType = getattr(sheet.document.capacity, name.replace("-", "_"))
    if text is UNSET:
        return None
    with sheet.at(f"capacity.{name}"):
        return float(units.read(text, units.TEMPERATURE).value)
