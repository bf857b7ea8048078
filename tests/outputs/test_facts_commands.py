"""`headrace facts ...`, `plugins`, `new` and --version through the entry point, on the shipped facts."""

from __future__ import annotations

import json
import sys
import tomllib
from collections.abc import Callable
from pathlib import Path

import pytest

from headrace.graph import Fault, check
from headrace.outputs.cli import main, shared
from headrace.run import Desk
from headrace.values.facts import Facts

Run = Callable[..., tuple[int, str, str]]


@pytest.fixture(scope="module")
def one_desk() -> Desk:
    return Desk()


@pytest.fixture
def run(one_desk: Desk, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> Run:
    monkeypatch.setattr(shared, "desk", lambda: one_desk)
    monkeypatch.setattr("headrace.outputs.cli.facts.desk", lambda: one_desk)
    monkeypatch.setattr("headrace.outputs.cli.new.desk", lambda: one_desk)

    def call(*arguments: str) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["headrace", *arguments])
        with pytest.raises(SystemExit) as stopped:
            main.run()
        out, err = capsys.readouterr()
        return int(stopped.value.code or 0), out, err

    return call


def test_the_shipped_facts_hold(run: Run) -> None:
    code, out, err = run("facts", "check")
    assert (code, err) == (0, ""), out
    assert "The facts hold." in out and "nothing from nothing" in out


def test_a_fault_is_exit_1_and_says_what_disagrees(run: Run, monkeypatch: pytest.MonkeyPatch) -> None:
    fault = Fault("balance", "reaction/x", "C is off by 1", "reactions/x.ttl")
    monkeypatch.setattr(check, "check", lambda **given: [fault])
    code, out, _ = run("facts", "check")
    assert code == 1 and "C is off by 1" in out and "1 fault" in out
    code, out, _ = run("facts", "check", "--format", "json")
    assert code == 1
    assert json.loads(out)["faults"] == [{"rule": "balance", "node": "reaction/x", "message": "C is off by 1", "file": "reactions/x.ttl"}]


def test_show_prints_an_entity_in_every_format(run: Run) -> None:
    assert "C4H2O5" in run("facts", "show", "oxaloacetate")[1]
    assert run("facts", "show", "oxaloacetate", "--format", "md")[1].startswith("# oxaloacetate")
    assert run("facts", "show", "oxaloacetate", "--format", "csv")[1].startswith("fact,value\n")
    document = json.loads(run("facts", "show", "oxaloacetate", "--format", "json")[1])
    assert document["facts"][0]["formula"] == {"C": 4, "H": 2, "O": 5}


def test_show_of_a_kind_lists_all(run: Run, facts: Facts) -> None:
    document = json.loads(run("facts", "show", "outlets", "--format", "json")[1])
    assert {row["slug"] for row in document["facts"]} == set(facts.outlets)


def test_show_of_an_unknown_name_offers_the_nearest(run: Run) -> None:
    code, out, err = run("facts", "show", "oxaloacetat")
    assert (code, out) == (2, "")
    assert "unknown name 'oxaloacetat'" in err and "nearest: " in err and "oxaloacetate" in err


def test_sources_are_listed_with_counts(run: Run, facts: Facts) -> None:
    document = json.loads(run("facts", "sources", "--format", "json")[1])
    assert {row["slug"] for row in document["sources"]} >= set(facts.sources)
    assert "citations by reading" in run("facts", "sources")[1]


@pytest.mark.parametrize(("format", "start"), [("turtle", "@prefix"), ("nquads", ("<", "_:")), ("jsonld", "[")])
def test_export_writes_the_dataset(run: Run, format: str, start: str | tuple[str, ...]) -> None:
    code, out, err = run("facts", "export", "--format", format)
    assert (code, err) == (0, "") and out.startswith(start) and "oxaloacetate" in out


def test_version_names_program_and_facts(run: Run, facts: Facts) -> None:
    code, out, _ = run("--version")
    assert code == 0 and out.startswith("headrace ") and facts.version in out


def test_plugins_lists_what_drains_refills_checks_and_reports(run: Run) -> None:
    document = json.loads(run("plugins", "--format", "json")[1])
    hooks = {hook for entry in document["plugins"] for hook in entry["hooks"]}
    assert {"drains", "refills", "checks", "report"} <= hooks and not document["refused"]


def test_new_scenario_writes_a_file_once_that_then_answers(run: Run, facts: Facts, tmp_path: Path) -> None:
    host, outlet = sorted(facts.hosts)[0], sorted(facts.outlets)[0]
    arguments = ("new", "scenario", "--host", host, "--feed", "glucose", "--outlet", outlet)
    assert tomllib.loads(run(*arguments)[1])["host"] == host
    path = tmp_path / "s.toml"
    assert run(*arguments, "-o", str(path))[:2] == (0, f"{path}\n")
    code, _, err = run(*arguments, "-o", str(path))
    assert code == 2 and "is there already" in err
    assert run("drains", str(path))[0] == 0


def test_new_plugin_is_refused_by_name(run: Run) -> None:
    code, out, err = run("new", "plugin", "--anything", "x")
    assert (code, out) == (2, "") and "headrace new plugin is not built yet" in err
