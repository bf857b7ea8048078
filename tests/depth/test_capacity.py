"""Activities, enzyme mass and fold change by worked examples; ranges where sources differ; what is missing is said."""

from __future__ import annotations

from typing import Any

import pytest

from headrace.errors import InputError
from headrace.network.capacity import Sized, groups, sized
from headrace.run import Desk
from headrace.values.answers import RefillAnswer, Result
from headrace.values.case import Limit

LYSINE: dict[str, Any] = {
    "host": "corynebacterium-glutamicum",
    "growth": "0.1 /h",
    "feed": [{"substrate": "glucose"}],
    "conditions": {"supplements": ["biotin"]},
    "outlet": [{"product": "L-lysine", "rate": "1.0 mmol/gDW/h"}],
}
ACETATE: dict[str, Any] = {
    "host": "escherichia-coli",
    "growth": "0.1 /h",
    "feed": [{"substrate": "acetate"}],
    "outlet": [{"product": "L-glutamate", "rate": "0.5 mmol/gDW/h"}],
}


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


def limit(desk: Desk, activity: str, **capacity: str) -> Limit:
    question = LYSINE | {"strain": {"limit": {"pyruvate-carboxylase": activity}}, "capacity": capacity}
    return desk.case(question).limits[0]


def test_units_per_mg_on_paper(desk: Desk) -> None:
    """0.12 U/mg = 0.12 umol/min/mg; times 60 min/h, times 0.5 g protein/gDW (0.4 to 0.6) = 3.6 (2.88 to 4.32) mmol/gDW/h."""
    found = limit(desk, "0.12 U/mg")
    assert (found.rate, found.low, found.high) == pytest.approx((3.6, 2.88, 4.32))
    assert "0.12 U/mg of protein stated" in found.origin
    assert "0.5 g protein per gDW" in found.origin


@pytest.mark.parametrize(
    ("activity", "capacity", "rate"),
    [
        ("60 U/gDW", {}, 3.6),  # 60 umol/min/gDW = 3.6 mmol/h/gDW
        ("0.12 U/mg", {"saturation": "50 %"}, 1.8),
        ("0.12 U/mg", {"extract-protein": "80 %"}, 2.88),
        ("60 U/gDW", {"extract-protein": "80 %"}, 3.6),  # per dry cells already
        ("0.12 U/mg", {"q10": "2 fold", "assay-temperature": "30 C", "culture-temperature": "40 C"}, 7.2),
        ("0.12 U/mg", {"q10": "2 fold", "assay-temperature": "37 C", "culture-temperature": "32 °C"}, 3.6 / 2**0.5),
        ("60 U/gDW", {"saturation": "25 %", "q10": "3 fold", "assay-temperature": "25 C", "culture-temperature": "35 C"}, 2.7),
        ("3.6 mmol/gDW/h", {"saturation": "50 %"}, 3.6),  # a rate is no activity
    ],
)
def test_how_the_assay_was_done(desk: Desk, activity: str, capacity: dict[str, str], rate: float) -> None:
    assert limit(desk, activity, **capacity).rate == pytest.approx(rate)


def test_temperatures_that_differ_are_said(desk: Desk) -> None:
    question = LYSINE | {"strain": {"limit": {"pyruvate-carboxylase": "0.12 U/mg"}}}
    apart = desk.case(question | {"capacity": {"assay-temperature": "30 C", "culture-temperature": "37 C"}})
    alike = desk.case(question | {"capacity": {"assay-temperature": "37 C", "culture-temperature": "37 C"}})
    assert [finding.message for finding in apart.findings if finding.check == "assay-temperature"][0].startswith(
        "activities were measured at 30 C and the culture runs at 37 C"
    )
    assert not [finding for finding in alike.findings if finding.check == "assay-temperature"]
    assert alike.limits[0].rate == apart.limits[0].rate


@pytest.mark.parametrize(
    ("capacity", "words"),
    [
        ({"q10": "2 fold"}, "q10 needs both temperatures"),
        ({"saturation": "0.5"}, "a number without a unit"),
        ({"saturation": "120 %"}, "outside of what can be computed with"),
        ({"assay-temperature": "300 K"}, "is not a unit that can stand here"),
        ({"sturation": "50 %"}, "unknown key 'sturation'"),
    ],
)
def test_wrong_assays_are_refused(desk: Desk, capacity: dict[str, str], words: str) -> None:
    with pytest.raises(InputError, match=words) as error:
        limit(desk, "0.12 U/mg", **capacity)
    assert "capacity" in str(error.value)


def enzymes(result: Result, saturation: float | None = None) -> dict[str, Sized]:
    assert isinstance(result.answer, RefillAnswer)
    return {each.about: each for each in sized(result.facts, result.case, result.answer, saturation)}


@pytest.fixture(scope="module")
def on_acetate(desk: Desk) -> Result:
    return desk.refills(ACETATE)


def test_enzyme_mass_on_paper(on_acetate: Result) -> None:
    """Isocitrate lyase, 28.5 1/s and 47.522 kDa: v mmol/gDW/h take v * 47.522 / (3600 * 28.5) = v * 0.46318 mg/gDW; at half
    saturation twice that; of 0.55 g protein/gDW (0.45 to 0.59)."""
    full, half = (enzymes(on_acetate, share)["isocitrate-lyase"] for share in (1.0, 0.5))
    assert full.mass == pytest.approx([full.needed * 0.463177] * 2, rel=1e-5)
    assert half.mass == pytest.approx([2 * value for value in full.mass or ()])
    assert full.share == pytest.approx((full.needed * 0.463177e-3 / 0.59, full.needed * 0.463177e-3 / 0.45), rel=1e-5)
    assert full.recalled  # the mass is


