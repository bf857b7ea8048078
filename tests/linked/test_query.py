"""Workers and limits, named queries, the dataset that keeps up with its folder, and `headrace query`."""

from __future__ import annotations

import csv
import io
import json
import os
import signal
import socket
import subprocess
import sys
import threading
import time
from datetime import UTC, datetime
from pathlib import Path

import pytest

from headrace.errors import InputError
from headrace.outputs.query import named, wire
from headrace.outputs.query.dataset import Dataset
from headrace.outputs.query.pool import Pool, Queries
from headrace.outputs.query.work import QueryWork, syntax
from headrace.outputs.rdf import folder, run
from headrace.outputs.service import bench
from headrace.values.facts import Facts

from . import sample

pytestmark = pytest.mark.xdist_group("linked-files")  # one worker shares what is started for these tests

COUNT = "SELECT (COUNT(*) AS ?n) { ?s ?p ?o }"
ENDLESS = "SELECT (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f }"


def solved(reply: wire.Reply) -> list[dict[str, dict[str, str]]]:
    assert reply.status == wire.OK, reply.message
    return json.loads(reply.body)["results"]["bindings"]  # type: ignore[no-any-return]


def test_a_query_is_stopped_at_its_limit_and_its_worker_replaced(pool: Pool) -> None:
    before = pool.replaced
    started = time.monotonic()
    reply = Queries(pool, seconds=0.5).ask(wire.Request(ENDLESS))
    took = time.monotonic() - started
    assert (reply.status, reply.body) == (wire.SLOW, b"")
    assert 0.45 < took < 1.5
    assert pool.replaced == before + 1
    assert solved(Queries(pool).ask(wire.Request(COUNT)))


def test_a_result_over_its_limit_is_no_result(pool: Pool) -> None:
    queries = Queries(pool, largest=10_000)
    for text in ("SELECT * { ?s ?p ?o }", "CONSTRUCT { ?s ?p ?o } WHERE { ?s ?p ?o }"):
        reply = queries.ask(wire.Request(text))
        assert (reply.status, reply.body) == (wire.LARGE, b"")
    assert queries.ask(wire.Request(COUNT)).status == wire.OK


def test_memory_is_limited(results: Path) -> None:
    with Pool(wire.Settings(results=str(results), memory=150_000_000), workers=1) as pool:
        reply = Queries(pool, seconds=20).ask(wire.Request("SELECT * { ?a ?b ?c . ?d ?e ?f } ORDER BY ?c ?f LIMIT 5"))
        assert reply.status == wire.BROKEN
        assert Queries(pool).ask(wire.Request(COUNT)).status == wire.OK


def test_a_killed_worker_is_replaced(results: Path) -> None:
    with Pool(wire.Settings(results=str(results)), workers=1) as pool:
        queries = Queries(pool)
        assert queries.ask(wire.Request(COUNT)).status == wire.OK
        worker = pool._free.get()
        assert worker is not None
        os.kill(worker.process, signal.SIGKILL)
        pool._free.put(worker)
        assert queries.ask(wire.Request(COUNT)).status == wire.BROKEN
        assert queries.ask(wire.Request(COUNT)).status == wire.OK


def test_a_killed_nursery_is_replaced(results: Path) -> None:
    with Pool(wire.Settings(results=str(results)), workers=1) as pool:
        assert pool._nursery is not None
        pool._nursery.kill()
        pool._nursery.wait()
        assert Queries(pool).ask(wire.Request(COUNT)).status == wire.OK


def test_nothing_outlives_its_pool(results: Path) -> None:
    with Pool(wire.Settings(results=str(results)), workers=2) as pool:
        asking = threading.Thread(target=lambda: Queries(pool, seconds=30).ask(wire.Request(ENDLESS)))
        asking.start()
        assert pool._nursery is not None
        nursery = pool._nursery.pid
        time.sleep(0.3)
        (child,) = Path(f"/proc/{nursery}/task/{nursery}/children").read_text().split()
    asking.join(5)
    assert not asking.is_alive()
    assert not Path(f"/proc/{child}").exists() and not Path(f"/proc/{nursery}").exists()


def test_the_doors_are_closed_even_behind_the_guard(results: Path) -> None:
    """A trusted request is not guarded; the process itself can open no connection and no file."""
    work = QueryWork(Dataset(results))
    with socket.create_server(("127.0.0.1", 0)) as listener:
        listener.settimeout(0.2)
        port = listener.getsockname()[1]
        text = f"SELECT * {{ SERVICE <http://127.0.0.1:{port}/> {{ ?s ?p ?o }} }}"
        reply = wire.encode(wire.Request(text, trusted=True))
        answer = work.handle(reply)
        assert b"bad" in answer
        with pytest.raises(TimeoutError):
            listener.accept()
    assert b"ok" in work.handle(wire.encode(wire.Request("ASK {}")))


