"""Ranges: how a stated one is read, and which ones facts bring."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator

import msgspec
from msgspec import UNSET

from headrace.case.model import Range, Spread
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.values.case import Case
from headrace.values.facts import Quantity
from headrace.values.uncertainty import Input

RATE = "mmol/gDW/h"
ENERGY_UNITS = {"maintenance": RATE, "growth-associated-atp": "mmol/gDW", "basal-level": "mmol/gDW"}
WORDS = {"growth-associated-atp": "growth-associated ATP", "basal-level": "basal level"}
P95 = 1.6448536269514722  # of the standard normal distribution
_LIST = 'two values such as ["0.12 /h", "0.18 /h"], or a table with low and high, or with sd'


def ranged(sheet: Sheet, key: str, spread: Spread, value: Callable[[str], float], about: Input) -> Input:
    """The input with its ends. value reads one text in the case's own unit. key: in the scenario.

    With sd: the 5 % and 95 % points around the nominal value m, m -+ 1.645 sd; lognormal: m exp(-+ 1.645 s) with
    s^2 = ln(1 + (sd / m)^2). Raises InputError for a range that is none.
    """
    def read(text: str, place: str) -> float:
        with sheet.at(place):
            return value(text)

    shape = spread.distribution if isinstance(spread, Range) and spread.distribution is not UNSET else ""
    if isinstance(spread, list):
        if len(spread) != 2:
            with sheet.at(key):
                raise InputError("a range has two ends", read=f"a list of {len(spread)}", accepted=_LIST)
        low, high = (read(text, f"{key}[{i}]") for i, text in enumerate(spread))
    elif spread.sd is not UNSET:
        shape = shape or "normal"
        low, high = _around(sheet, key, spread, shape, read(spread.sd, f"{key}.sd"), about.nominal)
    elif spread.low is UNSET or spread.high is UNSET:
        with sheet.at(key):
            raise InputError("a range has two ends, or a standard deviation", accepted=_LIST)
    else:
        low, high = read(spread.low, f"{key}.low"), read(spread.high, f"{key}.high")
    found = msgspec.structs.replace(about, low=low, high=high, distribution=shape or "uniform", key=key)
    with sheet.at(key):
        _check(found)
    return found


def _around(sheet: Sheet, key: str, spread: Range, shape: str, sd: float, nominal: float) -> tuple[float, float]:
    with sheet.at(key):
        if spread.low is not UNSET or spread.high is not UNSET:
            raise InputError("low or high stand beside sd", accepted="either low and high, or sd")
        if shape not in ("normal", "lognormal"):
            raise InputError("sd goes with normal and lognormal", read=shape, accepted="low and high")
        if nominal <= 0 and shape == "lognormal":
            raise InputError("a lognormal distribution needs a stated value above 0", accepted="low and high")
    if shape == "normal":
        return nominal - P95 * sd, nominal + P95 * sd
    width = P95 * math.sqrt(math.log1p((sd / nominal) ** 2))
    return nominal * math.exp(-width), nominal * math.exp(width)


def _check(found: Input) -> None:
    ends = f"{found.low:g} to {found.high:g} {found.unit}"
    if not found.low < found.high:
        raise InputError("the low end does not lie below the high end", read=ends, accepted=_LIST)
    if found.distribution == "triangular" and not found.low <= found.nominal <= found.high:
        words = "the stated value lies outside of the triangle"
        raise InputError(words, read=ends, accepted=f"a range around {found.nominal:g} {found.unit}")
    if found.distribution == "lognormal" and found.low <= 0:
        raise InputError("a lognormal distribution has no values at or below 0", read=ends, accepted="a low end above 0")


def of_facts(sheet: Sheet, case: Case) -> Iterator[Input]:
    """Inputs of the host's quantities in force that have a range: energies, shares, and the protein fraction behind limits."""
    basal = any(level.level == "basal" for level in case.levels.values())
    for quantity in sheet.host.quantities:
        low, high = quantity.low, quantity.high
        if low is None or high is None or not low < high:
            continue
        if quantity.slug in case.quantities and quantity.kind in ENERGY_UNITS and (quantity.kind != "basal-level" or basal):
            yield _fact(sheet, quantity, WORDS.get(quantity.kind, quantity.kind), "energy", quantity.kind)
        elif quantity.kind in ("split-share", "share-of-feed") and _runs(case, quantity.about):
            label = f"{'share' if quantity.kind == 'split-share' else 'share of the feed'} of {case.rows[quantity.about].label}"
            yield _fact(sheet, quantity, label, quantity.kind.removesuffix("-share"), quantity.about)
    bounds = [limit for limit in case.limits if limit.low is not None and limit.high is not None and limit.rate > 0]
    if bounds and bounds[0].low is not None and bounds[0].high is not None:
        low_, high_ = bounds[0].low / bounds[0].rate, bounds[0].high / bounds[0].rate
        if low_ < high_:
            label = "protein fraction behind the stated activities"
            yield Input(label, "protein", "", 1.0, low_, high_, "of the known amount", origin="the host's facts")


def _runs(case: Case, row: str) -> bool:
    return row in case.levels and case.levels[row].level != "off"


def _fact(sheet: Sheet, quantity: Quantity, label: str, target: str, index: str) -> Input:
    low, high = float(quantity.low or 0), float(quantity.high or 0)
    unit = ENERGY_UNITS.get(quantity.kind, "mol/mol")
    source = sheet.cited(quantity.basis.sources)
    return Input(label, target, index, float(quantity.value), low, high, unit, origin="the host's facts", source=source)
