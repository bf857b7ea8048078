"""Runs as graphs: values equal those of the JSON, provenance is there, files are all or nothing."""

from __future__ import annotations

import json
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path

import pytest
from pyoxigraph import QueryResultsFormat, Store

import headrace
from headrace.errors import InputError
from headrace.outputs import jsonout
from headrace.outputs.rdf import folder, run
from headrace.values.answers import Result
from headrace.values.facts import Facts

from . import sample
from .equal import PREFIX, Comparison

STARTED = datetime(2026, 1, 2, 3, 4, 5, tzinfo=UTC)


def asker(store: Store) -> Callable[[str], list[dict[str, dict[str, str]]]]:
    """SPARQL SELECT over a store, as the rows of the standard's JSON format."""

    def ask(query: str) -> list[dict[str, dict[str, str]]]:
        solutions = store.query(query, use_default_graph_as_union=True)
        return json.loads(solutions.serialize(format=QueryResultsFormat.JSON))["results"]["bindings"]  # type: ignore[union-attr,arg-type,no-any-return]

    return ask


def saved(result: Result, where: Path) -> tuple[Store, str]:
    """A store with one run that went through a file."""
    made = run.make(result, STARTED, rates=True, agent="the design group")
    folder.save(where, made)
    store = Store()
    store.extend(folder.read(where, made.name))
    return store, made.iri


@pytest.mark.parametrize("kind", sample.ALL)
def test_rdf_says_what_json_says(kind: str, facts: Facts, tmp_path: Path) -> None:
    result = sample.ALL[kind](facts)
    document = json.loads(jsonout.text(jsonout.document(result, headrace.__version__, rates=True)))
    store, iri = saved(result, tmp_path)
    comparison = Comparison(asker(store), iri)
    comparison.document(document)
    assert not comparison.differences, "\n".join(comparison.differences)
    assert comparison.compared >= 15


def test_a_difference_is_seen(facts: Facts, tmp_path: Path) -> None:
    result = sample.refills(facts)
    document = json.loads(jsonout.text(jsonout.document(result, headrace.__version__, rates=True)))
    document["drains"][1]["net"] = 0.3333333333333334
    document["ledger"]["rows"][0]["what"] = "another"
    document["refills"][0]["necessary"] = True
    del document["crossings"][1]
    document["closure"]["C"] = 0.0
    store, iri = saved(result, tmp_path)
    comparison = Comparison(asker(store), iri)
    comparison.document(document)
    assert len(comparison.differences) == 5


def test_provenance(facts: Facts, tmp_path: Path) -> None:
    store, iri = saved(sample.refills(facts), tmp_path)
    ask = asker(store)
    (row,) = ask(f"""PREFIX prov: <http://www.w3.org/ns/prov#> PREFIX dcterms: <http://purl.org/dc/terms/> {PREFIX}
        SELECT * {{ <{iri}> a hr:Run, prov:Entity ; prov:wasGeneratedBy ?did ; prov:wasDerivedFrom ?scenario ; hr:factsVersion ?v ;
            prov:wasAttributedTo/skos:prefLabel ?agent .
          ?did a prov:Activity ; prov:startedAtTime ?from ; prov:endedAtTime ?to ; prov:used ?scenario, ?facts ;
            prov:wasAssociatedWith [ a prov:SoftwareAgent ; dcterms:hasVersion ?program ], [ a hr:Plugin ; hr:name ?plugin ] .
          FILTER(STRENDS(STR(?facts), ?v)) ?scenario hr:scenarioText ?text }}""")
    assert row["from"]["value"] == "2026-01-02T03:04:05Z"
    assert row["to"]["value"] > row["from"]["value"]
    assert row["v"]["value"] == facts.version
    assert row["program"]["value"] == headrace.__version__
    assert (row["plugin"]["value"], row["agent"]["value"]) == ("dependence", "the design group")
    used = {
        each["f"]["value"]
        for each in ask(f"PREFIX prov: <http://www.w3.org/ns/prov#> SELECT ?f {{ <{iri}/activity> prov:used ?f }}")
    }
    assert f"https://w3id.org/headrace/id/host/{sample.HOST}/pyruvate-carboxylase" in used


def test_nobody_is_named_unless_given(facts: Facts) -> None:
    text = run.make(sample.refills(facts), STARTED).trig.decode()
    assert "wasAttributedTo" not in text
    assert "somewhere" not in text  # the scenario's folder


def test_quantities_have_units(facts: Facts, tmp_path: Path) -> None:
    store, _ = saved(sample.refills(facts), tmp_path)
    rows = asker(
        store
    )("""PREFIX qudt: <http://qudt.org/schema/qudt/> PREFIX hr: <https://w3id.org/headrace/ns#>
        SELECT ?k ?v ?u { ?case qudt:hasQuantity [ a qudt:Quantity ; hr:quantityKind ?k ; qudt:numericValue ?v ; qudt:hasUnit ?u ] }""")
    assert {(row["k"]["value"].rpartition("/")[2], float(row["v"]["value"])) for row in rows} == {
        ("maintenance", 1.9),
        ("growth-associated-atp", 40.0),
    }


def test_every_term_is_in_the_vocabulary(facts: Facts, root: Path) -> None:
    """What runs say in our own words is explained, and numbers say their unit."""
    known = Store()
    for path in sorted((root / "graph_data" / "ontology").glob("*.ttl")):
        known.load(path=str(path))
    explained = {row["t"].value for row in known.query("SELECT ?t { ?t <http://www.w3.org/2000/01/rdf-schema#comment> [] }")}  # type: ignore[union-attr]
    with_unit = {row["t"].value for row in known.query("SELECT ?t { ?t <http://qudt.org/schema/qudt/hasUnit> [] }")}  # type: ignore[union-attr]
    used, numbers = set(), set()
    for kind, make in sample.ALL.items():
        for quad in run.quads(make(facts), kind, run.provenance.Occasion(STARTED, STARTED, "0"), rates=True):
            terms = {quad.predicate.value, getattr(quad.object, "value", "") if quad.predicate.value.endswith("#type") else ""}
            used |= {term for term in terms if term.startswith("https://w3id.org/headrace/ns#")}
            datatype = getattr(getattr(quad.object, "datatype", None), "value", "")
            if datatype.endswith("double") and quad.predicate.value.startswith("https://w3id.org/headrace/ns#"):
                numbers.add(quad.predicate.value)
    assert not used - explained, sorted(used - explained)
    assert not numbers - with_unit - {f"https://w3id.org/headrace/ns#{name}" for name in ("number", "slack", "count", "aim")}


def test_a_file_that_talks_about_others_is_refused(tmp_path: Path, facts: Facts) -> None:
    made = run.make(sample.drains(facts), STARTED)
    path = folder.save(tmp_path, made)
    path.write_bytes(made.trig + b"<https://w3id.org/headrace/ns#a> <https://w3id.org/headrace/ns#b> 1 .\n")
    with pytest.raises(InputError, match="something outside"):
        folder.read(tmp_path, made.name)
    path.write_bytes(made.trig[: len(made.trig) // 2])
    with pytest.raises(InputError, match="is no saved run"):
        folder.read(tmp_path, made.name)


def test_titles_cannot_leave_their_place(facts: Facts) -> None:
    for title in ('"} <x:y> {', "../../etc", "a\nb", "\u202e", "", "x" * 5000):
        made = run.make(sample.refills(facts, title), STARTED)
        assert "/" not in made.name and len(made.name) < 100
        store = Store()
        store.load(input=made.trig, format=run.RdfFormat.TRIG)
        assert [str(name.value) for name in store.named_graphs()] == [made.iri]
