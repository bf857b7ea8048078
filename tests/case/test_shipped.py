"""Scenarios against the shipped facts: the design's example, genotypes as papers write them, every host."""

from __future__ import annotations

import pytest

from headrace import case as cases
from headrace.values.case import Case
from headrace.values.facts import Facts, Outlet

LYSINE = """\
title = "HR-12, lysine on glucose"          # free text
host  = "corynebacterium-glutamicum"
growth = "0.15 /h"                            # or a biomass yield; 0 for a resting phase

[[feed]]
substrate = "glucose"
uptake    = "6.0 mmol/gDW/h"                  # leave out to ask for the least feed

[conditions]
oxygen = "aerobic"                            # aerobic | limited (with a rate) | anaerobic
supplements = ["biotin"]                      # vitamins, amino acids, C4 acids, with optional rates
release = ["acetate"]                         # what may leave besides outlets; default: the host's usual overflow

[strain]
remove = ["pep-carboxykinase"]                # gene symbol, enzyme slug (all its rows) or EC number
add    = ["feedback-free aspartokinase"]
limit  = { pyruvate-carboxylase = "2.0 mmol/gDW/h" }

[[outlet]]
product = "L-lysine"
rate    = "1.4 mmol/gDW/h"
form    = "free base"                         # asked for where forms differ in mass
"""


def grown(facts: Facts, host: str, *removed: str, feed: str = "glucose", oxygen: str = "aerobic", more: str = "") -> Case:
    strain = f"[strain]\nremove = {list(removed)!r}\n".replace("'", '"')
    text = f'host = "{host}"\ngrowth = "0.1 /h"\n[[feed]]\nsubstrate = "{feed}"\n[conditions]\noxygen = "{oxygen}"\n{strain}{more}'
    return cases.resolve(cases.read(text), facts)


def test_the_example_of_the_design(facts: Facts) -> None:
    case = cases.resolve(cases.read(LYSINE), facts)
    assert case.demands[0].rate == 1.4 and case.demands[0].molar_mass == pytest.approx(146.19)
    assert [row for row in case.removed_rows if "carboxykinase" in row] == list(case.removed_rows) != []
    assert case.limits[0].rate == 2.0 and case.limits[0].rows
    assert {finding.check for finding in case.findings} >= {"described", "already-present"}
    assert not [finding for finding in case.findings if finding.check == "required-supplement"]


@pytest.mark.parametrize("oxygen", ["aerobic", "anaerobic"])
def test_every_host_has_what_a_case_needs(facts: Facts, oxygen: str) -> None:
    for host in facts.hosts:
        case = grown(facts, host, oxygen=oxygen)
        assert case.energy["maintenance"] > 0 and case.energy["growth-associated-atp"] > 0
        levels = {level.level for level in case.levels.values()}
        assert levels >= {"on", "off"}
        if "basal" in levels:
            assert case.energy["basal-level"] > 0


def test_every_host_has_a_protein_fraction_or_says_so(facts: Facts) -> None:
    for host in facts.hosts.values():
        assert [quantity for quantity in host.quantities if quantity.kind == "protein-fraction"], host.slug


def test_a_stated_p_o_is_reached_in_every_host(facts: Facts) -> None:
    """The host's own effective P/O, stated, asks for at least two protons per ATP of the synthase."""
    for host in facts.hosts.values():
        own = next(quantity for quantity in host.quantities if quantity.kind == "p-o-nadh" and quantity.about == host.slug)
        case = grown(facts, host.slug, more=f'[energy]\np-o-nadh = "{own.text} mol/mol"')
        assert 2 <= case.energy["protons-per-atp"] <= 12, host.slug


def off(case: Case, *rows: str) -> set[str]:
    return {case.levels[row].level for row in rows}


def test_the_glyoxylate_shunt_of_e_coli_follows_feed_and_regulator(facts: Facts) -> None:
    """On for acetate alone or without IclR, off on glucose (notes of the host's facts)."""
    def shunt(**options: str) -> set[str]:
        removed = options.pop("remove", "")
        case = grown(facts, "E. coli", *([removed] if removed else []), **options)
        return {case.levels[row.slug].level for row in case.rows.values() if row.reaction == "isocitrate-lyase"}

    assert shunt() == {"off"}
    assert shunt(feed="acetate") == {"on"}
    assert shunt(remove="iclR") == {"on"}


@pytest.mark.parametrize(
    ("host", "genotype", "reaction"),
    [
        ("E. coli", ["ppc"], "pep-carboxylase"),
        ("E. coli", ["sdhABCD"], "succinate-dehydrogenase"),
        ("S. cerevisiae", ["pyc1", "pyc2"], "pyruvate-carboxylase"),
        ("C. glutamicum", ["pyc"], "pyruvate-carboxylase"),
        ("Y. lipolytica", ["icl1"], "isocitrate-lyase"),
    ],
)
def test_genotypes_as_papers_write_them(facts: Facts, host: str, genotype: list[str], reaction: str) -> None:
    case = grown(facts, host, *genotype)
    rows = [row.slug for row in case.rows.values() if row.reaction == reaction]
    assert rows and {case.levels[row].kind for row in rows} == {"removed"}


def test_one_isozyme_is_not_enough(facts: Facts) -> None:
    case = grown(facts, "S. cerevisiae", "pyc1")
    assert "removed" not in {case.levels[row.slug].kind for row in case.rows.values() if row.reaction == "pyruvate-carboxylase"}


def test_a_carboxylase_in_the_mitochondrion(facts: Facts) -> None:
    case = grown(facts, "S. cerevisiae", more='add = ["pyruvate carboxylase in the mitochondrion"]')
    [row] = [case.rows[slug] for slug in case.added]
    assert (row.place, row.direction) == ("mitochondrion", "forward")


def test_a_carboxykinase_turned_round(facts: Facts) -> None:
    case = grown(facts, "E. coli", oxygen="anaerobic", more='add = ["PEP carboxykinase running in reverse"]')
    [row] = [case.rows[slug] for slug in case.added]
    assert row.direction == "reverse"


def weighable(outlet: Outlet) -> bool:
    return bool(outlet.forms) or list(outlet.draws.values()) == [1]


def test_every_outlet_can_be_asked_for_in_moles_and_most_by_mass(facts: Facts) -> None:
    for outlet in facts.outlets.values():
        for host in facts.hosts:
            text = f'[[outlet]]\nproduct = "{outlet.slug}"\nrate = "0.1 mmol/gDW/h"'
            demand = grown(facts, host, more=text).demands[0]
            assert demand.outlet == outlet.slug and demand.place
            assert (demand.molar_mass > 0) == weighable(outlet), outlet.slug
