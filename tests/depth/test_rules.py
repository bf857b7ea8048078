"""Finding rules: anyone can add one, a wrong one is refused by name, and a cached build notices a changed one."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from headrace import graph
from headrace.errors import FactsError
from headrace.graph.files import fact_files
from headrace.graph.ruletexts import digest, rule_texts

WORLD = Path(__file__).resolve().parents[1] / "graph" / "world"
RULE = """# A reaction that takes an anchor.
PREFIX hr: <https://w3id.org/headrace/ns#>
SELECT ("note" AS ?level) (?runs AS ?about) ("takes an acid of the cycle" AS ?message) ?runs WHERE {
  ?runs a hr:Reaction ; hr:takes/hr:compound/hr:anchor true .
}
"""


@pytest.fixture
def home(tmp_path: Path) -> Path:
    """The paper world in a folder of its own, with an empty folder for rules."""
    shutil.copytree(WORLD, tmp_path / "facts")
    (tmp_path / "facts" / "rules" / "findings").mkdir(parents=True)
    return tmp_path / "facts"


def write(home: Path, text: str, name: str = "takes-an-acid") -> None:
    (home / "rules" / "findings" / f"{name}.rq").write_text(text)


def test_a_rule_is_a_file(home: Path) -> None:
    write(home, RULE)
    facts = graph.load([home], cache=False)
    assert facts.rule_rows
    assert {row.rule for row in facts.rule_rows} == {"takes-an-acid"}
    assert all(row.runs == f"reaction/{row.about}" and row.about in facts.reactions for row in facts.rule_rows)


def test_rules_do_not_change_the_version_of_the_facts(home: Path) -> None:
    before = graph.load([home], cache=False)
    write(home, RULE)
    after = graph.load([home], cache=False)
    assert before.version == after.version
    assert not before.rule_rows


def test_a_changed_rule_is_run_again_beside_the_cache(home: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HEADRACE_CACHE", str(tmp_path / "cache"))
    write(home, RULE)
    first, again = graph.load([home]), graph.load([home])
    write(home, RULE.replace("an acid of the cycle", "what the cycle has"))
    changed = graph.load([home])
    assert first == again
    assert {row.message for row in changed.rule_rows} == {"takes what the cycle has"}


def test_a_plugins_rules_go_by_its_name(home: Path) -> None:
    write(home, RULE)
    assert [rule.name for rule in rule_texts([], [("mine", home)])] == ["plugin/mine/takes-an-acid"]
    assert digest(()) == ""


@pytest.mark.parametrize(
    ("text", "words"),
    [
        (RULE.replace("# A reaction that takes an anchor.", ""), "a rule starts with one sentence"),
        (RULE.replace("WHERE {", "WHERE"), "not valid SPARQL"),
        (RULE.replace('"note"', '"warning"'), "reads 'warning'; accepted: note, caution, stop"),
        (RULE.replace("?runs WHERE", "?runs ?vaccine WHERE").replace("true .", "true . BIND (1 AS ?vaccine)"), "?vaccine is neither"),
        (RULE.replace('("takes an acid of the cycle" AS ?message)', ""), "a finding rule selects message"),
        (RULE.replace(" ?runs WHERE", " WHERE"), "a finding rule selects a trigger"),
        (RULE.replace("(?runs AS ?about)", '("text" AS ?about)'), "?about reads text; accepted: an address"),
        ("# Asks.\nASK { ?a ?b ?c }\n", "a finding rule is a SELECT"),
    ],
)
def test_a_wrong_rule_is_refused_with_its_name(home: Path, text: str, words: str) -> None:
    write(home, text)
    with pytest.raises(FactsError) as error:
        graph.load([home], cache=False)
    assert words in str(error.value)
    assert "takes-an-acid.rq" in str(error.value)


def test_rows_that_differ_in_their_source_alone_are_one(home: Path) -> None:
    cited = "true ; dcterms:source ?source ."
    text = RULE.replace("PREFIX hr", "PREFIX dcterms: <http://purl.org/dc/terms/>\nPREFIX hr").replace("?runs WHERE", "?runs ?source WHERE")
    write(home, text.replace("hr:takes/hr:compound/hr:anchor true .", f"hr:takes/hr:compound/hr:anchor {cited}".replace("true ;", "true ;")))
    facts = graph.load([home], cache=False)
    about = [row.about for row in facts.rule_rows]
    assert len(about) == len(set(about))
    assert all(row.sources == facts.reactions[row.about].basis.sources for row in facts.rule_rows)


def test_shipped_rules_cite_their_facts(facts: object) -> None:
    rows = graph.load().rule_rows
    assert len(rows) > 100
    assert all(row.sources for row in rows)
    assert all(row.host for row in rows)


def test_rules_are_no_fact_files(home: Path) -> None:
    write(home, RULE)
    assert not [file.name for file in fact_files([home]) if file.name.startswith("rules")]
