"""What stands beside a requirement, as a user sees it: pages, JSON by its schema, RDF, the command line, exit codes."""

from __future__ import annotations

import json
import sys
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import jsonschema
import pytest
from pyoxigraph import QueryResultsFormat, Store

import headrace
from headrace.outputs import jsonout
from headrace.outputs.cli import main, shared
from headrace.outputs.cli.optional import filled
from headrace.outputs.rdf import run as runs
from headrace.pages import answers, csvtext, markdown, plain
from headrace.pages.model import Page
from headrace.run import Desk
from headrace.values.answers import Result

from ..linked.equal import Comparison

ROOT = Path(__file__).resolve().parents[2]
PLANS = {path.stem: path for path in sorted((ROOT / "examples" / "plans").glob("*.toml"))}
SAMPLED = {"bands", "drivers", "sampling"}
BESIDE = {"lysine-beside-its-parent": {"parent", "fold"}, "lysine-by-fed-batch": {"phases", "plan"}, "threonine-with-what-is-uncertain": SAMPLED}
TOLD: list[tuple[Any, ...]] = []


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


@pytest.fixture(scope="module")
def results(desk: Desk) -> dict[str, Result]:
    """The threonine example with bands."""
    TOLD.clear()
    sampled = {"bands": 24, "seed": 2}
    return {name: desk.refills(path, lambda *words: TOLD.append(words), **(sampled if BESIDE[name] == SAMPLED else {}))
            for name, path in PLANS.items()}


def page(result: Result) -> Page:
    return answers.page(result, "0")


def said(result: Result) -> str:
    return plain.page(page(result), 100)


def strict(schema: Any) -> Any:
    """The schema with no room for keys that it does not name."""
    if isinstance(schema, dict):
        closed = {name: strict(value) for name, value in schema.items()}
        return {**closed, "additionalProperties": False} if "properties" in schema else closed
    return [strict(item) for item in schema] if isinstance(schema, list) else schema


def document(result: Result) -> dict[str, Any]:
    found: dict[str, Any] = json.loads(jsonout.text(jsonout.document(result, headrace.__version__)))
    return found


@pytest.mark.parametrize("name", PLANS)
def test_json_has_the_keys_of_its_schema(results: dict[str, Result], name: str) -> None:
    found = document(results[name])
    assert BESIDE[name] <= set(found)
    assert not (set().union(*BESIDE.values()) - BESIDE[name]) & set(found)
    schema = json.loads((ROOT / "src" / "headrace" / "outputs" / "schemas" / "refills.schema.json").read_text())
    own = {key: value for key, value in schema["properties"].items() if key in BESIDE[name]}
    part = {"type": "object", "properties": own, "required": sorted(own)}
    jsonschema.Draft202012Validator(strict(part)).validate({key: found[key] for key in own})
    if BESIDE[name] == SAMPLED:
        assert found["sampling"]["seed"] == 2 and found["sampling"]["samples"] == 24
        assert all({"p5", "p50", "p95"} <= set(each) for each in found["bands"])


@pytest.mark.parametrize("name", PLANS)
def test_sparql_equals_json(results: dict[str, Result], name: str) -> None:
    now = datetime.now(UTC)
    store = Store()
    quads = runs.quads(results[name], "x", runs.provenance.Occasion(now, now, headrace.__version__))
    store.extend(quads)
    (graph,) = {quad.graph_name.value for quad in quads if "/id/run/" in quad.graph_name.value}

    def ask(text: str) -> list[dict[str, dict[str, str]]]:
        answer: Any = store.query(text)
        rows: list[dict[str, dict[str, str]]] = json.loads(answer.serialize(format=QueryResultsFormat.JSON))["results"]["bindings"]
        return rows

    comparison = Comparison(ask, graph)
    comparison.document({key: value for key, value in document(results[name]).items() if key in BESIDE[name]})
    assert not comparison.differences, "\n".join(comparison.differences[:20])
    assert comparison.compared > 100
    others = {row["k"]["value"] for row in ask("PREFIX hr: <https://w3id.org/headrace/ns#> SELECT ?k { GRAPH ?g { ?n a hr:Requirement . ?n skos:prefLabel ?k } }"
                                              .replace("PREFIX", "PREFIX skos: <http://www.w3.org/2004/02/skos/core#> PREFIX", 1))}
    assert len(others) <= len({row["label"] for row in document(results[name])["refills"]})  # no phase's, no parent's among them


def test_words_come_first(results: dict[str, Result]) -> None:
    parent, batch, uncertain = (page(results[name]).verdict for name in PLANS)
    assert "runs 0.7922 now, needs 1.821, 2.298-fold" in parent
    assert "Of 2 phases, production binds" in batch and "What follows is that phase" in batch
    assert "in 90 % of cases; the capacities carry" in uncertain and "Knowing L-threonine exactly would narrow this most" in uncertain


def test_measured_rates_are_shown_before_sizing(results: dict[str, Result], desk: Desk) -> None:
    text = said(results["lysine-beside-its-parent"])
    assert 0 < text.index("Recoveries, measured on the parental strain") < text.index("Measured and reconciled rates") < text.index("Ledger of skeletons")
    assert "Yes: chi-square" in text and text.index("Requirement by group") < text.index("Against the parental strain")
    wrong = PLANS["lysine-beside-its-parent"].read_text().replace('"7.9 mmol/gDW/h"', '"11.5 mmol/gDW/h"')
    result = desk.refills(wrong)
    text = " ".join(said(result).split())
    assert "NO: chi-square" in text and "The reading of release of carbon dioxide" in text and "What would explain it" in text
    assert any("do not balance" in each["message"] for each in document(result)["findings"]) is False  # they are the parent's
    assert any("do not balance" in each for each in document(result)["parent"]["notes"])


