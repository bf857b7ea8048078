"""A clean virtual environment with the wheel in it, made once; then a stranger's plugin beside it."""

from __future__ import annotations

import sys
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest

from tests.packaging.install import CHECKOUT, ROOT, SCENARIOS, Answers, Clean, answer, wheel


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """One worker takes all of this folder, so that the environment is made once."""
    for item in items:
        if Path(__file__).parent in item.path.parents:
            item.add_marker(pytest.mark.xdist_group("packaging"))


@pytest.fixture(scope="session")
def built(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Headrace's wheel."""
    return wheel(ROOT, tmp_path_factory.mktemp("wheel"))


@pytest.fixture(scope="session")
def clean(built: Path, tmp_path_factory: pytest.TempPathFactory) -> Clean:
    """An environment with the wheel and what it depends on."""
    made = Clean(tmp_path_factory.mktemp("clean") / "venv")
    made.install(built)
    return made


@pytest.fixture(scope="session")
def answers(clean: Clean) -> Answers:
    """Made before a stranger's plugin changes the version of the facts."""
    without = {"HEADRACE_NO_CACHE": "1"}

    def all_of(python: str | Path, environment: Mapping[str, str]) -> dict[str, Any]:
        return {name: answer(python, name, environment) for name in SCENARIOS}

    return Answers(
        checkout=all_of(sys.executable, CHECKOUT),
        wheel=all_of(clean.python, {}),
        wheel_without_cache=all_of(clean.python, without),
        checkout_without_cache=all_of(sys.executable, CHECKOUT | without),
    )


@pytest.fixture(scope="session")
def beside_a_stranger(clean: Clean, answers: Answers, tmp_path_factory: pytest.TempPathFactory) -> Clean:
    """The same environment after the example plugin was built as its own wheel and installed."""
    clean.install("pytest", "headrace[check]", wheel(ROOT / "examples" / "plugin", tmp_path_factory.mktemp("stranger")))
    return clean
