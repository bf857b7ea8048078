"""Exports: nothing lost, the same text every run, derived statements apart and right."""

from fractions import Fraction
from pathlib import Path

import msgspec
import pytest
import rdflib
from pyoxigraph import CanonicalizationAlgorithm, Dataset, Literal, NamedNode, Quad, RdfFormat, parse

from headrace.errors import FactsError, InputError
from headrace.graph import load, terms
from headrace.graph.derive import derived, merged, number
from headrace.graph.export import FORMATS, dataset, export, to_rdflib
from headrace.graph.turtle import write
from headrace.values.facts import Basis, Facts, Route

WORLD = [Path(__file__).parent / "world"]
OWN = terms.HOST_BASE + "paper-cell/"


@pytest.fixture(scope="module")
def facts() -> Facts:
    return load(WORLD, cache=False)


def says(quads: list[Quad], subject: str, predicate: str) -> list[str]:
    return sorted(quad.object.value for quad in quads if quad.subject == NamedNode(subject) and quad.predicate.value == predicate)


@pytest.mark.parametrize("format", FORMATS)
@pytest.mark.parametrize("with_derived", [False, True])
def test_every_format_is_repeatable_and_complete(format: str, with_derived: bool) -> None:
    text = export(format, WORLD, derived=with_derived)
    assert text == export(format, WORLD, derived=with_derived)
    kinds = {"turtle": RdfFormat.TURTLE, "nquads": RdfFormat.N_QUADS, "jsonld": RdfFormat.JSON_LD}
    back = list(parse(text, format=kinds[format]))
    expected = dataset(WORLD, derived=with_derived)
    if format == "turtle":
        expected = merged(expected)
    assert canonical(back) == canonical(expected)
    assert "1.50" in text


def canonical(quads: list[Quad]) -> list[str]:
    whole = Dataset(quads)
    whole.canonicalize(CanonicalizationAlgorithm.RDFC_1_0)
    return sorted(map(str, whole))


def test_turtle_of_facts_alone_is_canonical() -> None:
    text = export("turtle", WORLD)
    assert write(parse(text, format=RdfFormat.TURTLE)) == text
    assert "@prefix : <https://w3id.org/headrace/id/host/paper-cell/> .\n" in text


def test_an_unknown_format_and_faulty_facts(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="turtle, nquads, jsonld"):
        export("xml", WORLD)
    (tmp_path / "a.ttl").write_text("x")
    with pytest.raises(FactsError, match="not valid Turtle"):
        export("turtle", [tmp_path])


def test_pools_and_what_rows_do_with_them(facts: Facts) -> None:
    quads = derived(facts)
    assert {quad.graph_name.value for quad in quads} == {terms.DERIVED_GRAPH}
    respiration = OWN + "pyruvate-respiration"
    assert says(quads, respiration, terms.CONSUMES) == [
        f"{OWN}{slug}-in-cytosol" for slug in ("adp", "oxygen", "phosphate", "proton", "pyruvate")
    ]
    assert says(quads, respiration, terms.PRODUCES) == [f"{OWN}{slug}-in-cytosol" for slug in ("atp", "carbon-dioxide", "water")]
    both = [f"{OWN}{slug}-in-{place}" for slug in ("proton", "pyruvate") for place in ("cytosol", "medium")]
    assert says(quads, OWN + "pyruvate-uptake", terms.CONSUMES) == both
    assert says(quads, OWN + "pyruvate-uptake", terms.PRODUCES) == both
    assert says(quads, OWN + "pyruvate-in-medium", terms.TYPE) == [terms.POOL]
    assert says(quads, OWN + "pyruvate-in-medium", terms.HAS_COMPOUND) == [terms.COMPOUND_BASE + "pyruvate"]
    assert says(quads, OWN + "pyruvate-in-medium", terms.IN_COMPARTMENT) == [OWN + "medium"]


def test_contents_and_refill_classes(facts: Facts) -> None:
    quads = derived(facts)
    assert says(quads, terms.COMPOUND_BASE + "oxaloacetate", terms.CONTENT) == ["1"]
    assert says(quads, OWN + "pyruvate-carboxylase", terms.TYPE) == [terms.REFILL]
    assert says(quads, OWN + "pyruvate-carboxylase", terms.SKELETONS_PER_TURN) == ["1"]
    assert says(quads, OWN + "pyruvate-uptake", terms.TYPE) == []


def test_reactions_on_routes_and_unknown_contents_are_no_refills(facts: Facts) -> None:
    route = Route("a", "a", "oxaloacetate", ("pyruvate-carboxylase",), Basis("seen"))
    on_route = msgspec.structs.replace(facts, routes={"a": route})
    unknown = msgspec.structs.replace(facts, contents={"oxaloacetate": Fraction(1)})
    for case in (on_route, unknown):
        assert says(derived(case), OWN + "pyruvate-carboxylase", terms.TYPE) == []


def test_where_derived_statements_come_from(facts: Facts) -> None:
    quads = derived(facts)
    version = f"{terms.ID}facts/{facts.version}"
    assert says(quads, terms.DERIVED_GRAPH, terms.DERIVED_FROM) == [version]
    assert says(quads, version, terms.VERSION) == [facts.version]


@pytest.mark.parametrize(
    ("value", "text"), [("3", "3"), ("-3/2", "-1.5"), ("1/8", "0.125"), ("-1/4", "-0.25"), ("101/20", "5.05"), ("0", "0")]
)
def test_exact_numbers(value: str, text: str) -> None:
    literal = number(Fraction(value))
    assert literal.value == text and Fraction(literal.value) == Fraction(value)
    assert literal.datatype.value == (terms.INTEGER if "/" not in value else terms.DECIMAL)


def test_numbers_without_a_finite_decimal_form_are_refused() -> None:
    with pytest.raises(ValueError, match="1/3"):
        number(Fraction(1, 3))


def test_rdflib_gets_the_same_statements_with_the_same_text() -> None:
    target = to_rdflib(WORLD)
    graph = target.graph(rdflib.URIRef(terms.DERIVED_GRAPH))
    everything = dataset(WORLD, derived=True)
    assert len(graph) == sum(isinstance(quad.graph_name, NamedNode) for quad in everything)
    assert len(target.default_graph) == len(everything) - len(graph)
    value = target.default_graph.value(rdflib.URIRef(OWN + "maintenance"), rdflib.URIRef(terms.VALUE))
    assert str(value) == "1.50" and value.datatype == rdflib.XSD.decimal
    label = target.default_graph.value(rdflib.URIRef(terms.COMPOUND_BASE + "water"), rdflib.URIRef(terms.LABEL))
    assert label == rdflib.Literal("water", lang="en")


def test_literals_of_the_world_are_not_all_text() -> None:
    assert any(isinstance(quad.object, Literal) and quad.object.value == "14.50" for quad in dataset(WORLD))
