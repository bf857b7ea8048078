"""Feeds, oxygen, supplements, releases, outlets, growth and energy of an invented host, in internal units."""

from __future__ import annotations

from fractions import Fraction

import pytest

from headrace import case as cases
from headrace.errors import InputError
from headrace.values.case import Case, Demand, Supplement
from headrace.values.facts import Part

from .world import QUANTITIES, TEXT, facts, messages, resolve, stated, tuned


def outlet(text: str, **options: str) -> Demand:
    return resolve(stated(f"[[outlet]]\n{text}", **options)).demands[0]


def test_the_plain_scenario() -> None:
    case = resolve()
    assert (case.title, case.host, case.growth, case.growth_yield, case.oxygen) == ("meadow", "meadow", 0.1, None, "aerobic")
    assert [(feed.compound, feed.uptake) for feed in case.feeds] == [("sugar", 2.0)]
    assert case.source_text == TEXT and case.path == "meadow.toml"
    assert set(case.rows) == set(case.levels)


def test_names_are_found_by_alias_and_without_regard_to_case() -> None:
    text = TEXT.replace('"sugar"', '"Dextrose"').replace('host = "meadow"', 'host = "Green Meadow"')
    assert resolve(text).feeds[0].compound == "sugar"


def test_an_uptake_by_mass() -> None:
    """0.360312 g/gDW/h over 180.156 g/mol = 2 mmol/gDW/h."""
    assert resolve(stated(uptake='"0.360312 g/gDW/h"')).feeds[0].uptake == pytest.approx(2, rel=1e-12)


def test_a_charged_feed_by_mass_says_what_was_weighed() -> None:
    """Palmitate C16H31O2- is weighed as C16H32O2, 256.43 g/mol."""
    case = resolve(TEXT.replace('"sugar"', '"oil"').replace("2 mmol", "0.25643 g"))
    assert case.feeds[0].uptake == pytest.approx(1, rel=1e-5)
    assert "256.430 g/mol" in messages(case, "mass-to-moles")[0]


def test_without_an_uptake_the_least_feed_is_asked_for() -> None:
    assert resolve(TEXT.replace('uptake = "2 mmol/gDW/h"', "")).feeds[0].uptake is None


def test_oxygen() -> None:
    assert resolve(stated('[conditions]\noxygen = "anaerobic"')).oxygen == "anaerobic"
    limited = resolve(stated('[conditions]\noxygen = "limited"\noxygen-rate = "3 mmol/gDW/h"'))
    assert (limited.oxygen, limited.oxygen_rate) == ("limited", 3.0)
    assert messages(limited, "limited-oxygen") and not messages(limited, "assumed")
    assert "aerobic is assumed" in messages(resolve(), "assumed")[0]


def test_supplements() -> None:
    case = resolve(stated('[conditions]\nsupplements = ["vitamin", { compound = "acid", rate = "0.5 mmol/gDW/h" }]'))
    assert case.supplements == (Supplement("vitamin"), Supplement("acid", 0.5))
    assert not messages(case, "required-supplement")
    assert messages(resolve(), "required-supplement") == ["Meadow needs vitamin in the medium, and the scenario supplies none"]


@pytest.mark.parametrize(
    ("conditions", "released", "is_stated"),
    [
        ("", ("acid",), False),
        ('oxygen = "anaerobic"', ("acid", "juice"), False),
        ('circumstances = ["a drought"]', ("acid", "tile"), False),
        ('circumstances = ["flood"]', ("acid",), False),
        ('release = ["oil"]', ("oil",), True),
        ("release = []", (), True),
    ],
)
def test_releases(conditions: str, released: tuple[str, ...], is_stated: bool) -> None:
    case = resolve(stated(f"[conditions]\n{conditions}"))
    assert (case.releases, case.releases_stated) == (released, is_stated)


def test_circumstances_are_slugs() -> None:
    assert resolve(stated('[conditions]\ncircumstances = ["a drought", "flood"]')).circumstances == ("drought", "flood")


