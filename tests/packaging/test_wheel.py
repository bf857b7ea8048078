"""The wheel carries plugins and facts, and answers exactly as the checkout does."""

from __future__ import annotations

import subprocess
import zipfile
from pathlib import Path

from tests.packaging.install import ROOT, SCENARIOS, Answers, Clean


def shipped() -> set[str]:
    """The files of the checkout that belong into the wheel, under their names there."""
    places = {
        "src/headrace/": "headrace/",
        "plugins/headrace_plugins/": "headrace_plugins/",
        "graph_data/": "headrace/graph_data/",
    }
    command = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    names = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True).stdout.splitlines()
    return {
        there + name.removeprefix(here)
        for name in names
        for here, there in places.items()
        if name.startswith(here) and (ROOT / name).is_file()
    }


def test_the_wheel_holds_code_plugins_and_facts_and_nothing_else(built: Path) -> None:
    with zipfile.ZipFile(built) as archive:
        names = {name for name in archive.namelist() if ".dist-info/" not in name}
    assert names == shipped()
    assert "headrace/py.typed" in names
    assert any(name.startswith("headrace/graph_data/hosts/") for name in names)


def test_checkout_wheel_and_runs_without_a_cache_give_the_same_json(answers: Answers) -> None:
    assert len(SCENARIOS) >= 6
    assert answers.checkout == answers.wheel
    assert answers.checkout == answers.wheel_without_cache
    assert answers.checkout == answers.checkout_without_cache
    assert {given["answer"] for given in answers.wheel.values()} == {"feasible", "infeasible"}


def test_the_installed_command_is_the_module(clean: Clean) -> None:
    command = clean.python.with_name("headrace")
    done = subprocess.run([command, "--version"], capture_output=True, text=True, check=True)
    assert done.stdout == clean.headrace("--version").out
    assert "0.1.0" in done.stdout
