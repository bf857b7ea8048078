"""Reaction energies against published values, at pH 7 and elsewhere; the convention for inorganic carbon."""

from __future__ import annotations

import csv
from math import exp, log, log10
from pathlib import Path

import msgspec
import pytest

from headrace.network.energetics import RT, Condition, Energies
from headrace.values.facts import Facts

TABLE = list(csv.DictReader(Path(__file__).with_name("reaction_energies.csv").read_text("utf-8").splitlines()))
PH7 = Condition(7.0, 0.25)


@pytest.fixture(scope="module")
def energies(facts: Facts) -> Energies:
    return Energies(facts)


@pytest.mark.parametrize("row", TABLE, ids=[row["reaction"] for row in TABLE])
def test_reactions_agree_with_published_formation_energies(energies: Energies, row: dict[str, str]) -> None:
    found = energies.reaction(row["reaction"], int(row["direction"]), PH7)
    assert found.value == pytest.approx(float(row["kJ_per_mol"]), abs=0.5)
    assert bool(found.recalled) == (row["inputs"] == "recalled")


def test_species_give_the_formation_energies_that_were_read(facts: Facts, energies: Energies) -> None:
    """Alberty's table 6.2 and page 79 (seen) and a secondary copy; each compound of which a value was read."""
    read = [each for each in facts.formation if each.ph is not None]
    assert len(read) >= 23
    for each in read:
        at = Condition(float(each.ph or 0), float(each.ionic_strength or 0))
        assert energies.formation(each.compound, at) == pytest.approx(float(each.value), abs=0.15), each.slug


# Alberty RA (2003) gives ATP hydrolysis at I 0.25 mol/L over pH; recalled, but for pH 7.
ATP = {5: -32.56, 6: -33.22, 7: -36.03, 8: -41.07, 9: -46.70}


@pytest.mark.parametrize("ph", ATP)
def test_another_ph(energies: Energies, ph: int) -> None:
    assert energies.reaction("atp-hydrolysis", 1, Condition(ph, 0.25)).value == pytest.approx(ATP[ph], abs=0.05)


def test_citrate_lyase_at_ph_8_4(energies: Energies) -> None:
    """K = [citrate]/([oxaloacetate][acetate]) = 3.08 L/mol, 0.72 either way, at pH 8.4 and 25 C (abstract on the enzyme of
    Aerobacter aerogenes, seen). The ionic strength is not stated there: 0.1 to 0.25 mol/L bracket an assay."""
    low, high = (RT * log(k) for k in (3.08 - 0.72, 3.08 + 0.72))
    found = [energies.reaction("citrate-lyase", 1, Condition(8.4, strength)).value for strength in (0.1, 0.25)]
    assert all(value is not None for value in found)
    assert min(value or 0 for value in found) < RT * log(3.08) < max(value or 0 for value in found)
    assert low - 0.5 < (found[0] or 0) < high + 0.5


def test_without_salt_the_debye_term_is_gone(facts: Facts, energies: Energies) -> None:
    """dG' = dG0 + NH RT ln(10) pH at I 0, for a compound of one species."""
    species = next(each for each in facts.formation if each.compound == "water" and each.hydrogens is not None)
    assert energies.formation("water", Condition(7.0, 0.0)) == pytest.approx(float(species.value) + 2 * RT * log(10) * 7.0)


def test_half_dissociated_at_its_pk(facts: Facts, energies: Energies) -> None:
    """At pH = pK two species are half each, so that the compound lies RT ln 2 below either."""
    two = [e for e in facts.formation if e.compound == "phosphate" and e.hydrogens is not None]
    one, other = sorted(two, key=lambda each: each.hydrogens or 0)
    pk = (float(one.value) - float(other.value)) / (RT * log(10))
    at = Condition(pk, 0.0)
    alone = float(one.value) + (one.hydrogens or 0) * RT * log(10) * pk
    assert energies.formation("phosphate", at) == pytest.approx(alone - RT * log(2))


def test_inorganic_carbon_is_one_pool_with_one_water(facts: Facts, energies: Energies) -> None:
    """Carbonic anhydrase has no energy in this convention, and a tenth of the pool is dissolved CO2 at pH 7."""
    assert energies.reaction("carbonic-anhydrase", 1, PH7).value == pytest.approx(0.0, abs=1e-9)
    assert energies.share("carbon-dioxide", PH7) == pytest.approx(0.1078, abs=1e-4)
    shares = [energies.share(name, PH7) for name in ("carbon-dioxide", "bicarbonate")]
    assert 0.99 < sum(shares) < 1
    assert shares[1] / shares[0] == pytest.approx(exp((7.0 - pk_of_carbonic_acid(facts)) * log(10)), rel=1e-9)


def pk_of_carbonic_acid(facts: Facts) -> float:
    """Apparent pK at I 0.25 mol/L, from the two species' own energies by the extended Debye-Hueckel equation."""
    species = {e.hydrogens: e for e in facts.formation if e.compound == "bicarbonate" and e.hydrogens is not None}
    root = 0.25**0.5
    screened = {h: float(e.value) - 2.91482 * ((e.charge or 0) ** 2 - h) * root / (1 + 1.6 * root) for h, e in species.items()}
    return (screened[1] - screened[2]) / (RT * log(10))


def test_zeros_that_do_not_cancel_give_no_energy(energies: Energies) -> None:
    """NAD and NADP are counted from zeros of their own, so that turning one into the other has no energy here."""
    found = energies.reaction("nad-kinase", 1, PH7)
    assert found.value is None
    assert set(found.missing) >= {"nad", "nadp"}
    assert energies.reaction("malate-dehydrogenase", 1, PH7).value is not None


def test_what_is_not_known_is_named(energies: Energies) -> None:
    found = energies.reaction("pep-carboxykinase-gtp", 1, PH7)
    assert found.value is None
    assert set(found.missing) == {"gtp", "gdp"}


def test_backwards_is_the_negative(energies: Energies) -> None:
    forward, back = (energies.reaction("citrate-synthase", sign, Condition(7.6, 0.2)).value for sign in (1, -1))
    assert forward == pytest.approx(-(back or 0))


def test_a_species_that_no_source_confirms_is_recalled(facts: Facts) -> None:
    """Without the value that was read, malate's species are only recalled; with a wrong one they are too."""
    without = msgspec.structs.replace(facts, formation=tuple(e for e in facts.formation if e.slug != "malate-at-ph-7"))
    wrong = tuple(msgspec.structs.replace(e, value=e.value + 1) if e.slug == "malate-at-ph-7" else e for e in facts.formation)
    assert not Energies(facts).recalled("malate")
    assert Energies(without).recalled("malate")
    assert Energies(msgspec.structs.replace(facts, formation=wrong)).recalled("malate")


def test_a_tenfold_ratio_is_5_7_kj_per_mol() -> None:
    """Noor E et al. (2014), abstract: at -5.7 kJ/mol the forward flux is about ten times the backward one."""
    assert log10(exp(5.7 / RT)) == pytest.approx(1.0, abs=0.002)