def test_pages_in_every_format(results: dict[str, Result]) -> None:
    for result in results.values():
        assert all(len(line) <= 100 for line in said(result).splitlines())
        assert markdown.page(page(result)).count("|") > 100 and csvtext.table(page(result).main).startswith("refill,")
    text = said(results["lysine-by-fed-batch"])
    assert "Phases" in text and "whole plan" in text and "Totals of the plan" in text and "mmol/L/h" in text


@pytest.fixture
def command(desk: Desk, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> Callable[..., tuple[int, str, str]]:
    monkeypatch.setattr(shared, "desk", lambda: desk)

    def call(*arguments: object) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["headrace", *map(str, arguments)])
        with pytest.raises(SystemExit) as stopped:
            main.run()
        return int(stopped.value.code or 0), *capsys.readouterr()

    return call


def test_the_number_of_bands_may_be_left_out() -> None:
    assert filled(["a.toml", "--bands"]) == ["a.toml", "--bands", "1000"]
    assert filled(["--bands", "a.toml"]) == ["--bands", "1000", "a.toml"] and filled(["--bands", "20", "a"]) == ["--bands", "20", "a"]
    assert filled(["a", "--seed", "3"]) == ["a", "--seed", "3"]


def test_the_same_seed_prints_the_same(command: Callable[..., tuple[int, str, str]], tmp_path: Path) -> None:
    path = tmp_path / "scenario.toml"
    text = PLANS["threonine-with-what-is-uncertain"].read_text().partition("[uncertainty]")[0]
    path.write_text(text + '[uncertainty]\nfacts = "values"\ngrowth = ["0.08 /h", "0.16 /h"]\n')
    first, second, other = (command("refills", path, "--bands", 25, "--seed", seed, "--format", "json") for seed in (7, 7, 8))
    assert first[0] == 0 and first == second and first[1] != other[1]


def test_phases_from_the_command_line(command: Callable[..., tuple[int, str, str]]) -> None:
    path = PLANS["lysine-by-fed-batch"]
    for name in ("drains", "grows", "ceiling"):
        code, out, err = command(name, path)
        assert (code, out) == (2, "") and "--phase" in err and "growth, production" in err
        assert command(name, path, "--phase", "production")[0] == 0
    code, out, err = command("refills", path, "--phase", "growth")
    assert code == 0 and "Totals of the plan" not in out


def test_a_review_has_it_all(command: Callable[..., tuple[int, str, str]], tmp_path: Path) -> None:
    code, out, err = command("review", PLANS["lysine-by-fed-batch"], PLANS["lysine-beside-its-parent"], "-o", tmp_path)
    assert code == 0, err
    batch, parent = ((tmp_path / f"{name}.md").read_text() for name in ("lysine-by-fed-batch", "lysine-beside-its-parent"))
    assert "Requirement by group and phase" in batch and "Ceiling of" in batch and "Against the parental strain" in parent


def test_what_goes_wrong_is_told(command: Callable[..., tuple[int, str, str]], monkeypatch: pytest.MonkeyPatch) -> None:
    path = PLANS["threonine-with-what-is-uncertain"]
    code, out, err = command("refills", path, "--bands", 2)
    assert (code, out) == (2, "") and "--bands" in err and "20 to" in err
    monkeypatch.setitem(sys.modules, "scipy.stats", None)
    code, out, err = command("refills", path, "--bands", 20)
    assert (code, out) == (3, "") and "scipy" in err and 'pip install "headrace[depth]"' in err
    assert command("refills", path)[0] == 0  # everything else works without it


def test_progress_is_told_in_steps(results: dict[str, Result]) -> None:
    assert results
    counts = [words[1] for words in TOLD if words[0] == "samples"]
    assert counts == sorted(counts) and counts[-1] == 24 and {words[2] for words in TOLD if words[0] == "samples"} == {24}
    assert any(words[0] == "drivers" for words in TOLD)


def test_every_term_of_a_saved_plan_is_in_the_vocabulary(results: dict[str, Result]) -> None:
    known = Store()
    for path in sorted((ROOT / "graph_data" / "ontology").glob("*.ttl")):
        known.load(path=str(path))
    rows: Any = known.query("SELECT ?t { ?t <http://www.w3.org/2000/01/rdf-schema#comment> [] }")
    explained = {row["t"].value for row in rows}
    now = datetime.now(UTC)
    keys = set().union(*BESIDE.values()) | {"measured"}
    used = set()
    for result in results.values():
        for quad in runs.quads(result, "x", runs.provenance.Occasion(now, now, "0")):
            below = str(getattr(quad.subject, "value", "")).partition("/id/run/x/")[2].split("/")[0]
            if below in keys and quad.predicate.value.startswith("https://w3id.org/headrace/ns#"):
                used.add(quad.predicate.value)
    assert len(used) > 40 and not used - explained, sorted(used - explained)
