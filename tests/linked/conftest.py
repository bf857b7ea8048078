"""Saved samples and a pool of workers that the tests of linked answers share."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path

import pytest

from headrace.outputs.query import wire
from headrace.outputs.query.pool import Pool
from headrace.outputs.rdf import folder, run
from headrace.outputs.service.serve import Plan
from headrace.outputs.service.site import Limits
from headrace.values.facts import Facts

from . import sample
from .service import Client, served


@pytest.fixture(scope="session")
def results(facts: Facts, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A results folder with one run of each kind."""
    where = tmp_path_factory.mktemp("results")
    for make in sample.ALL.values():
        folder.save(where, run.make(make(facts), datetime(2026, 1, 2, tzinfo=UTC), rates=True))
    return where


@pytest.fixture(scope="session")
def pool(results: Path) -> Iterator[Pool]:
    """Two workers over facts and samples."""
    with Pool(wire.Settings(results=str(results)), workers=2) as workers:
        yield workers


@pytest.fixture(scope="session")
def client(results: Path) -> Iterator[Client]:
    """A service over facts and samples, with short limits."""
    limits = Limits(seconds=1.0, result=2_000_000, request=2_000_000)
    with served(Plan(port=0, results=results, limits=limits, workers=2, memory=500_000_000)) as here:
        yield here
