"""The shipped facts: no fault, one meaning each, and a cached reading that is quick and the same."""

import time
from pathlib import Path

import pytest

from headrace import paths
from headrace.graph import cache, load
from headrace.graph.check import check
from headrace.graph.export import dataset
from headrace.graph.files import fact_files, version
from headrace.values.facts import Facts


@pytest.fixture(scope="module")
def built() -> Facts:
    return load(cache=False)


def test_the_shipped_facts_have_no_fault() -> None:
    assert [f"{fault.rule} {fault.file} {fault.node}: {fault.message}" for fault in check()] == []


def test_the_four_hosts_are_there(built: Facts) -> None:
    assert len(built.hosts) >= 4 and len(built.compounds) >= 337 and len(built.reactions) >= 370
    for host in built.hosts.values():
        assert host.reactions and host.composition and host.expressions and host.quantities, host.slug


def test_the_cache_gives_what_was_built(built: Facts, tmp_path: Path) -> None:
    assert cache.write(tmp_path, built)
    assert cache.read(tmp_path, built.version) == built


def test_reading_from_the_cache_is_much_quicker_than_building(built: Facts, tmp_path: Path) -> None:
    cache.write(tmp_path, built)

    def read() -> float:
        start = time.perf_counter()
        files = fact_files([paths.facts_folder()])
        assert cache.read(tmp_path, version(files)) is not None
        return time.perf_counter() - start

    start = time.perf_counter()
    load(cache=False)
    building = time.perf_counter() - start
    assert min(read() for _ in range(5)) < building / 4


def test_derived_statements_of_the_shipped_facts(built: Facts) -> None:
    said = dataset(derived=True)
    assert len(said) > 2 * sum(len(host.reactions) for host in built.hosts.values())