@pytest.mark.parametrize(
    ("growth", "rate", "per_feed"),
    [
        ('"0.1 /h"', 0.1, None),
        ("0", 0.0, None),
        ('"0 /h"', 0.0, None),
        ('"0.05 gDW/mmol"', None, 0.05),
        ('"0.5 gDW/g"', None, 0.090078),  # times 180.156 g/mol of sugar
    ],
)
def test_growth(growth: str, rate: float | None, per_feed: float | None) -> None:
    case = resolve(stated(growth=growth))
    assert case.growth == rate and case.growth_yield == (None if per_feed is None else pytest.approx(per_feed))


def test_growth_left_out_is_said() -> None:
    case = resolve(TEXT.replace('growth = "0.1 /h"\n', ""))
    assert case.growth == 0 and any("resting phase" in message for message in messages(case, "assumed"))


MIXED = '[[feed]]\nsubstrate = "oil"\nuptake = "1 mmol/gDW/h"\n'


def test_a_yield_by_mass_of_a_mixed_feed() -> None:
    """(2 * 180.156 + 1 * 256.43) / 3 = 205.581 g/mol of feed; 0.5 gDW/g is 0.10279 gDW/mmol."""
    assert resolve(stated(MIXED, growth='"0.5 gDW/g"')).growth_yield == pytest.approx(0.5 * 205.58066 / 1000, rel=1e-6)


def test_a_yield_by_mass_needs_all_uptakes() -> None:
    text = stated(MIXED.replace('uptake = "1 mmol/gDW/h"', ""), growth='"0.5 gDW/g"')
    with pytest.raises(InputError, match="share of each feed"):
        resolve(text)


@pytest.mark.parametrize(
    ("text", "rate", "per_feed", "form"),
    [
        ('product = "cloth"\nrate = "1.4 mmol/gDW/h"', 1.4, None, "hydrochloride"),
        ('product = "cloth"\nrate = "1.4 mmol/gDW/h"\nform = "free base"', 1.4, None, "free base"),
        ('product = "cloth"\nrate = "0.14619 g/gDW/h"\nform = "free base"', 1.0, None, "free base"),
        ('product = "cloth"\nrate = "0.182648 g/gDW/h"\nform = "Hydrochloride"', 1.0, None, "hydrochloride"),
        ('product = "cloth"\nyield = "0.3 mol/mol"', None, 0.3, "hydrochloride"),
        ('product = "cloth"\nyield = "0.25 g/g"\nform = "free base"', None, 0.25 * 180.156 / 146.19, "free base"),
        ('product = "cloth"\nproductivity = "2 g/L/h"\nbiomass = "20 g/L"\nform = "free base"', 0.1 / 0.14619, None, "free base"),
        ('product = "cloth"\nproductivity = "30 mmol/L/h"\nbiomass = "20 gDW/L"', 1.5, None, "hydrochloride"),
        ('product = "tile"\nrate = "0.118088 g/gDW/h"', 1.0, None, "glazed"),
        ('product = "acid"\nrate = "0.134087 g/gDW/h"', 1.0, None, "uncharged"),
        ('product = "quilt"\nrate = "1 mmol/gDW/h"', 1.0, None, ""),
    ],
)
def test_outlet_amounts(text: str, rate: float | None, per_feed: float | None, form: str) -> None:
    demand = outlet(text)
    assert demand.rate == (None if rate is None else pytest.approx(rate, rel=1e-9))
    assert demand.yield_per_feed == (None if per_feed is None else pytest.approx(per_feed, rel=1e-9))
    assert demand.form == form


