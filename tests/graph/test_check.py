"""`check` on the four-reaction world: nothing to say about it, and the expected report for each broken file.

Each tests/graph/broken/NAME.ttl is laid over the world; NAME.txt beside it holds the whole report. A rule without
such a pair fails the test.
"""

import shutil
from collections.abc import Iterable
from pathlib import Path

import pyshacl
import pytest
import rdflib

from headrace import paths
from headrace.errors import FactsError, MissingPartError
from headrace.graph import Fault, shapes
from headrace.graph.check import check
from headrace.graph.rules import read_rules
from headrace.values.facts import Facts

HERE = Path(__file__).parent
BROKEN = sorted((HERE / "broken").glob("*.ttl"))
RULES = paths.facts_folder() / "rules"


@pytest.fixture
def world(tmp_path: Path) -> Path:
    """The tiny world with the shipped vocabulary."""
    folder = Path(shutil.copytree(HERE / "world", tmp_path / "world"))
    shutil.copy(paths.facts_folder() / "ontology" / "headrace.ttl", folder / "ontology" / "headrace.ttl")
    return folder


def report(faults: Iterable[Fault]) -> str:
    return "".join(f"{fault.rule} | {fault.file} | {fault.node} | {fault.message}\n" for fault in faults)


def test_the_world_is_sound(world: Path) -> None:
    assert report(check([world])) == ""


@pytest.mark.parametrize("broken", BROKEN, ids=lambda path: path.stem)
def test_a_broken_file_gives_the_expected_report(world: Path, broken: Path) -> None:
    shutil.copy(broken, world / "extra.ttl")
    found = check([world])
    assert report(found) == broken.with_suffix(".txt").read_text()
    assert found


def test_every_rule_has_a_file_that_breaks_it() -> None:
    for rule in read_rules(RULES):
        expected = HERE / "broken" / f"{rule.name}.txt"
        assert expected.is_file(), f"no {expected.name}"
        assert any(line.startswith(f"{rule.name} | ") for line in expected.read_text().splitlines()), rule.name


def test_every_broken_file_is_caught_for_its_own_reason() -> None:
    other_names = {"unbalanced-element": "unbalanced", "unbalanced-charge": "unbalanced", "bad-direction": "unknown-word"}
    for path in BROKEN:
        rule = other_names.get(path.stem, path.stem)
        assert f"{rule} | " in path.with_suffix(".txt").read_text(), path.stem


def test_line_endings_of_a_checkout_are_no_fault(world: Path) -> None:
    for path in world.rglob("*.ttl"):
        path.write_bytes(path.read_bytes().replace(b"\n", b"\r\n"))
    assert report(check([world])) == ""


def test_syntax_faults_of_all_files_stand_alone(world: Path) -> None:
    for name in ("a.ttl", "b.ttl"):
        (world / name).write_text("c:x a c:y .")
    assert [(fault.rule, fault.file) for fault in check([world])] == [("syntax", "a.ttl"), ("syntax", "b.ttl")]


EXCEPTION = """@prefix c: <https://w3id.org/headrace/id/compound/> .
@prefix except: <https://w3id.org/headrace/id/exception/> .
@prefix hr: <https://w3id.org/headrace/ns#> .

except:malate-for-later a hr:Exception ;
  hr:excuses c:malate ;
  hr:reason "the next issue uses it"@en ;
  hr:rule "orphan-compound" .
"""


def test_an_exception_excuses_with_a_reason_and_only_what_is_found(world: Path) -> None:
    shutil.copy(HERE / "broken" / "orphan-compound.ttl", world / "extra.ttl")
    (world / "rules").mkdir()
    listed = world / "rules" / "exceptions.ttl"
    listed.write_text(EXCEPTION)
    assert report(check([world])) == ""
    listed.write_text(EXCEPTION.replace('  hr:reason "the next issue uses it"@en ;\n', ""))
    assert [fault.rule for fault in check([world])] == ["missing-part"]
    listed.write_text(EXCEPTION)
    (world / "extra.ttl").unlink()
    assert report(check([world])) == (
        "exception-unused | rules/exceptions.ttl | exception/malate-for-later | "
        "excuses compound/malate from orphan-compound, which does not find it\n"
    )


def test_proofs_get_the_facts_and_their_faults_are_listed(world: Path) -> None:
    def nothing_from_nothing(facts: Facts) -> Iterable[Fault]:
        yield Fault("nothing-from-nothing", "host/paper-cell", f"{len(facts.reactions)} reactions make ATP")

    assert [fault.rule for fault in check([world], proofs=[nothing_from_nothing])] == ["nothing-from-nothing"]
    shutil.copy(HERE / "broken" / "unbalanced-charge.ttl", world / "extra.ttl")
    assert [fault.rule for fault in check([world], proofs=[nothing_from_nothing])] == ["unbalanced"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("SELECT ?node ?message WHERE { ?node a ?message }", "starts with one sentence"),
        ("# Odd.\nSELECT ?node WHERE { ?node a ?x }", "selects .node and .message"),
        ("# Odd.\nASK { ?node a ?message }", "selects .node and .message"),
        ("# Odd.\nSELECT ?node ?message {", "not valid SPARQL"),
        ("# Odd.\nSELECT ?node ?message { ?node a ?x }", "leaves .node or .message open"),
    ],
)
def test_a_rule_that_is_no_rule(world: Path, tmp_path: Path, text: str, message: str) -> None:
    (tmp_path / "odd.rq").write_text(text)
    with pytest.raises(FactsError, match=message) as caught:
        check([world], rules=tmp_path)
    assert "odd.rq" in caught.value.file


def test_without_the_engine_for_shapes_it_says_what_is_missing(world: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(shapes, "shacl", None)
    with pytest.raises(MissingPartError, match="needs the package shacl, which is not installed") as caught:
        check([world])
    assert caught.value.exit_code == 3


def test_the_shapes_engine_agrees_with_the_reference(world: Path) -> None:
    """pySHACL finds the same number of violations about the same nodes, on a sound and on a broken world."""
    definitions = rdflib.Graph()
    for path in (paths.facts_folder() / "shapes").glob("*.ttl"):
        definitions.parse(path)
    for name in ("", "shape", "number-without-basis", "bad-direction", "wrong-datatype"):
        if name:
            shutil.copy(HERE / "broken" / f"{name}.ttl", world / "extra.ttl")
        data = rdflib.Graph()
        for path in world.rglob("*.ttl"):
            data.parse(path)
        _, results, _ = pyshacl.validate(data, shacl_graph=definitions)
        focus = rdflib.Namespace("http://www.w3.org/ns/shacl#").focusNode
        reference = sorted(str(node).rsplit("/id/", 1)[-1] for node in results.objects(None, focus))
        text = "\n".join(path.read_text() for path in world.rglob("*.ttl"))
        ours = shapes.shacl.Shapes.from_turtle(definitions.serialize(format="turtle")).validate_turtle(text)
        assert sorted(result.focus_node.strip("<>").rsplit("/id/", 1)[-1] for result in ours.results) == reference
        assert bool(reference) == bool(name)
