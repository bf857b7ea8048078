"""The canonical writer: one text for one set of triples, and nothing lost on the way."""

import random
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pyoxigraph import BlankNode, CanonicalizationAlgorithm, Dataset, Literal, NamedNode, Quad, RdfFormat, Triple, parse

from headrace.graph import terms
from headrace.graph.turtle import main, write

EX = "https://example.org/"


def read(text: str) -> list[Quad]:
    return list(parse(text, format=RdfFormat.TURTLE))


def written(body: str) -> str:
    prefixes = "".join(f"@prefix {name}: <{base}> .\n" for name, base in terms.PREFIXES.items())
    return write(read(f"{prefixes}@prefix : <{terms.HOST_BASE}paper-cell/> .\n{body}"))


def same(one: list[Quad], other: list[Quad]) -> bool:
    """Whether two graphs differ only in the names of blank nodes."""
    graphs = [Dataset(quads) for quads in (one, other)]
    for graph in graphs:
        graph.canonicalize(CanonicalizationAlgorithm.RDFC_1_0)
    return graphs[0] == graphs[1]


def test_the_whole_form_at_once() -> None:
    text = written(
        "r:b hr:makes [ hr:count 1.50 ; hr:compound c:y ] , [ hr:count 1 ; hr:compound c:x ] ;"
        'a hr:Reaction ; skos:prefLabel "b"@en .\n'
        "r:a hr:lumped true ; hr:enzyme e:z ."
    )
    assert text == (
        "@prefix c: <https://w3id.org/headrace/id/compound/> .\n"
        "@prefix e: <https://w3id.org/headrace/id/enzyme/> .\n"
        "@prefix hr: <https://w3id.org/headrace/ns#> .\n"
        "@prefix r: <https://w3id.org/headrace/id/reaction/> .\n"
        "@prefix skos: <http://www.w3.org/2004/02/skos/core#> .\n"
        "\n"
        "r:a hr:enzyme e:z ;\n"
        "  hr:lumped true .\n"
        "\n"
        "r:b a hr:Reaction ;\n"
        '  skos:prefLabel "b"@en ;\n'
        "  hr:makes [ hr:compound c:x ; hr:count 1 ] ,\n"
        "    [ hr:compound c:y ; hr:count 1.50 ] .\n"
    )


def test_nothing_gives_nothing() -> None:
    assert write([]) == ""


@pytest.mark.parametrize("number", ["1.50", "-0.0", "+7", "007", "1.0E2", ".5", "1e6", "true", "-2"])
def test_numbers_keep_their_text(number: str) -> None:
    assert f" {number} .\n" in written(f"c:x hr:count {number} .")


@pytest.mark.parametrize(("text", "kind"), [("1.", "decimal"), ("two", "integer"), ("TRUE", "boolean"), ("1", "decimal")])
def test_numbers_that_turtle_has_no_short_form_for(text: str, kind: str) -> None:
    assert f'"{text}"^^xsd:{kind} .\n' in written(f'c:x hr:count "{text}"^^xsd:{kind} .')


def test_line_breaks_in_text_are_escaped() -> None:
    triple = Triple(NamedNode(EX + "s"), NamedNode(EX + "p"), Literal('a\nb\r\n"c"\\\t\x07'))
    assert '"a\\nb\\r\\n\\"c\\"\\\\\\t\\u0007" .' in write([triple])


def test_own_host_takes_the_empty_prefix_and_another_host_its_slug() -> None:
    text = written(f"h:paper-cell hr:compositionFrom h:other-cell . :x hr:about <{terms.HOST_BASE}other-cell/y> .")
    assert f"@prefix : <{terms.HOST_BASE}paper-cell/> .\n" in text
    assert f"@prefix other-cell: <{terms.HOST_BASE}other-cell/> .\n" in text
    assert ":x hr:about other-cell:y .\n" in text
    assert "h:paper-cell hr:compositionFrom h:other-cell .\n" in text


@pytest.mark.parametrize("local", ["a/b", "a.", "-a", "ä", "", "a%20b"])
def test_local_names_that_are_not_plain_stay_addresses(local: str) -> None:
    text = write([Triple(NamedNode(terms.COMPOUND_BASE + local), NamedNode(EX + "p"), Literal("x"))])
    assert text.startswith(f"<{terms.COMPOUND_BASE}{local}> ")
    assert same(read(text), [Quad(NamedNode(terms.COMPOUND_BASE + local), NamedNode(EX + "p"), Literal("x"))])