def test_saturation_from_affinities_and_concentrations(on_acetate: Result) -> None:
    """Three studies give 8, 32 and 63 umol/L of isocitrate; measured are 4.68 to 42.9 umol/L:
    s from 4.68 / (63 + 4.68) = 0.0691 to 42.9 / (8 + 42.9) = 0.843, and the mass spans what s does."""
    found, full = (enzymes(on_acetate, share)["isocitrate-lyase"] for share in (None, 1.0))
    assert found.saturation == pytest.approx((4.68 / 67.68, 42.9 / 50.9))
    assert found.mass is not None
    assert full.mass is not None
    assert found.mass == pytest.approx((full.mass[0] * 50.9 / 42.9, full.mass[1] * 67.68 / 4.68))
    assert found.basis.count("Michaelis constant of isocitrate") == 3


def test_a_specificity_constant_bounds_the_mass(desk: Desk) -> None:
    """PEP carboxylase, kcat/Km 25 per mmol/L and s, PEP measured on glucose 0.180 to 0.188 mmol/L or so: k s <= 25 c."""
    result = desk.refills(ACETATE | {"feed": [{"substrate": "glucose"}]})
    found = enzymes(result)["pep-carboxylase"]
    levels = [each for each in result.facts.concentrations
              if each.compound == "phosphoenolpyruvate" and each.host == result.case.host and each.feed == "glucose"]
    low, high = (min(float(each.low or 0) for each in levels), max(float(each.high or 0) for each in levels))
    per_rate = [1000 * 99.063 / (3600 * 25 * level) / 1000 for level in (high, low)]
    assert found.bound == "at least"
    assert found.mass == pytest.approx([1000 * found.needed * value for value in per_rate])


def test_what_is_missing_is_said(on_acetate: Result, desk: Desk) -> None:
    synthase = enzymes(on_acetate)["malate-synthase-aceb"]
    assert (synthase.mass, synthase.missing) == (None, ("turnover number",))
    result = desk.refills(LYSINE)
    assert enzymes(result)["pyruvate-carboxylase"].missing == ("turnover number", "mass")
    said = [finding for finding in result.findings if finding.check == "kinetics"]
    assert {finding.about for finding in said} == {"pyruvate-carboxylase", "pep-carboxylase"}


def test_a_measured_activity_needs_no_kinetics(desk: Desk) -> None:
    result = desk.refills(LYSINE | {"strain": {"limit": {"pyruvate-carboxylase": "0.12 U/mg"}}})
    found = enzymes(result)["pyruvate-carboxylase"]
    assert found.capacity == pytest.approx(3.6)
    assert found.capacity_span == pytest.approx((2.88, 4.32))
    assert found.cover == pytest.approx(3.6 / found.needed)
    assert found.fold == pytest.approx(found.needed / 3.6)
    assert "pyruvate-carboxylase" not in {finding.about for finding in result.findings if finding.check == "kinetics"}


def test_the_fold_change_of_a_group_that_is_too_small(desk: Desk) -> None:
    """Group capacity 0.9 + 0.6 for what is needed, and what 1.2 times the need would take."""
    limits = {"pyruvate-carboxylase": "0.9 mmol/gDW/h", "pep-carboxylase": "0.6 mmol/gDW/h"}
    result = desk.refills(LYSINE | {"strain": {"limit": limits}, "outlet": [{"product": "L-lysine", "rate": "1.1 mmol/gDW/h"}]})
    assert isinstance(result.answer, RefillAnswer)
    group = next(each for each in groups(result.answer, result.case))
    assert group.capacity == pytest.approx(1.5)
    assert group.fold == pytest.approx(group.needed / 1.5)
    said = [finding for finding in result.findings if finding.check == "capacity" and finding.about == group.about]
    assert [finding.level for finding in said] == ["caution"]
    assert f"{1.2 * group.needed / 1.5:.3g}-fold as much would cover 1.2 times the need" in said[0].message


def test_the_table_carries_it_all(desk: Desk, on_acetate: Result) -> None:
    table = next(each for each in on_acetate.tables if each.key == "capacity")
    keys = [column.key for column in table.columns]
    rows = {row[0]: dict(zip(keys, row, strict=True)) for row in table.rows}
    lyase = rows["isocitrate-lyase"]
    assert lyase["enzyme_low"] < lyase["enzyme_high"]  # type: ignore[operator]
    assert rows["malate-synthase-aceb"]["missing"] == "turnover number"
    assert rows["malate-synthase-aceb"]["enzyme_low"] is None


def test_options_are_checked(desk: Desk) -> None:
    with pytest.raises(InputError, match="an enzyme at no saturation carries nothing"):
        desk.refills(ACETATE | {"plugin": {"capacity": {"saturation": "0 %"}}})
    with pytest.raises(InputError, match=r"plugin capacity has no option 'saturaton'"):
        desk.refills(ACETATE | {"plugin": {"capacity": {"saturaton": "50 %"}}})
    heavy = desk.refills(ACETATE | {"plugin": {"capacity": {"protein-share": "0.1 %"}}})
    assert [finding.about for finding in heavy.findings if finding.check == "enzyme-mass"] == ["isocitrate-lyase"]
