"""Numbers with units: exact, pint's own factors, common practice, and one clear message for what is wrong."""

from __future__ import annotations

import subprocess
import sys
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace import units
from headrace.errors import InputError
from headrace.values.elements import ATOMIC_WEIGHTS, molar_mass, neutral_mass
from headrace.values.facts import Facts

KINDS = [value for value in vars(units).values() if isinstance(value, units.Kind)]
DECIMALS = st.decimals("0.01", "9.99", places=2)
WATER, GLUCOSE = {"H": 2, "O": 1}, {"C": 6, "H": 12, "O": 6}


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.accepted[:20])
@given(number=DECIMALS)
def test_a_number_in_an_internal_unit_is_read_as_written(kind: units.Kind, number: object) -> None:
    for form in kind.forms:
        expected = Fraction(str(number))
        if form.least <= expected <= form.most:
            assert units.read(f"{number} {form.unit}", kind) == (expected, form.unit)


@given(number=DECIMALS, above=st.sampled_from(["mmol", "mol", "umol", "µmol", "nmol"]), time=st.sampled_from(["h", "min", "s"]))
def test_any_units_of_a_rate_give_the_rate(number: object, above: str, time: str) -> None:
    factor = units.TABLE[above][1] / units.TABLE[time][1]
    value = Fraction(str(number)) * factor
    if Fraction("1e-6") <= value <= 10_000:
        assert units.read(f"{number} {above}/gDW/{time}", units.RATE) == (value, "mmol/gDW/h")
        shown = units.read(f"{float(value)!r} mmol/gDW/h", units.RATE).value
        assert float(shown) == float(value)


@pytest.fixture(scope="module")
def registry() -> pint.UnitRegistry:
    """Pint's own, with exact numbers and grams of dry cells."""
    registry = pint.UnitRegistry(non_int_type=Fraction)
    registry.define("gDW = [dry_weight] = gDCW = gCDW")
    return registry


@pytest.mark.parametrize("unit", units.TABLE)
def test_the_table_is_pints(unit: str, registry: pint.UnitRegistry) -> None:
    base = {"amount": "mmol", "mass": "g", "dry cells": "gDW", "time": "hour", "volume": "liter", "activity": "umol/min",
            "share": "percent"}
    dimension, factor = units.TABLE[unit]
    assert registry.Quantity(Fraction(1), registry.parse_units(unit)).to(base[dimension]).magnitude == factor
    assert units.ask_pint(unit) == ((dimension,), (), factor)


@pytest.mark.parametrize(
    ("text", "kind", "value", "unit"),
    [
        ("6.0 mmol/gDW/h", units.RATE, "6", "mmol/gDW/h"),
        ("6 mmol/(gDW h)", units.RATE, "6", "mmol/gDW/h"),
        ("6 mmol gDW^-1 h^-1", units.RATE, "6", "mmol/gDW/h"),
        ("6 mmol·gDW⁻¹·h⁻¹", units.RATE, "6", "mmol/gDW/h"),
        ("6 mmol per gDW per h", units.RATE, "6", "mmol/gDW/h"),
        ("6 mmol/gDCW/h", units.RATE, "6", "mmol/gDW/h"),
        ("100 umol/gDW/min", units.RATE, "6", "mmol/gDW/h"),
        ("6 mol/kgDW/h", units.RATE, "6", "mmol/gDW/h"),
        ("0.15 /h", units.GROWTH, "3/20", "1/h"),
        ("0.15 1/h", units.GROWTH, "3/20", "1/h"),
        ("0.15 h-1", units.GROWTH, "3/20", "1/h"),
        ("3.6 /day", units.GROWTH, "3/20", "1/h"),
        ("0.5 gDW/g", units.GROWTH, "1/2", "gDW/g"),
        ("90 gDW/mol", units.GROWTH, "9/100", "gDW/mmol"),
        ("0.3 mol/mol", units.YIELD, "3/10", "mol/mol"),
        ("250 mg/g", units.YIELD, "1/4", "g/g"),
        ("2 g/L/h", units.PRODUCTIVITY, "2", "g/L/h"),
        ("48 g/L/d", units.PRODUCTIVITY, "2", "g/L/h"),
        ("2 mM/h", units.PRODUCTIVITY, "2", "mmol/L/h"),
        ("20 g/L", units.CELL_DENSITY, "20", "g/L"),
        ("20 gDW/L", units.CELL_DENSITY, "20", "gDW/L"),
        ("0.12 U/mg", units.CAPACITY, "3/25", "U/mg"),
        ("2 nkat/mg", units.CAPACITY, "3/25", "U/mg"),
        ("1.5 mmol/gDW", units.CONTENT, "3/2", "mmol/gDW"),
        ("1.49 mol/mol", units.RATIO, "149/100", "mol/mol"),
        ("5 %", units.SHARE, "5", "%"),
    ],
)
def test_spellings(text: str, kind: units.Kind, value: str, unit: str) -> None:
    assert units.read(text, kind) == (Fraction(value), unit)


@pytest.mark.parametrize("zero", [0, 0.0, "0", "0 /h"])
def test_a_resting_phase_is_zero(zero: object) -> None:
    assert units.read(zero, units.GROWTH) == (0, "1/h")