@pytest.mark.parametrize("local", ["6.4.1.1", "4-aminobutanoate", "a-", "_x", "n1.b"])
def test_plain_local_names_are_shortened(local: str) -> None:
    assert write([Triple(NamedNode(terms.COMPOUND_BASE + local), NamedNode(EX + "p"), Literal("x"))]).count(f"c:{local} ")


def test_lists_of_shapes() -> None:
    assert "sh:in ( hr:forward hr:both ) .\n" in written("c:x sh:in ( hr:forward hr:both ) .")
    assert "sh:in rdf:nil .\n" in written("c:x sh:in () .")
    unfinished = written("c:x sh:in [ rdf:first hr:forward ] .")
    assert "[ rdf:first hr:forward ]" in unfinished


@pytest.mark.parametrize(
    ("body", "message"),
    [
        ("c:x hr:makes _:a . c:y hr:makes _:a . _:a hr:count 1 .", "used 2 times"),
        ("[] hr:count 1 .", "nothing refers to"),
        ("_:a hr:makes _:b . _:b hr:makes _:a .", "in a circle"),
    ],
)
def test_blank_nodes_that_need_an_address_are_refused(body: str, message: str) -> None:
    with pytest.raises(ValueError, match=message):
        written(body)


def test_files_are_put_into_the_form(tmp_path: Path) -> None:
    path = tmp_path / "a.ttl"
    path.write_text("@prefix c: <https://w3id.org/headrace/id/compound/> . # by hand\nc:b <urn:p> 1 . c:a <urn:p> 1.50 .")
    main([str(path)])
    assert path.read_text().endswith("c:a <urn:p> 1.50 .\n\nc:b <urn:p> 1 .\n")
    path.write_text("c:a c:b .")
    with pytest.raises(SyntaxError):
        main([str(path)])
    assert path.read_text() == "c:a c:b ."


def test_a_named_graph_is_refused() -> None:
    node = NamedNode(EX + "s")
    with pytest.raises(ValueError, match="no named graphs"):
        write([Quad(node, node, node, node)])


def test_the_same_triple_twice_is_one() -> None:
    triple = Triple(NamedNode(EX + "s"), NamedNode(EX + "p"), Literal("x"))
    assert write([triple, triple]) == write([triple])


def test_equal_blank_nodes_stay_two() -> None:
    assert written("r:a hr:takes [ hr:count 1 ] , [ hr:count 1 ] .").count("[ hr:count 1 ]") == 2


locals_ = st.sampled_from(["x", "y-1", "6.4.1.1", "a/b", "a.", "é"])
bases = st.sampled_from([terms.COMPOUND_BASE, terms.HOST_BASE + "cell/", terms.HOST_BASE + "other/", terms.HR, EX])
iris = st.builds(lambda base, local: NamedNode(base + local), bases, locals_)
words = st.text(st.characters(exclude_categories=["Cs"]), max_size=8)
literals = st.one_of(
    st.builds(Literal, words),
    st.builds(lambda text: Literal(text, language="en"), words),
    st.sampled_from(["1", "1.50", "1.", "1e3", "true", "x", "", " 1"]).flatmap(
        lambda text: st.sampled_from([terms.INTEGER, terms.DECIMAL, terms.DOUBLE, terms.BOOLEAN, terms.XSD + "date"]).map(
            lambda kind: Literal(text, datatype=NamedNode(kind))
        )
    ),
)


@st.composite
def graphs(draw: st.DrawFn) -> list[Quad]:
    """Graphs whose blank nodes form trees below addresses."""
    quads: list[Quad] = []

    def describe(subject: NamedNode | BlankNode, depth: int) -> None:
        for predicate in draw(st.lists(iris | st.just(NamedNode(terms.TYPE)), min_size=1, max_size=3)):
            if depth and draw(st.booleans()):
                node = BlankNode()
                quads.append(Quad(subject, predicate, node))
                describe(node, depth - 1)
            else:
                quads.append(Quad(subject, predicate, draw(iris | literals)))

    for subject in draw(st.lists(iris, max_size=4, unique=True)):
        describe(subject, 2)
    return quads


@settings(max_examples=150, deadline=None)
@given(graphs(), st.randoms(use_true_random=False))
def test_round_trip_idempotence_and_order(quads: list[Quad], rng: random.Random) -> None:
    text = write(quads)
    assert same(read(text), quads)
    assert write(read(text)) == text
    shuffled = list(quads)
    rng.shuffle(shuffled)
    assert write(shuffled) == text
