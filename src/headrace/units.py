"""Numbers with units, as people write them, turned into exact fractions in internal units; and nothing else.

Internal units: mmol/gDW/h, 1/h, mmol/gDW, mol/mol, gDW/mmol. gDW is a gram of dry cells: a dimension of its own,
so that "g/gDW" is no plain number and "mmol/g/h" is no rate. Mole per mole and gram per gram are kept apart as well.

    6.0 mmol/gDW/h    number, then unit; a unit is a quotient of single units: "mmol/gDW/h", "mmol/(gDW h)", "h^-1"

Single units stand in a small exact table; any other ("lb", "kgDW", "day") is asked of pint, whose factors the tests
hold the table to. Mass is never turned into moles here: that needs a molar mass (`headrace.values.elements`).
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction
from functools import lru_cache
from typing import Any, NamedTuple

from headrace.errors import InputError

# Single unit -> (dimension, factor to that dimension's base: mmol, g, gDW, h, L, U, %).
TABLE: dict[str, tuple[str, Fraction]] = {
    "mmol": ("amount", Fraction(1)),
    "mol": ("amount", Fraction(1000)),
    "umol": ("amount", Fraction(1, 1000)),
    "µmol": ("amount", Fraction(1, 1000)),
    "nmol": ("amount", Fraction(1, 1_000_000)),
    "g": ("mass", Fraction(1)),
    "mg": ("mass", Fraction(1, 1000)),
    "kg": ("mass", Fraction(1000)),
    "gDW": ("dry cells", Fraction(1)),
    "gDCW": ("dry cells", Fraction(1)),
    "gCDW": ("dry cells", Fraction(1)),
    "mgDW": ("dry cells", Fraction(1, 1000)),
    "h": ("time", Fraction(1)),
    "min": ("time", Fraction(1, 60)),
    "s": ("time", Fraction(1, 3600)),
    "L": ("volume", Fraction(1)),
    "l": ("volume", Fraction(1)),
    "mL": ("volume", Fraction(1, 1000)),
    "U": ("activity", Fraction(1)),
    "%": ("share", Fraction(1)),
}

# Units that pint reads as something else or not at all.
OWN: dict[str, tuple[str, Fraction]] = {
    "C": ("temperature", Fraction(1)),
    "fold": ("factor", Fraction(1)),
    "kJ": ("energy", Fraction(1)),
}

# Units on screen and in machine files (UCUM has no unit for dry cells: the gram stands for it).
UCUM: dict[str, str] = {
    "mmol/gDW/h": "mmol/(g.h)",
    "mmol C/gDW/h": "mmol/(g.h)",
    "1/h": "/h",
    "mmol/gDW": "mmol/g",
    "mol/mol": "mol/mol",
    "g/g": "g/g",
    "gDW/mmol": "g/mmol",
    "U/mg": "U/mg",
    "g/L": "g/L",
    "gDW/L": "g/L",
    "mmol/L": "mmol/L",
    "mmol/L/h": "mmol/(L.h)",
    "h": "h",
    "kJ/mol": "kJ/mol",
    "%": "%",
    "mol/L": "mol/L",
    "mg/gDW": "mg/g",
}

Shape = tuple[tuple[str, ...], tuple[str, ...]]


class Form(NamedTuple):
    """One unit that a quantity may be read in. least: smallest value above zero; most: largest. zero: whether 0 may be."""

    unit: str
    least: Fraction
    most: Fraction
    zero: bool = True


class Kind(NamedTuple):
    """What a key holds: the forms it may take, and the words that say so."""

    name: str
    accepted: str
    forms: tuple[Form, ...]


class Amount(NamedTuple):
    """A number read: value in `unit`, which is one of the kind's forms."""

    value: Fraction
    unit: str


def _form(unit: str, most: int | str, least: str = "1e-6", zero: bool = True) -> Form:
    return Form(unit, Fraction(least), Fraction(most), zero)


_RATE = (_form("mmol/gDW/h", 10_000), _form("g/gDW/h", 1000))
_YIELD = (_form("mol/mol", 1000), _form("g/g", 100))