@pytest.mark.parametrize(
    ("text", "kind", "says"),
    [
        (6.0, units.RATE, "a number without a unit"),
        ("6", units.RATE, "a number without a unit"),
        (True, units.GROWTH, "where a growth rate or a biomass yield is needed"),
        (None, units.RATE, "no number with a unit"),
        ("6 mmol", units.RATE, "'mmol' is not a unit of a rate"),
        ("6 mmol/g/h", units.RATE, "'mmol/g/h' is not a unit of a rate"),
        ("6 mmol/gDW h", units.RATE, "two ways"),
        ("6 foo/gDW/h", units.RATE, "'foo' is not a unit"),
        ("6 mmol//h", units.RATE, "is not a unit"),
        ("6 K/gDW/h", units.RATE, "'K' is not a unit that can stand here"),
        ("0.3 g/mol", units.YIELD, "'g/mol' is not a unit of a yield"),
        ("-1 mmol/gDW/h", units.RATE, "can't be negative"),
        ("6,0 mmol/gDW/h", units.RATE, "this is not a rate"),
        ("nan mmol/gDW/h", units.RATE, "this is not a rate"),
        ("6 x 10 mmol/gDW/h", units.RATE, "is not a unit"),
        ("1e99 mmol/gDW/h", units.RATE, "outside of what can be computed with"),
        ("1e-9 mmol/gDW/h", units.RATE, "outside of what can be computed with"),
        ("1e999999999 mmol/gDW/h", units.RATE, "is not a unit"),
        ("9" * 200 + " /h", units.GROWTH, "this is not a growth rate"),
        ("0 g/L", units.CELL_DENSITY, "outside of what can be computed with"),
        ("120 %", units.SHARE, "outside of what can be computed with"),
    ],
)
def test_what_is_wrong_is_said_with_what_is_accepted(text: object, kind: units.Kind, says: str) -> None:
    with pytest.raises(InputError) as caught:
        units.read(text, kind)
    assert says in caught.value.message
    assert caught.value.accepted
    assert len(str(caught.value)) < 600


def test_a_bare_number_names_the_units() -> None:
    with pytest.raises(InputError) as caught:
        units.read(6.0, units.RATE)
    assert '"6.0 mmol/gDW/h"' in caught.value.accepted and '"1.1 g/gDW/h"' in caught.value.accepted


@given(st.text(max_size=40))
def test_any_text_is_read_or_refused(text: str) -> None:
    for kind in (units.RATE, units.GROWTH):
        try:
            assert units.read(text, kind).value >= 0
        except InputError as error:
            assert str(error)


def test_activity_by_hand() -> None:
    """0.12 U/mg protein, 0.5 g protein/gDW: 0.12 umol/min/mg = 7.2 mmol/h per g protein, times 0.5 = 3.6 mmol/gDW/h."""
    assert units.activity_to_rate(Fraction("0.12"), Fraction("0.5")) == Fraction("3.6")


def test_mass_by_hand() -> None:
    """1 g/gDW/h of glucose, 180.156 g/mol, is 5.5507 mmol/gDW/h."""
    assert float(units.mass_to_rate(Fraction(1), molar_mass(GLUCOSE))) == pytest.approx(5.5507, abs=5e-5)


@pytest.mark.parametrize(
    ("formula", "mass"),
    [
        (WATER, 18.015),
        (GLUCOSE, 180.156),
        ({"C": 6, "H": 14, "N": 2, "O": 2}, 146.190),  # lysine, free base
        ({"C": 6, "H": 15, "N": 2, "O": 2, "Cl": 1}, 182.65),  # and its hydrochloride
        ({"C": 34, "H": 32, "Fe": 1, "N": 4, "O": 4}, 616.50),  # heme b
        ({"C": 16, "H": 32, "O": 2}, 256.43),  # palmitic acid
    ],
)
def test_molar_masses_of_the_trade(formula: dict[str, int], mass: float) -> None:
    """Catalogue values, to their printed digits."""
    assert float(molar_mass(formula)) == pytest.approx(mass, abs=0.006)


def test_an_ion_is_weighed_as_its_acid_or_base() -> None:
    assert neutral_mass({"C": 4, "H": 4, "O": 4}, -2) == molar_mass({"C": 4, "H": 6, "O": 4})
    assert neutral_mass({"C": 6, "H": 15, "N": 2, "O": 2}, 1) == molar_mass({"C": 6, "H": 14, "N": 2, "O": 2})


def test_every_element_of_the_facts_has_a_weight(facts: Facts) -> None:
    elements = {element for compound in facts.compounds.values() for element in compound.formula}
    assert elements - {"R", "X"} <= set(ATOMIC_WEIGHTS)


def test_common_units_do_without_pint() -> None:
    code = """
import sys
from headrace import units
for text in ("6.0 mmol/gDW/h", "1.1 g/gDW/h"):
    units.read(text, units.RATE)
units.read("0.15 /h", units.GROWTH), units.read("0.12 U/mg", units.CAPACITY), units.read("2 g/L/h", units.PRODUCTIVITY)
assert "pint" not in sys.modules
units.read("0.5 kmol/kgDW/h", units.RATE)
assert "pint" in sys.modules
"""
    subprocess.run([sys.executable, "-c", code], check=True)
