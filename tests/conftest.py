"""What all tests share: the facts, built once into a cache of their own, and the minutes that each group takes."""

from __future__ import annotations

import os
from collections import defaultdict
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import settings

import headrace
from headrace.values.facts import Facts

settings.register_profile("repeatable", deadline=None, derandomize=True, print_blob=False)
settings.load_profile("repeatable")

ROOT = Path(__file__).resolve().parents[1]


@pytest.fixture(scope="session", autouse=True)
def cache_of_the_tests(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Path]:
    """Built facts go to a folder of the test run, never to the user's; parallel workers share it."""
    base = tmp_path_factory.getbasetemp()
    folder = (base.parent if "PYTEST_XDIST_WORKER" in os.environ else base) / "headrace-cache"
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("HEADRACE_CACHE", str(folder))
        patch.delenv("HEADRACE_NO_CACHE", raising=False)
        yield folder


@pytest.fixture(scope="session")
def root() -> Path:
    """The top folder of the checkout."""
    return ROOT


@pytest.fixture(scope="session")
def facts(cache_of_the_tests: Path) -> Facts:
    """The shipped facts."""
    return headrace.load()


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Minutes and tests per folder below tests/, summed over workers."""
    seconds: dict[str, float] = defaultdict(float)
    counts: dict[str, int] = defaultdict(int)
    for reports in terminalreporter.stats.values():
        for report in reports:
            if isinstance(report, pytest.TestReport):
                parts = report.nodeid.split("::")[0].split("/")
                group = parts[1] if len(parts) > 2 else parts[0]
                seconds[group] += report.duration
                counts[group] += report.when == "call"
    if seconds:
        terminalreporter.write_sep("-", "minutes by group of tests")
    for group in sorted(seconds, key=lambda name: -seconds[name]):
        terminalreporter.write_line(f"{seconds[group] / 60:7.2f} min {counts[group]:6d} tests  {group}")