RATE = Kind("a rate", 'a rate such as "6.0 mmol/gDW/h" or "1.1 g/gDW/h"', _RATE)
MOLAR_RATE = Kind("a rate", 'a rate such as "6.0 mmol/gDW/h"', _RATE[:1])
GROWTH = Kind(
    "a growth rate or a biomass yield",
    'a growth rate such as "0.15 /h", a biomass yield of the total feed such as "0.1 gDW/g" or "0.05 gDW/mmol", or 0',
    (_form("1/h", 20), _form("gDW/g", 10), _form("gDW/mmol", 10)),
)
YIELD = Kind("a yield", 'a yield of the total feed such as "0.3 mol/mol" or "0.25 g/g"', _YIELD)
PRODUCTIVITY = Kind(
    "a productivity",
    'a productivity such as "2 g/L/h" or "15 mmol/L/h"',
    (_form("g/L/h", 10_000), _form("mmol/L/h", 100_000)),
)
CELL_DENSITY = Kind(
    "a cell density",
    'dry cells per volume such as "20 g/L"',
    (_form("g/L", 1000, "1e-3", zero=False), _form("gDW/L", 1000, "1e-3", zero=False)),
)
CAPACITY = Kind(
    "a capacity",
    'a rate such as "2.0 mmol/gDW/h" or an activity such as "0.12 U/mg" (per mg of protein)',
    (*_RATE[:1], _form("U/mg", 100_000), _form("U/gDW", 1_000_000)),
)
CONTENT = Kind("an amount", 'an amount per dry cells such as "1.5 mmol/gDW"', (_form("mmol/gDW", 10_000),))
RATIO = Kind("a ratio", 'moles per mole such as "2.0 mol/mol"', (_form("mol/mol", 10, "0.01", zero=False),))
OF_KNOWN = Kind("a share of the known amount", 'a share of the known amount such as "90 %"', (_form("%", 1000),))
GROWTH_RATE = Kind("a growth rate", 'a growth rate such as "0.15 /h"', (_form("1/h", 20),))
GROWTH_ERROR = Kind("an error", 'a standard error such as "0.01 /h" or "5 %"', (_form("1/h", 20), _form("%", 1000)))
RATE_ERROR = Kind("an error", 'a standard error such as "0.3 mmol/gDW/h" or "5 %"', (*_RATE, _form("%", 1000)))
DURATION = Kind("a duration", 'a duration such as "12 h"', (_form("h", 10_000, "1e-3", zero=False),))
SHARE = Kind("a share", 'a share such as "5 %"', (_form("%", 100, "1e-3"),))
TEMPERATURE = Kind("a temperature", 'a temperature such as "30 C"', (_form("C", 120, "0.1"),))
FACTOR = Kind("a factor", 'a factor such as "2 fold"', (_form("fold", 10, "0.1", zero=False),))
ENERGY = Kind("an energy", 'an energy such as "1 kJ/mol"', (_form("kJ/mol", 10_000),))
CONCENTRATION = Kind(
    "a concentration",
    'a concentration such as "0.25 mol/L" or "1 umol/L"',
    (_form("mol/L", 100, "1e-12", zero=False),),
)

NAMED: dict[str, Kind] = {"share": SHARE, "factor": FACTOR, "concentration": CONCENTRATION, "energy": ENERGY, "rate": MOLAR_RATE,
                          "cell density": CELL_DENSITY}

_NUMBER = re.compile(r"\s*([+-]?\d{1,30}(?:\.\d{1,30})?(?:[eE][+-]?\d{1,2})?)\s*(.*?)\s*", re.DOTALL)
_PIECE = re.compile(r"([A-Za-zµ]+|%)(\^?-1)?")
_SIGNS = str.maketrans({"°": "", "μ": "µ", "·": " ", "*": " ", "−": "-", "⁻": "-", "¹": "1"})
_LIMIT = 100