def test_new_and_deleted_runs_are_seen(facts: Facts, tmp_path: Path) -> None:
    data = Dataset(tmp_path)
    data.sync()
    before = len(data.store)
    made = run.make(sample.refills(facts), datetime.now(UTC))
    path = folder.save(tmp_path, made)
    data.sync()
    assert made.iri in data.graphs() and len(data.store) > before
    path.unlink()
    data.sync()
    assert made.iri not in data.graphs() and len(data.store) == before


def test_a_folder_may_come_later(facts: Facts, tmp_path: Path) -> None:
    data = Dataset(tmp_path / "later")
    data.sync()
    folder.save(tmp_path / "later", run.make(sample.drains(facts), datetime.now(UTC)))
    data.sync()
    assert len(data.known) == 1


def test_a_broken_file_is_named_and_the_rest_answers(facts: Facts, tmp_path: Path) -> None:
    folder.save(tmp_path, run.make(sample.drains(facts), datetime.now(UTC)))
    (tmp_path / "broken.trig").write_text("<a> <b")
    work = QueryWork(Dataset(tmp_path))
    import msgspec

    reply = msgspec.msgpack.decode(work.handle(wire.encode(wire.Request("ASK { ?r a hr:Run }"))), type=wire.Reply)
    assert json.loads(reply.body)["boolean"] is True
    assert len(reply.faults) == 1 and "broken.trig" in reply.faults[0]


def test_unions_hold_each_statement_once(results: Path) -> None:
    data = Dataset(results)
    data.sync()
    seen = {(quad.subject, quad.predicate, quad.object) for quad in data.store}
    assert len(seen) == len(data.store)


@pytest.mark.parametrize("name", named.every())
def test_each_named_query_answers(name: str, pool: Pool) -> None:
    query = named.every()[name]
    assert query.summary.endswith(".") and len(query.summary) < 110
    reply = Queries(pool).ask(wire.Request(query.text))
    rows = solved(reply)
    assert rows or name == "stale-designs"
    for parameter in query.parameters:
        assert query.values(parameter).search(query.text)


def test_there_are_many_named_queries() -> None:
    assert len(named.every()) >= 15


def test_parameters_are_names_of_facts(facts: Facts, pool: Pool) -> None:
    query = named.find("what-drains")
    text = query.with_values({"compound": "2-oxoglutarate"}, facts)
    rows = solved(Queries(pool).ask(wire.Request(text)))
    assert {row["outlet"]["value"] for row in rows} == {"biomass"}
    with pytest.raises(InputError, match="unknown compound"):
        query.with_values({"compound": "2-oxogluterate}"}, facts)
    with pytest.raises(InputError, match="no parameter"):
        query.with_values({"host": "x"}, facts)


def test_engine_messages_are_short() -> None:
    assert syntax("error at 1:16: expected one of X, Y") == "line 1, column 16: not SPARQL 1.1; expected one of X, Y"
    assert len(syntax("error at 1:16: expected one of " + "'abc', " * 200)) < 250


def command(*words: str, here: Path, code: int = 0) -> subprocess.CompletedProcess[str]:
    done = subprocess.run([sys.executable, "-m", "headrace", "query", *words], cwd=here, capture_output=True, text=True)
    assert done.returncode == code, done.stderr
    return done


def test_formats_of_the_command(results: Path, tmp_path: Path) -> None:
    where = ("--results", str(results))
    assert "L-lysine" in command("what-drains", *where, here=tmp_path).stdout
    rows = list(csv.DictReader(io.StringIO(command("what-drains", *where, "--format", "csv", here=tmp_path).stdout)))
    answer = json.loads(command("what-drains", *where, "--format", "json", here=tmp_path).stdout)
    assert [float(row["net"]) for row in rows] == [float(row["net"]["value"]) for row in answer["results"]["bindings"]]
    file = tmp_path / "own.rq"
    file.write_text("CONSTRUCT { ?h a hr:Host } WHERE { ?h a hr:Host }")
    assert "@prefix hr:" in command(str(file), "--format", "turtle", here=tmp_path).stdout


def test_faults_of_the_command(tmp_path: Path) -> None:
    assert "nearest: what-drains" in command("what-drain", here=tmp_path, code=2).stderr
    assert "SERVICE is refused" in command("--text", "ASK { SERVICE <http://x/> {} }", here=tmp_path, code=2).stderr
    assert "one query is asked" in command(here=tmp_path, code=2).stderr
    assert "stopped after 0.3 seconds" in command("--text", ENDLESS, "--time-limit", "0.3", here=tmp_path, code=2).stderr
    assert "no answer as turtle" in command("--text", "ASK {}", "--format", "turtle", here=tmp_path, code=2).stderr
    assert "no such folder" in command("designs", "--results", "nowhere", here=tmp_path, code=2).stderr


def test_the_list_of_queries(tmp_path: Path) -> None:
    said = command("--list", here=tmp_path).stdout
    assert all(name in said for name in named.every())


def test_the_benchmark_measures_six_queries(results: Path) -> None:
    report = bench.measure(results, seconds=0.05)
    assert len(report.rates) == 6 and report.first > 0
    assert all(rate.http > 0 and rate.engine > 0 for rate in report.rates)
    assert bench.text(report).count("\n") == 9
