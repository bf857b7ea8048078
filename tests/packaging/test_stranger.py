"""A stranger's plugin, built as its own wheel with its own facts and installed beside Headrace."""

from __future__ import annotations

import json
from pathlib import Path

from tests.packaging.install import ROOT, SCENARIOS, Answers, Clean, answer, must

PLUGIN = ROOT / "examples" / "plugin"
EXAMPLE = PLUGIN / "src" / "hydroxyglutarate" / "example.toml"


def test_it_is_listed_with_its_origin_and_hooks(beside_a_stranger: Clean) -> None:
    listed = json.loads(beside_a_stranger.headrace("plugins", "--format", "json").out)["plugins"]
    (found,) = [plugin for plugin in listed if plugin["name"] == "hydroxyglutarate"]
    assert (found["origin"], found["hooks"]) == ("headrace-hydroxyglutarate", ["facts", "drains"])
    assert "hydroxyglutarate" in beside_a_stranger.headrace("plugins").out


def test_its_outlet_is_answered(beside_a_stranger: Clean) -> None:
    done = beside_a_stranger.headrace("refills", EXAMPLE, "--format", "json")
    assert done.code == 0, done.err
    drained = [row for row in json.loads(done.out)["drains"] if "hydroxyglutarate" in row["outlet"]]
    rounded = [(row["compound"], round(row["net"], 9), round(row["skeletons"], 9)) for row in drained]
    assert rounded == [("oxoglutarate", 1.5, 1.5)]


def test_it_passes_the_conformance_suite_where_it_is_installed(beside_a_stranger: Clean) -> None:
    said = must([beside_a_stranger.python, "-m", "pytest", "-q", "-p", "no:cacheprovider", "-c", "/dev/null", PLUGIN / "tests"])
    assert "2 passed" in said


def test_it_changes_the_version_of_the_facts_and_no_other_answer(beside_a_stranger: Clean, answers: Answers) -> None:
    name = SCENARIOS[0]
    before, after = dict(answers.wheel[name]), dict(answer(beside_a_stranger.python, name, {}))
    assert before.pop("versions")["facts"] != after.pop("versions")["facts"]
    assert after.pop("plugins") == sorted([*before.pop("plugins"), "hydroxyglutarate"])
    assert before == after


def test_a_broken_stranger_takes_nothing_down(beside_a_stranger: Clean, answers: Answers, tmp_path: Path) -> None:
    (tmp_path / "broken.py").write_text("raise RuntimeError('no luck')\n")
    metadata = tmp_path / "broken-1.0.dist-info"
    metadata.mkdir()
    (metadata / "entry_points.txt").write_text("[headrace.plugins]\nbroken = broken:Broken\n")
    there = {"PYTHONPATH": str(tmp_path)}
    done = beside_a_stranger.headrace("refills", SCENARIOS[0], "--format", "json", **there)
    found = json.loads(done.out)
    assert found["ledger"] == answers.wheel[SCENARIOS[0]]["ledger"]
    message = "plugin broken of broken is not used: importing it failed: RuntimeError: no luck"
    assert message in [finding["message"] for finding in found["findings"]]
    assert "no luck" in beside_a_stranger.headrace("plugins", **there).out
    traced = beside_a_stranger.headrace("drains", SCENARIOS[0], HEADRACE_TRACE="1")
    assert "headrace: drains of " in traced.err
