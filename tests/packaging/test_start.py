"""The start-up benchmark: a whole command against a Python that only imports three general libraries."""

from __future__ import annotations

import re
import sys
from pathlib import Path

import pytest

from headrace import benchmark
from tests.packaging.install import CHECKOUT, SCENARIOS, must, run


def test_a_whole_command_takes_at_most_one_and_a_half_times_the_yardstick() -> None:
    said = must([sys.executable, "-m", "headrace.benchmark", "start", SCENARIOS[0], "--runs", "5", "--at-most", "1.5"], CHECKOUT)
    assert re.search(r"[0-9.]+ ratio \(median of 5 rounds\)", said)


def test_a_scenario_that_fails_is_not_timed(tmp_path: Path) -> None:
    done = run([sys.executable, "-m", "headrace.benchmark", "start", tmp_path / "missing.toml", "--runs", "1"], CHECKOUT)
    assert done.code == 2
    assert "missing.toml" in done.err


def test_a_ratio_above_the_limit_is_said_by_the_exit_code(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    monkeypatch.setattr(benchmark, "start", lambda scenario, runs: benchmark.Timing((3.0, 2.0, 9.0), (1.0, 1.0, 3.0)))
    assert benchmark.main(["start", "any.toml", "--runs", "3"]) == 0
    assert "3.00 ratio (median of 3 rounds)" in capsys.readouterr().out
    assert benchmark.main(["start", "any.toml", "--runs", "3", "--at-most", "2.9"]) == 1
