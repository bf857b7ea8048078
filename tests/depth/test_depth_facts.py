"""Facts on kinetics, energies, concentrations, effects and vitamins are checked like all others."""

from __future__ import annotations

from pathlib import Path

import pytest

from headrace import paths
from headrace.graph.build import collect
from headrace.graph.check import check
from headrace.graph.files import fact_files
from headrace.graph.read import Graph
from headrace.values.facts import Facts

PREFIXES = """@prefix c: <https://w3id.org/headrace/id/compound/> .
@prefix dcterms: <http://purl.org/dc/terms/> .
@prefix e: <https://w3id.org/headrace/id/enzyme/> .
@prefix effect: <https://w3id.org/headrace/id/effect/> .
@prefix h: <https://w3id.org/headrace/id/host/> .
@prefix hr: <https://w3id.org/headrace/ns#> .
@prefix k: <https://w3id.org/headrace/id/kind/> .
@prefix n: <https://w3id.org/headrace/id/number/> .
@prefix qudt: <http://qudt.org/schema/qudt/> .
@prefix s: <https://w3id.org/headrace/id/source/> .
@prefix supply: <https://w3id.org/headrace/id/supply/> .
@prefix unit: <https://w3id.org/headrace/id/unit/> .
@prefix vitamin: <https://w3id.org/headrace/id/vitamin/> .
"""
BASIS = "hr:origin hr:measured ; hr:reading hr:seen ; dcterms:source s:lee-2013 ."
CONSTANT = f"n:x a hr:KineticConstant, qudt:Quantity ; hr:host h:escherichia-coli ; hr:about e:pep-carboxylase ; {BASIS}"
NUMBER = "qudt:numericValue 1.0 ; qudt:hasUnit"


def with_(statement: str, before: str) -> str:
    return statement.replace("hr:origin", f"{before} hr:origin", 1)


WRONG = {
    "an affinity without substrate": (
        with_(CONSTANT, f"hr:quantityKind k:michaelis-constant ; {NUMBER} unit:mmol-per-l ;"), "has no hr:compound"
    ),
    "a turnover in another unit": (
        with_(CONSTANT, f"hr:quantityKind k:turnover-number ; {NUMBER} unit:mmol-per-l ;"), "such a number is in per-s"
    ),
    "an enzyme that is not there": (
        with_(CONSTANT, f"hr:quantityKind k:turnover-number ; {NUMBER} unit:per-s ;").replace("e:pep-carboxylase", "e:nobody"),
        "no such hr:Enzyme",
    ),
    "a value outside its own range": (
        with_(CONSTANT, f"hr:quantityKind k:turnover-number ; hr:low 2.0 ; {NUMBER} unit:per-s ;"), "outside its own range"
    ),
    "an energy of neither a species nor a condition": (
        f"n:y a hr:FormationEnergy, qudt:Quantity ; hr:about c:malate ; hr:quantityKind k:species-formation-energy ; {NUMBER} "
        f"unit:kj-per-mol ; {BASIS}", "has no hr:ph",
    ),
    "a concentration in another host's compartment": (
        f"n:z a hr:Concentration, qudt:Quantity ; hr:about c:malate ; hr:host h:escherichia-coli ; hr:quantityKind k:concentration ; "
        f"{NUMBER} unit:mmol-per-l ; hr:place <https://w3id.org/headrace/id/host/saccharomyces-cerevisiae/cytosol> ; {BASIS}",
        "no such hr:Compartment",
    ),
    "an effect of an unknown sense": (
        "effect:x a hr:Effect ; hr:enzyme e:pep-carboxylase ; hr:effector c:malate ; hr:sense hr:measured ; hr:reading hr:seen ; "
        "dcterms:source s:lee-2013 .", "accepted: hr:activator, hr:inhibitor",
    ),
    "an effect without a source": (
        "effect:x a hr:Effect ; hr:enzyme e:pep-carboxylase ; hr:effector c:malate ; hr:sense hr:inhibitor ; hr:reading hr:seen .",
        "has no dcterms:source",
    ),
    "a second supply of one vitamin": (
        "supply:biotin-again a hr:Supply ; hr:host h:escherichia-coli ; hr:vitamin vitamin:biotin ; hr:supplied hr:made-inside ; "
        "hr:reading hr:seen ; dcterms:source s:lee-2013 .", "says a second time where escherichia-coli has biotin from",
    ),
}


@pytest.mark.parametrize("what", WRONG)
def test_a_wrong_fact_is_refused(tmp_path: Path, what: str) -> None:
    statement, words = WRONG[what]
    (tmp_path / "wrong.ttl").write_text(PREFIXES + statement)
    _, faults = collect(Graph(fact_files([paths.facts_folder()], [("mine", tmp_path)])), "none")
    assert [fault for fault in faults if words in fault.message], faults


def test_the_shapes_refuse_them_too(tmp_path: Path) -> None:
    """Without a compound, and with a value of no kind that an enzyme has."""
    pytest.importorskip("shacl")
    lines = with_(CONSTANT, f"hr:quantityKind k:maintenance ; {NUMBER} unit:per-s ;")
    (tmp_path / "wrong.ttl").write_text(PREFIXES + lines)
    found = check(extra=[("mine", tmp_path)])
    assert any(fault.rule == "shape" and fault.file == "plugin/mine/wrong.ttl" for fault in found)


def test_each_host_states_ph_and_ionic_strength_where_reactions_run(facts: Facts) -> None:
    for host in facts.hosts.values():
        spaces = {row.place for row in host.reactions if row.place}
        stated = {(q.kind, q.about) for q in host.quantities}
        roles = {space.slug: space.role for space in host.compartments}
        missing = [place for place in spaces if roles[place] == "cytosol" and ("ph", place) not in stated]
        assert not missing
        assert all(("ionic-strength", place) in stated for kind, place in stated if kind == "ph")


def test_numbers_are_recalled_or_have_a_source_that_was_read(facts: Facts) -> None:
    everything = (*facts.kinetics, *facts.formation, *facts.concentrations, *facts.effects)
    assert len(everything) > 250
    assert all(each.basis.sources for each in everything)
    assert {each.basis.reading for each in everything} <= {"seen", "second-hand", "recalled"}
    assert sum(each.basis.reading == "recalled" for each in facts.concentrations) == 0
