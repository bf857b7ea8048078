"""On every example, answers by SPARQL over HTTP equal the command's JSON, value for value."""

from __future__ import annotations

import json
from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path

import pytest

import headrace
from headrace.outputs import jsonout
from headrace.outputs.query import wire
from headrace.outputs.query.pool import Pool, Queries
from headrace.outputs.rdf import folder, run
from headrace.run import Desk

from .equal import Comparison

pytestmark = pytest.mark.xdist_group("linked-files")  # one worker shares what is started for these tests

ROOT = Path(__file__).resolve().parents[2]
SCENARIOS = sorted((ROOT / "examples" / "scenarios").glob("*.toml"))
QUERIES = sorted((ROOT / "examples" / "queries").glob("*.rq"))


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


@pytest.fixture(scope="module")
def saved(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("examples")


@pytest.fixture(scope="module")
def engine(saved: Path) -> Iterator[Queries]:
    with Pool(wire.Settings(results=str(saved)), workers=1) as pool:
        yield Queries(pool)


def test_there_are_examples() -> None:
    assert len(SCENARIOS) >= 10 and len(QUERIES) >= 3


@pytest.mark.parametrize("path", SCENARIOS, ids=lambda path: path.stem)
def test_sparql_equals_json(path: Path, desk: Desk, saved: Path, engine: Queries) -> None:
    scenario = desk.scenario(path)
    results = [desk.drains(scenario), desk.refills(scenario), desk.grows(scenario)]
    outlets = dict.fromkeys(demand.outlet for demand in results[0].case.demands)
    results += [desk.ceiling(scenario, outlet) for outlet in outlets]
    for result in results:
        made = run.make(result, datetime.now(UTC), rates=True)
        folder.save(saved, made)
        document = json.loads(jsonout.text(jsonout.document(result, headrace.__version__, rates=True)))
        comparison = Comparison(lambda text: json.loads(engine.ask(wire.Request(text)).body)["results"]["bindings"], made.iri)
        comparison.document(document)
        assert not comparison.differences, "\n".join(comparison.differences[:20])


@pytest.mark.parametrize("path", QUERIES, ids=lambda path: path.stem)
def test_example_queries_answer(path: Path, engine: Queries, desk: Desk, saved: Path) -> None:
    if not folder.stamps(saved):
        folder.save(saved, run.make(desk.refills(SCENARIOS[0]), datetime.now(UTC)))
    text = path.read_text(encoding="utf-8")
    assert text.startswith("# ")
    reply = engine.ask(wire.Request(text))
    assert reply.status == wire.OK, reply.message
    assert b"http" in reply.body