def read(text: object, kind: Kind) -> Amount:
    """The value that `text` states, exact, in the first of the kind's units that has its dimensions.

    A plain number is read only where a plain 0 has a meaning of its own (GROWTH), and only if it is 0.
    Raises InputError (without a place: the caller knows it) for anything else than number and unit, for a unit of other
    dimensions, for a negative number and for one beyond the form's limits.

    >>> read("6.0 mmol/gDW/h", RATE)
    Amount(value=Fraction(6, 1), unit='mmol/gDW/h')
    >>> read("1e2 umol/gDW/min", RATE)
    Amount(value=Fraction(6, 1), unit='mmol/gDW/h')
    """
    if kind is GROWTH and text in (0, "0") and not isinstance(text, bool):
        return Amount(Fraction(0), "1/h")
    if not isinstance(text, str):
        what = "a number without a unit" if isinstance(text, int | float) else "no number with a unit"
        raise InputError(f"{what} where {kind.name} is needed", read=text, accepted=kind.accepted)
    number, unit = _split(text, kind)
    try:
        shape, factor = _parse(unit)
    except ValueError as error:
        raise InputError(str(error), read=text, accepted=kind.accepted) from None
    for form in kind.forms:
        form_shape, form_factor = _parse(form.unit)
        if shape == form_shape:
            return Amount(_within(number * factor / form_factor, form, text, kind), form.unit)
    raise InputError(f"{unit!r} is not a unit of {kind.name}", read=text, accepted=kind.accepted)


def quantity(text: object, what: str, key: str = "") -> Fraction:
    """A number with a unit, for options of plugins.

    what: share (in %), factor, concentration (mol/L), energy (kJ/mol), rate (mmol/gDW/h), cell density (g/L).

    Raises InputError with the key of the scenario for anything else than such a quantity.

    >>> float(quantity("250 mmol/L", "concentration"))
    0.25
    """
    try:
        return read(text, NAMED[what]).value
    except InputError as error:
        raise error.at(key=key) from None


def activity_to_rate(activity: Fraction, protein_fraction: Fraction) -> Fraction:
    """v = 60 a p: an activity of a U/mg protein in cells with p g protein per gDW, as a rate in mmol/gDW/h.

    1 U = 1 umol/min, so 1 U/mg = 1 mmol/min per g protein = 60 mmol/h per g protein.

    >>> float(activity_to_rate(Fraction("0.12"), Fraction("0.5")))
    3.6
    """
    return 60 * activity * protein_fraction


def mass_to_rate(grams: Fraction, molar_mass: Fraction) -> Fraction:
    """v = 1000 m / M: g/gDW/h (or g/L/h) into mmol/gDW/h (or mmol/L/h), M in g/mol."""
    return 1000 * grams / molar_mass


def _split(text: str, kind: Kind) -> tuple[Fraction, str]:
    match = _NUMBER.fullmatch(text) if len(text) <= _LIMIT else None
    if match is None or re.match(r"\s*[+-]?\d+,\d", text):
        hint = "write decimals with a point" if re.match(r"\s*[+-]?\d+,\d", text) else ""
        shown = text if len(text) <= _LIMIT else text[:_LIMIT] + "..."
        raise InputError(f"this is not {kind.name}", read=shown, accepted=kind.accepted, hint=hint)
    number, unit = match.groups()
    if not unit:
        raise InputError(f"a number without a unit where {kind.name} is needed", read=text, accepted=kind.accepted)
    return Fraction(number), unit


def _within(value: Fraction, form: Form, text: str, kind: Kind) -> Fraction:
    if value < 0:
        raise InputError(f"{kind.name} can't be negative", read=text, accepted=kind.accepted)
    if value == 0 and form.zero:
        return value
    if value < form.least or value > form.most:
        zero = "0, or " if form.zero else ""
        limits = f"{zero}{float(form.least):g} to {float(form.most):g} {form.unit}"
        raise InputError(f"{kind.name} outside of what can be computed with", read=text, accepted=limits)
    return value