@pytest.mark.parametrize(
    ("text", "key", "says"),
    [
        ('product = "cloth"\nrate = "1 g/gDW/h"', "outlet[0]", "cloth by mass needs its form"),
        ('product = "quilt"\nrate = "1 g/gDW/h"', "outlet[0].rate", "has no molar mass of its own"),
        ('product = "acid"\nrate = "1 mmol/gDW/h"\nform = "salt"', "outlet[0].form", "unknown form"),
        ('product = "acid"', "outlet[0]", "no amount is stated"),
        ('product = "acid"\nyield = "0.1 mol/mol"\nrate = "1 mmol/gDW/h"', "outlet[0].rate", "stated together"),
        ('product = "acid"\nproductivity = "1 mmol/L/h"', "outlet[0].productivity", "needs the cell density"),
    ],
)
def test_outlets_refused(text: str, key: str, says: str) -> None:
    with pytest.raises(InputError, match=says) as caught:
        outlet(text)
    assert caught.value.key == key and caught.value.line


def test_forms_are_listed_with_their_mass() -> None:
    with pytest.raises(InputError) as caught:
        outlet('product = "cloth"\nrate = "1 g/gDW/h"')
    assert caught.value.accepted == 'form = one of "free base" (146.19 g/mol), "hydrochloride" (182.65 g/mol)'


def test_a_product_that_only_an_organelle_has_is_drawn_there() -> None:
    assert outlet('product = "cloth"\nrate = "1 mmol/gDW/h"').place == "cell"
    text = '[strain]\nadd = ["kilnase in the barn"]\n[[outlet]]\nproduct = "tile"\nrate = "1 mmol/gDW/h"'
    assert resolve(stated(text)).demands[0].place == "barn"


def test_options_are_handed_on() -> None:
    text = 'product = "acid"\nrate = "1 mmol/gDW/h"\noptions = { chain-length = 16, share = { a = 0.5 } }'
    assert outlet(text).options == {"chain-length": 16, "share": {"a": 0.5}}
    weighed = text.replace("1 mmol", "0.1 g")
    assert "whatever its options say" in messages(resolve(stated("[[outlet]]\n" + weighed)), "mass-to-moles")[-1]
    case = resolve(stated("[plugin.loom]\nthreads = 3"))
    assert case.plugin_options == {"loom": {"threads": 3}}


def test_energy_from_facts_by_condition() -> None:
    with_air, without = resolve(), resolve(stated('[conditions]\noxygen = "anaerobic"'))
    assert with_air.energy == {"maintenance": 2.0, "growth-associated-atp": 40.0, "basal-level": 1.5}
    assert with_air.quantities == ("upkeep", "growth-cost", "leak")
    assert without.energy["maintenance"] == 5.0 and "upkeep-without" in without.quantities
    assert messages(with_air, "recalled-input") == ["growth-associated ATP 40 mmol/gDW is recalled, not confirmed"]


def test_energy_from_the_scenario() -> None:
    text = '[energy]\nmaintenance = "0 mmol/gDW/h"\ngrowth-associated-atp = "30 mmol/gDW"\nbasal-level = "0.5 mmol/gDW"'
    case = resolve(stated(text))
    assert case.energy == {"maintenance": 0.0, "growth-associated-atp": 30.0, "basal-level": 0.5}
    assert case.quantities == () and not messages(case, "recalled-input")


def test_a_stated_p_o_sets_the_protons_of_the_synthase() -> None:
    """8 protons per NADH at a P/O of 2 are 4 per ATP; with one taken by export, 3 by the synthase."""
    text = stated('[energy]\np-o-nadh = "2.0 mol/mol"')
    assert resolve(text).energy["protons-per-atp"] == 4.0
    export = tuned(QUANTITIES[0], slug="export", kind="protons-per-atp-export", value=Fraction(1))
    assert resolve(text, host={"quantities": (*QUANTITIES, export)}).energy["protons-per-atp"] == 3.0
    assert "protons-per-atp" not in resolve().energy


def test_a_quantity_of_the_other_oxygen_state_is_used_with_a_caution() -> None:
    only = tuple(quantity for quantity in QUANTITIES if quantity.slug != "upkeep")
    case = resolve(host={"quantities": only})
    assert case.energy["maintenance"] == 5.0
    assert "measured without oxygen; none with oxygen is known" in messages(case, "other-condition")[0]


