"""Plugins that other distributions bring, found by reading their entry-point files and nothing else.

An installed distribution names its plugins in `entry_points.txt` of its metadata folder:

    [headrace.plugins]
    cadaverine = my_package.plugin:Cadaverine

Only those folders are listed and only those small files are read, about 25 microseconds a distribution, so there is
no cache that could be stale.
"""

from __future__ import annotations

import os
import re
import sys
from collections.abc import Iterator, Sequence
from typing import NamedTuple

GROUP = "headrace.plugins"
_METADATA = (".dist-info", ".egg-info")


class Pointer(NamedTuple):
    """Where a stranger's plugin is: its entry-point name, its module and attribute, and who brings it."""

    name: str
    module: str
    attribute: str
    distribution: str


def find(folders: Sequence[str] | None = None) -> tuple[Pointer, ...]:
    """All pointers on the import path (`sys.path` unless given), by distribution and name; the first folder wins."""
    seen: set[str] = set()
    found: list[Pointer] = []
    for folder in dict.fromkeys(sys.path if folders is None else folders):
        for metadata in _metadata_folders(folder or os.curdir):
            distribution = _distribution(os.path.basename(metadata))
            if distribution in seen:
                continue
            seen.add(distribution)
            found.extend(read(os.path.join(metadata, "entry_points.txt"), distribution))
    return tuple(sorted(found, key=lambda pointer: (pointer.distribution, pointer.name)))


def read(path: str, distribution: str) -> Iterator[Pointer]:
    """The pointers of one entry-point file. A file that is missing or names none gives nothing."""
    try:
        with open(path, "rb") as file:
            data = file.read()
    except OSError:
        return
    if GROUP.encode() not in data:
        return
    section = ""
    for raw in data.decode("utf-8", "replace").splitlines():
        line = raw.strip()
        if line.startswith("#"):
            continue
        if line.startswith("["):
            section = line.strip("[] ")
        elif section == GROUP and "=" in line:
            name, target = (part.strip() for part in line.split("=", 1))
            module, _, attribute = target.partition(":")
            yield Pointer(name, module.strip(), attribute.strip(), distribution)


def _metadata_folders(folder: str) -> list[str]:
    try:
        with os.scandir(folder) as items:
            return sorted(item.path for item in items if item.name.endswith(_METADATA))
    except OSError:  # sys.path may name archives and folders that are not there
        return []


def _distribution(folder: str) -> str:
    stem = folder.rsplit(".", 1)[0].split("-", 1)[0]
    return re.sub(r"[-_.]+", "-", stem).lower()
