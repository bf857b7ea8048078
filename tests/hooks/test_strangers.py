"""Strangers' plugins are found by reading entry-point files, as they stand now."""

from __future__ import annotations

import importlib.metadata
from pathlib import Path

from headrace.hooks.strangers import GROUP, Pointer, find


def distribution(folder: Path, name: str, text: str, suffix: str = "-1.0.dist-info") -> Path:
    made = folder / f"{name}{suffix}"
    made.mkdir(parents=True)
    (made / "METADATA").write_text(f"Metadata-Version: 2.1\nName: {name}\nVersion: 1.0\n")
    (made / "entry_points.txt").write_text(text)
    return made


ONE = "[console_scripts]\ncadaverine = other:main\n\n[headrace.plugins]\n# a remark\ncadaverine = my_drains.plugin:Cadaverine\n"


def test_pointers_are_read_from_the_group_alone(tmp_path: Path) -> None:
    distribution(tmp_path, "my_drains", ONE)
    distribution(tmp_path, "unrelated", "[console_scripts]\nx = y:z\n")
    assert find([str(tmp_path)]) == (Pointer("cadaverine", "my_drains.plugin", "Cadaverine", "my-drains"),)


def test_it_agrees_with_the_standard_library(tmp_path: Path) -> None:
    distribution(tmp_path, "my_drains", ONE)
    distribution(tmp_path, "More.Drains", "[headrace.plugins]\nb=more:B\na = more:A.Inner\n", ".egg-info")
    theirs = {
        (point.name, point.module, point.attr)
        for found in importlib.metadata.distributions(path=[str(tmp_path)])
        for point in found.entry_points
        if point.group.strip() == GROUP
    }
    assert {(item.name, item.module, item.attribute) for item in find([str(tmp_path)])} == theirs
    assert len(theirs) == 3


def test_the_first_folder_wins(tmp_path: Path) -> None:
    distribution(tmp_path / "a", "my_drains", ONE)
    distribution(tmp_path / "b", "my_drains", ONE.replace("Cadaverine", "Older"))
    assert [item.attribute for item in find([str(tmp_path / "a"), str(tmp_path / "b")])] == ["Cadaverine"]


def test_a_distribution_that_comes_or_goes_is_seen_at_once(tmp_path: Path) -> None:
    assert find([str(tmp_path)]) == ()
    made = distribution(tmp_path, "my_drains", ONE)
    assert len(find([str(tmp_path)])) == 1
    (made / "entry_points.txt").unlink()
    assert find([str(tmp_path)]) == ()


def test_folders_that_are_no_folders_are_passed_over(tmp_path: Path) -> None:
    archive = tmp_path / "archive.zip"
    archive.write_bytes(b"PK")
    assert find([str(archive), str(tmp_path / "missing")]) == ()
