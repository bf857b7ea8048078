"""Files of a review: whole or not at all, and never over somebody else's."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from headrace.errors import InputError
from headrace.outputs import files
from headrace.values.answers import Document

NOTE = Document("note.md", "text/markdown", "first – é\n")
TABLE = Document("table.csv", "text/csv", "a,b\n1,2\n")


def names(folder: Path) -> list[str]:
    return sorted(path.name for path in folder.iterdir())


def test_documents_are_written_with_a_manifest(tmp_path: Path) -> None:
    folder = tmp_path / "new" / "review"
    paths = files.write(folder, [NOTE, TABLE])
    assert paths == (folder / "note.md", folder / "table.csv")
    assert (folder / "note.md").read_bytes() == NOTE.text.encode()
    assert names(folder) == [files.MANIFEST, "note.md", "table.csv"]


def test_what_headrace_wrote_and_nobody_changed_is_replaced(tmp_path: Path) -> None:
    files.write(tmp_path, [NOTE, TABLE])
    files.write(tmp_path, [Document("note.md", "text/markdown", "second\n")])
    assert (tmp_path / "note.md").read_text() == "second\n"
    files.write(tmp_path, [TABLE])


@pytest.mark.parametrize(("own", "reason"), [(True, "was changed since"), (False, "was not written by Headrace")])
def test_a_file_that_would_be_lost_is_refused_and_nothing_is_written(tmp_path: Path, own: bool, reason: str) -> None:
    if own:
        files.write(tmp_path, [TABLE])
    (tmp_path / "table.csv").write_text("mine")
    before = names(tmp_path)
    with pytest.raises(InputError, match=reason):
        files.write(tmp_path, [NOTE, TABLE])
    assert names(tmp_path) == before
    assert (tmp_path / "table.csv").read_text() == "mine"


def test_force_replaces_it(tmp_path: Path) -> None:
    (tmp_path / "table.csv").write_text("mine")
    files.write(tmp_path, [TABLE], force=True)
    assert (tmp_path / "table.csv").read_text() == TABLE.text


def test_a_file_where_the_folder_should_be_is_refused(tmp_path: Path) -> None:
    (tmp_path / "taken").write_text("x")
    with pytest.raises(InputError, match="is no folder"):
        files.write(tmp_path / "taken", [NOTE])


def test_a_folder_where_a_document_should_be_is_refused(tmp_path: Path) -> None:
    (tmp_path / "note.md").mkdir()
    with pytest.raises(InputError, match="is a folder"):
        files.write(tmp_path, [NOTE])


def test_a_failure_while_writing_leaves_no_trace(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    files.write(tmp_path, [NOTE])

    def full(handle: int) -> None:
        raise OSError(28, "No space left on device", "disk")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(OSError, match="No space left"):
        files.write(tmp_path, [Document("note.md", "text/markdown", "second\n"), TABLE])
    assert names(tmp_path) == [files.MANIFEST, "note.md"]
    assert (tmp_path / "note.md").read_text() == NOTE.text


def test_a_damaged_manifest_counts_as_none(tmp_path: Path) -> None:
    files.write(tmp_path, [NOTE])
    (tmp_path / files.MANIFEST).write_text("{")
    with pytest.raises(InputError, match="was not written by Headrace"):
        files.write(tmp_path, [NOTE])


def test_a_new_file_is_written_once(tmp_path: Path) -> None:
    files.write_new(tmp_path / "a.toml", "x = 1\n")
    assert (tmp_path / "a.toml").read_text() == "x = 1\n"
    assert names(tmp_path) == ["a.toml"]
    with pytest.raises(InputError, match="is there already"):
        files.write_new(tmp_path / "a.toml", "x = 2\n")
    assert (tmp_path / "a.toml").read_text() == "x = 1\n"
    with pytest.raises(InputError, match="folder is not there"):
        files.write_new(tmp_path / "no" / "a.toml", "")