@lru_cache(maxsize=256)
def _parse(unit: str) -> tuple[Shape, Fraction]:
    """Dimensions above and below the stroke, sorted, and the factor to base units. Raises ValueError."""
    above: list[str] = []
    below: list[str] = []
    factor = Fraction(1)
    for name, power in _pieces(unit):
        tops, bottoms, size = _single(name)
        factor *= size**power
        (above if power > 0 else below).extend(tops)
        (below if power > 0 else above).extend(bottoms)
    return (tuple(sorted(above)), tuple(sorted(below))), factor


def _pieces(unit: str) -> list[tuple[str, int]]:
    """Single units with their powers: "mmol/gDW/h" -> mmol 1, gDW -1, h -1. Raises ValueError."""
    plain = f" {unit}".translate(_SIGNS).replace(" per ", "/")
    first, *others = (part.strip() for part in plain.split("/"))
    pieces = [] if others and first in ("", "1") else _product(first)
    for other in others:
        group = re.fullmatch(r"\((.+)\)", other)
        below = _product(group[1] if group else other)
        if not group and len(below) > 1:
            raise ValueError(f"{unit!r} can be read in two ways; put what is below the stroke in brackets")
        pieces += [(name, -power) for name, power in below]
    return pieces


def _product(text: str) -> list[tuple[str, int]]:
    """ "gDW h^-1" -> gDW 1, h -1."""
    found = [_PIECE.fullmatch(part) for part in text.split()]
    if not found or None in found:
        raise ValueError(f"{text!r} is not a unit")
    return [(match[1], -1 if match[2] else 1) for match in found if match]


def _single(name: str) -> tuple[tuple[str, ...], tuple[str, ...], Fraction]:
    """Dimensions above and below, and the factor to base units, of one unit. Raises ValueError if nobody knows it."""
    if name in TABLE or name in OWN:
        dimension, factor = TABLE.get(name) or OWN[name]
        return (dimension,), (), factor
    return ask_pint(name)


_FROM_PINT: Mapping[str, tuple[str, int, Fraction]] = {
    "[substance]": ("amount", 1, Fraction(1000)),
    "[mass]": ("mass", 1, Fraction(1000)),
    "[dry_weight]": ("dry cells", 1, Fraction(1)),
    "[time]": ("time", 1, Fraction(1, 3600)),
    "[length]": ("volume", 3, Fraction(1000)),
}


def ask_pint(name: str) -> tuple[tuple[str, ...], tuple[str, ...], Fraction]:
    """As `_single`, for a unit outside the table: pint's dimensions and exact factor, in the table's base units.

    Amount per time is an activity, in U (umol/min). Raises ValueError for what pint does not know.
    """
    registry = _registry()
    try:
        unit = registry.parse_units(name)
        quantity = registry.Quantity(Fraction(1), unit).to_base_units()
    except Exception as error:  # pint raises its own errors and Python's alike for odd text
        raise ValueError(f"{name!r} is not a unit") from error
    powers = {dimension: Fraction(power) for dimension, power in quantity.dimensionality.items()}
    factor = Fraction(quantity.magnitude)
    if not powers:
        return ("share",), (), factor * 100
    if powers == {"[substance]": 1, "[time]": -1}:
        return ("activity",), (), factor * 60_000_000
    above: list[str] = []
    below: list[str] = []
    for dimension, power in powers.items():
        known, each, base = _FROM_PINT.get(dimension, ("", 1, Fraction(1)))
        times: Fraction = power / each
        if not known or times.denominator != 1:
            raise ValueError(f"{name!r} is not a unit that can stand here")
        factor *= base ** int(times)
        (above if times > 0 else below).extend([known] * abs(int(times)))
    return tuple(sorted(above)), tuple(sorted(below)), factor


@lru_cache(maxsize=1)
def _registry() -> Any:
    import pint  # takes about 0.7 s with its registry, longer than a whole command; rare units pay for it

    registry: Any = pint.UnitRegistry(non_int_type=Fraction)
    registry.define("gDW = [dry_weight] = gDCW = gCDW")
    return registry
