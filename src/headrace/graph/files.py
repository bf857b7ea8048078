"""Fact files on disk and the version that is computed from them.

A fact file is any .ttl below a facts folder but for shapes/ and rules/. Files are known by their relative
path with forward slashes; those of a plugin stand below "plugin/NAME/". Bytes are taken with line breaks as "\\n",
so that checkouts with other line endings, installed wheels and any file order give one version.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import NamedTuple

from headrace.errors import FactsError

NOT_FACTS = ("shapes", "rules")


class FactFile(NamedTuple):
    """name: relative path as shown; path: where it was read; data: its bytes with normalised line breaks."""

    name: str
    path: Path
    data: bytes


def fact_files(folders: Sequence[Path], extra: Sequence[tuple[str, Path]] = ()) -> tuple[FactFile, ...]:
    """All fact files, sorted by name. extra: (plugin name, folder).

    Raises FactsError for a folder that is missing or holds no facts, and for a file that can't be read.
    """
    found: list[FactFile] = []
    for prefix, folder in [*(("", folder) for folder in folders), *((f"plugin/{name}/", path) for name, path in extra)]:
        files = [FactFile(prefix + name, path, normalised(path)) for name, path in turtle_paths(folder)]
        if not files:
            raise FactsError("no fact files (.ttl) here", file=folder)
        found += files
    return tuple(sorted(found))


def turtle_paths(folder: Path, skipped: Sequence[str] = NOT_FACTS) -> Iterable[tuple[str, Path]]:
    """(relative name, path) of each Turtle file below `folder`, but for the skipped folders and hidden ones."""
    if not folder.is_dir():
        raise FactsError("no such folder of facts", file=folder)
    for inside, folders, names in os.walk(folder):
        here = Path(inside)
        parts = here.relative_to(folder).parts
        folders[:] = sorted(name for name in folders if not name.startswith(".") and (parts or name not in skipped))
        for name in sorted(names):
            if name.endswith(".ttl") and not name.startswith("."):
                yield "/".join([*parts, name]), here / name


def normalised(path: Path) -> bytes:
    """The bytes of a file with every line break as "\\n" and without a byte-order mark."""
    try:
        data = path.read_bytes()
    except OSError as error:
        raise FactsError(f"can't be read: {error.strerror}", file=path) from error
    return data.removeprefix(b"\xef\xbb\xbf").replace(b"\r\n", b"\n").replace(b"\r", b"\n")


def version(files: Iterable[FactFile]) -> str:
    """SHA-256 over (name, bytes) of all files in order of name, shortened to 12 hexadecimal digits."""
    digest = hashlib.sha256()
    for name, data in sorted((file.name, file.data) for file in files):
        digest.update(f"{name}\0{len(data)}\0".encode())
        digest.update(data)
    return digest.hexdigest()[:12]
