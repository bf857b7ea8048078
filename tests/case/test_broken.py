"""Every broken scenario gets one clear message with file, line and key, against the shipped facts."""

from __future__ import annotations

from pathlib import Path

import pytest

from headrace import case
from headrace.errors import InputError
from headrace.values.facts import Facts

from ..broken_scenarios import HERE, Broken, all_broken


@pytest.mark.parametrize("broken", all_broken(), ids=lambda broken: broken.name)
def test_one_clear_message(broken: Broken, facts: Facts, tmp_path: Path) -> None:
    path = broken.path(tmp_path)
    with pytest.raises(InputError) as caught:
        case.resolve(case.read(path), facts)
    error = caught.value
    assert broken.says in error.message
    assert (error.file, error.key, error.line) == (str(path), broken.key, broken.line)
    if broken.near:
        assert broken.near in error.near
    assert len(str(error)) < 1500 and str(error).startswith(str(path))


def test_every_file_has_its_expectation() -> None:
    files = {path.name for path in HERE.iterdir() if path.suffix in (".toml", ".json")} - {"expected.toml"}
    assert files | {"missing.toml", "too-large.toml"} == {broken.name for broken in all_broken()}
    assert len(files) >= 45