def test_what_nobody_knows_is_asked_for() -> None:
    with pytest.raises(InputError, match="no maintenance is known for Meadow") as caught:
        resolve(host={"quantities": ()})
    assert caught.value.key == "energy.maintenance" and "[energy]" in caught.value.accepted
    assert "basal-level" not in resolve(host={"quantities": QUANTITIES[:3]}).energy


def test_borrowed_and_recalled_composition_are_said() -> None:
    part = Part("p", "acid", "cell", Fraction(1), "protein", "assumed", QUANTITIES[2].basis)
    case = resolve(host={"composition": (part,), "composition_borrowed_from": "heath", "composition_note": "nearest"})
    assert messages(case, "borrowed-composition") == ["the biomass composition of Meadow is borrowed from another host: nearest"]
    assert "1 of 1 entries of the biomass composition are recalled" in messages(case, "recalled-input")


@pytest.mark.parametrize(
    "text",
    [
        stated(growth="0").replace('uptake = "2 mmol/gDW/h"', ""),
        stated(growth='"0.1 gDW/g"').replace('uptake = "2 mmol/gDW/h"', '[[outlet]]\nproduct = "acid"\nyield = "1 mol/mol"'),
        stated(growth="0", uptake='"0 mmol/gDW/h"'),
    ],
)
def test_one_absolute_rate_is_needed(text: str) -> None:
    with pytest.raises(InputError, match="no absolute rate is stated") as caught:
        resolve(text)
    assert (caught.value.key, caught.value.line) == ("feed", 5)


def opened(case: Case) -> set[str]:
    return {slug for slug, level in case.levels.items() if level.kind == "open"}


def test_open_uses_every_row_of_the_host_but_removed_ones() -> None:
    text = stated('[strain]\nremove = ["milS", "wvnC"]\nadd = ["kilnase"]')
    case = resolve(text, opened=True)
    assert opened(case) == {"weave"}  # mill-large is on by the fitted rule, weave only basal
    assert case.opened and case.levels["mill-small"].kind == case.levels["weave-barn"].kind == "removed"
    assert opened(resolve(opened=True)) == {"mill-large", "weave", "weave-barn"}
    assert opened(resolve(stated('[aim]\nexpression = "open"'))) == {"mill-large", "weave", "weave-barn"}
    assert opened(resolve()) == set() and "fire-brought-into-cell" in case.rows


def test_slack() -> None:
    assert resolve().slack == 0.0
    assert resolve(stated('[aim]\nslack = "5 %"')).slack == 0.05


def test_which_outlet() -> None:
    one = resolve(stated('[[outlet]]\nproduct = "acid"\nrate = "1 mmol/gDW/h"'))
    two = resolve(stated('[[outlet]]\nproduct = "acid"\nrate = "1 mmol/gDW/h"\n[[outlet]]\nproduct = "tile"\nrate = "1 mmol/gDW/h"'))
    assert cases.outlet_number(one, facts()) == 0
    assert [cases.outlet_number(two, facts(), name) for name in ("acid", "Tile")] == [0, 1]
    for case, name, says in ((two, "", "name the outlet"), (one, "tile", "no outlet 'tile'"), (one, "acd", "unknown outlet"),
                             (resolve(), "", "name the outlet")):
        with pytest.raises(InputError, match=says) as caught:
            cases.outlet_number(case, facts(), name)
        assert caught.value.key == "--outlet"


def test_biomass_is_an_outlet_of_its_family() -> None:
    demand = cases.biomass(resolve())
    assert (demand.outlet, demand.family, demand.rate, demand.yield_per_feed) == ("biomass", "biomass", 0.1, None)
    assert cases.biomass(resolve(stated(growth='"0.05 gDW/mmol"'))).yield_per_feed == 0.05


def test_the_same_scenario_gives_the_same_case() -> None:
    assert resolve() == resolve()
