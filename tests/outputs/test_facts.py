"""Facts on the screen: every entity has a page, lists are complete, unknown names get the nearest ones."""

from __future__ import annotations

import json
import re
from collections import Counter
from pathlib import Path

import pytest

from headrace.errors import InputError
from headrace.graph import Fault
from headrace.names import Entity
from headrace.outputs.facts import entity, find, listing, proofs, words
from headrace.pages import csvtext, markdown, plain
from headrace.pages.model import Page, Table
from headrace.values.facts import Facts

SHORTHAND = re.compile(r"\[[cmep]\]|\bakg\b|\baccoa\b|\bproton_out\b| and \w+\) or |\bpts\b")


def shown(page: Page) -> str:
    assert csvtext.table(page.main)
    return markdown.page(page) + plain.page(page, 100)


@pytest.mark.parametrize("plural", find.KINDS)
def test_every_entity_has_a_page_without_shorthand(plural: str, facts: Facts) -> None:
    kind = plural.removesuffix("s")
    table = getattr(facts, plural)
    assert table, "the facts have none"
    for slug in table:
        text = shown(entity.page(facts, Entity(kind, slug)))
        assert not SHORTHAND.search(text), f"{kind} {slug}: {SHORTHAND.search(text)}"


@pytest.mark.parametrize("plural", find.PLURALS)
def test_a_list_has_a_row_for_each(plural: str, facts: Facts) -> None:
    page = listing.page(facts, plural)
    assert shown(page)
    if plural not in ("refills", "families"):
        assert len(page.main.rows) == len(getattr(facts, plural))


def test_a_compound_tells_formula_charge_and_where_it_occurs(facts: Facts) -> None:
    page = entity.page(facts, Entity("compound", "oxaloacetate"))
    assert page.verdict.startswith("oxaloacetate: C4H2O5, charge -2;")
    reactions = next(block for block in page.blocks if isinstance(block, Table) and block.name == "reactions")
    used = [each for each in facts.reactions.values() if any(term.compound == "oxaloacetate" for term in each.terms)]
    assert len(reactions.rows) == len(used)


def test_a_host_lists_all_its_rows_with_reading_and_source(facts: Facts) -> None:
    for slug, host in facts.hosts.items():
        page = entity.page(facts, Entity("host", slug))
        assert len(page.main.rows) == len(host.reactions)
        assert all(row[5] and str(row[6]).startswith("[") for row in page.main.rows)
        assert page.sources


def test_a_gene_and_an_ec_number_are_found(facts: Facts) -> None:
    host = next(iter(facts.hosts.values()))
    gene = next(each.genes[0] for row in host.reactions for each in row.isozymes)
    assert Entity("gene", gene) in find.find(facts, gene)
    number = next(reaction.ec[0] for reaction in facts.reactions.values() if reaction.ec)
    assert find.find(facts, f"EC {number}") == (Entity("EC number", number),)
    assert shown(entity.page(facts, Entity("gene", gene))) and shown(entity.page(facts, Entity("EC number", number)))


def test_an_unknown_name_gets_the_nearest(facts: Facts) -> None:
    with pytest.raises(InputError) as caught:
        find.find(facts, "oxaloacetat")
    assert "oxaloacetate" in caught.value.near


def test_sources_count_every_citation(facts: Facts) -> None:
    page = listing.sources(facts)
    total = sum(int(number) for row in page.main.rows for number in row[3:6])  # type: ignore[arg-type]
    assert total == sum(len(basis.sources) for basis in listing.bases(facts))
    readings = Counter(basis.reading for basis in listing.bases(facts) for _ in basis.sources)
    assert f"{readings['recalled']} recalled" in page.verdict


def test_faults_are_listed_with_what_disagrees() -> None:
    page = listing.faults([Fault("balance", "reaction/x", "C is off by 1", "reactions/x.ttl")])
    assert page.verdict == "The facts have 1 fault."
    assert page.main.rows == (("balance", "reaction/x", "C is off by 1", "reactions/x.ttl"),)
    assert listing.faults([]).verdict.startswith("The facts hold.")


def test_nothing_comes_from_nothing(facts: Facts) -> None:
    assert not list(proofs.nothing_from_nothing(facts))


def test_equations_say_the_side_of_carriers_and_skip_a_count_of_one(facts: Facts) -> None:
    carrier = next(reaction for reaction in facts.reactions.values() if reaction.transport)
    assert "(outer side)" in words.equation(facts, carrier)
    assert not re.search(r"(^|\+ )1 ", words.equation(facts, carrier))
    assert "<->" in words.equation(facts, carrier, "both")


def test_schemas_ship_with_the_package(root: Path) -> None:
    for path in (root / "src" / "headrace" / "outputs" / "schemas").glob("*.json"):
        assert json.loads(path.read_text())["title"].startswith("Answer of headrace ")
