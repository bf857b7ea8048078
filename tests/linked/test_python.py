"""Linked answers from Python: rdflib dataset, tables, notebook output."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from rdflib import Dataset, URIRef
from rdflib.namespace import RDF, SKOS

import headrace
from headrace.errors import InputError
from headrace.outputs.python import Answered, answered
from headrace.outputs.rdf import folder
from headrace.values.answers import Result
from headrace.values.facts import Facts

from . import sample

# rdflib 7 warns of its own inner calls on a dataset whose default graph is a union
pytestmark = [
    pytest.mark.filterwarnings("ignore:Dataset.default_context is deprecated:DeprecationWarning"),
    pytest.mark.xdist_group("linked-files"),  # one worker shares the service and its processes
]

HR = "https://w3id.org/headrace/ns#"
SCENARIO = {
    "title": "from Python",
    "host": "corynebacterium-glutamicum",
    "growth": "0.1 /h",
    "feed": [{"substrate": "glucose", "uptake": "6.0 mmol/gDW/h"}],
    "conditions": {"supplements": ["biotin"]},
    "outlet": [{"product": "L-lysine", "rate": "0.5 mmol/gDW/h"}],
}


@pytest.fixture(scope="module")
def everything(results: Path) -> Dataset:
    return headrace.graph(results)  # type: ignore[operator,no-any-return]


def test_the_graph_of_facts_and_results(everything: Dataset, results: Path) -> None:
    assert isinstance(everything, Dataset)
    assert (URIRef("https://w3id.org/headrace/id/compound/malate"), RDF.type, URIRef(HR + "Compound")) in everything
    runs = set(everything.subjects(RDF.type, URIRef(HR + "Run")))
    assert len(runs) == len(folder.stamps(results)) == 5
    bound = dict(everything.namespaces())
    assert str(bound["hr"]) == HR and str(bound["c"]).endswith("/compound/")
    rows = everything.query("SELECT ?n { ?h a hr:Host ; skos:prefLabel ?n }")
    assert len(list(rows)) == 4


def test_the_graph_without_results(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    facts = headrace.graph()  # type: ignore[operator]
    assert not list(facts.subjects(RDF.type, URIRef(HR + "Run")))
    with pytest.raises(InputError, match="no such folder"):
        headrace.graph(tmp_path / "none")  # type: ignore[operator]


def test_results_are_what_they_were_and_more() -> None:
    result = headrace.refills(SCENARIO)
    assert isinstance(result, Result) and isinstance(result, Answered)
    assert result.answer.answer == "feasible"  # type: ignore[union-attr]
    assert [headrace.drains(SCENARIO).kind, headrace.grows(SCENARIO).kind, headrace.ceiling(SCENARIO).kind] == [
        "drains",
        "grows",
        "ceiling",
    ]


@pytest.mark.parametrize("kind", sample.ALL)
def test_frames_hold_what_json_holds(kind: str, facts: Facts) -> None:
    result = answered(sample.ALL[kind](facts))
    document = result.document(rates=True)
    main = result.to_frame()
    assert len(main) >= 1 and main.attrs["units"]["rate"] == "mmol/gDW/h"
    for key, value in document.items():
        if isinstance(value, list) and value and isinstance(value[0], dict):
            frame = result.to_frame(key)
            assert json.loads(json.dumps(frame.astype(object).where(frame.notna(), None).to_dict("records"))) == value
    with pytest.raises(InputError, match="no table"):
        result.to_frame("nonsense")


def test_a_result_as_rdf(facts: Facts) -> None:
    data = answered(sample.refills(facts)).to_rdf(rates=True)
    (run,) = data.subjects(RDF.type, URIRef(HR + "Run"))
    assert str(data.value(run, SKOS.prefLabel)) == "HR-12, lysine on glucose: refills"
    assert [str(graph.identifier) for graph in data.graphs() if len(graph)] == [str(run)]
    text = data.serialize(format="turtle")
    assert "hr:netDrain" in text and "@prefix hr:" in text


def test_saving_from_python(facts: Facts, tmp_path: Path) -> None:
    path = answered(sample.drains(facts)).save(tmp_path / "runs", agent="the group")
    assert path.parent.name == "runs" and folder.read(path.parent, path.stem)


@pytest.mark.parametrize("kind", sample.ALL)
def test_a_notebook_shows_tables(kind: str, facts: Facts) -> None:
    shown = answered(sample.ALL[kind](facts))._repr_html_()
    assert shown.count("<table>") == shown.count("</table>") and "<script" not in shown
    assert "mmol/gDW/h" in shown or kind in ("grows", "ceiling")


def test_importing_headrace_is_cheap() -> None:
    import subprocess
    import sys

    code = "import sys, headrace; print([m for m in ('rdflib', 'pandas', 'numpy', 'pyoxigraph', 'waitress') if m in sys.modules])"
    assert subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout.strip() == "[]"
