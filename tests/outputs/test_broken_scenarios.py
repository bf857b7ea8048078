"""Every broken scenario, given to the command line: one message with file, line and key, exit 2, nothing written."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from headrace.outputs.cli import main, shared
from headrace.run import Desk

from ..broken_scenarios import Broken, all_broken

BROKEN = all_broken()


@pytest.fixture(scope="module")
def one_desk() -> Desk:
    """Facts and plugins, loaded once for all files."""
    return Desk()


@pytest.fixture
def run(
    one_desk: Desk, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Callable[..., tuple[int, str, str]]:
    monkeypatch.setattr(shared, "desk", lambda: one_desk)

    def call(*arguments: str) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["headrace", *arguments])
        with pytest.raises(SystemExit) as stopped:
            main.run()
        out, err = capsys.readouterr()
        return int(stopped.value.code or 0), out, err

    return call


def check(broken: Broken, path: Path, code: int, out: str, err: str) -> None:
    assert (code, out) == (2, "")
    assert "Traceback" not in err and "this is a bug" not in err
    first = err.splitlines()[0]
    place = ", ".join(str(part) for part in (path, f"line {broken.line}" if broken.line else "", broken.key) if part)
    assert first.startswith(f"headrace: {place}: ")
    assert broken.says in err
    assert broken.near in err
    assert len(err.splitlines()) <= 6


@pytest.mark.parametrize("broken", BROKEN, ids=lambda broken: broken.name)
def test_a_broken_scenario_is_told_and_nothing_is_written(
    broken: Broken, run: Callable[..., tuple[int, str, str]], tmp_path: Path
) -> None:
    path = broken.path(tmp_path)
    before = sorted(tmp_path.iterdir())
    check(broken, path, *run("review", str(path), "-o", str(tmp_path / "review")))
    assert sorted(tmp_path.iterdir()) == before


@pytest.mark.parametrize("command", ["drains", "refills", "ceiling", "grows"])
def test_every_command_tells_it_alike(command: str, run: Callable[..., tuple[int, str, str]], tmp_path: Path) -> None:
    broken = next(each for each in BROKEN if each.name == "uptake-in-mmol.toml")
    path = broken.path(tmp_path)
    check(broken, path, *run(command, str(path)))


@pytest.mark.parametrize("name", ["host-unknown.toml", "not-utf-8.toml", "missing.toml", "folder.toml"])
def test_as_a_process_of_its_own(name: str, tmp_path: Path) -> None:
    broken = next(each for each in BROKEN if each.name == name)
    path = broken.path(tmp_path)
    command = [sys.executable, "-m", "headrace.outputs.cli.main", "refills", str(path)]
    found = subprocess.run(command, capture_output=True, text=True, timeout=120)
    check(broken, path, found.returncode, found.stdout, found.stderr)


def test_one_broken_scenario_among_good_ones_stops_the_review(
    run: Callable[..., tuple[int, str, str]], root: Path, tmp_path: Path
) -> None:
    good = sorted((root / "examples" / "scenarios").glob("*.toml"))[:1]
    broken = next(each for each in BROKEN if each.name == "host-unknown.toml").path(tmp_path)
    code, out, err = run("review", *map(str, good), str(broken), "-o", str(tmp_path / "review"))
    assert (code, out) == (2, "") and "host" in err
    assert not (tmp_path / "review").exists()
