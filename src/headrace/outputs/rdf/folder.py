"""The results folder: one TriG file per run.

Files are the truth. A run is written to a temporary name in the same folder, flushed to disk, and renamed, so that a
reader sees all of a file or none of it, whatever happens to the writer. Names are unique, so that two writers never meet.
"""

from __future__ import annotations

import os
import secrets
import time
from collections.abc import Iterator
from pathlib import Path

from msgspec import Struct
from pyoxigraph import BlankNode, NamedNode, Quad, RdfFormat, parse

from headrace.errors import InputError
from headrace.outputs.rdf import terms
from headrace.outputs.rdf.run import Run

FOLDER = ".headrace"
ENDING = ".trig"
_PART = ".part"
_ABANDONED = 3600.0  # seconds after which a temporary file has no writer any more


class Stamp(Struct, frozen=True):
    """What tells one state of a file from another."""

    changed: int
    size: int
    inode: int


def beside(scenario: Path) -> Path:
    """The usual results folder of a scenario."""
    return scenario.resolve().parent / FOLDER


def save(folder: Path, run: Run) -> Path:
    """Write a run and give its file. Raises InputError when the folder is no folder."""
    if folder.exists() and not folder.is_dir():
        raise InputError("is no folder", file=folder, accepted="a folder for results, or a path where one can be made")
    folder.mkdir(parents=True, exist_ok=True)
    _forget_abandoned(folder)
    part = folder / f".{secrets.token_hex(8)}{_PART}"
    try:
        with open(part, "xb") as file:
            file.write(run.trig)
            file.flush()
            os.fsync(file.fileno())
        os.replace(part, folder / (run.name + ENDING))
    except BaseException:
        part.unlink(missing_ok=True)
        raise
    _flush_folder(folder)
    return folder / (run.name + ENDING)


def stamps(folder: Path) -> dict[str, Stamp]:
    """The runs of a folder by name, with what tells whether a file has changed. A folder that is not there has none."""
    found: dict[str, Stamp] = {}
    try:
        with os.scandir(folder) as entries:
            for entry in entries:
                if entry.name.endswith(ENDING) and not entry.name.startswith(".") and entry.is_file():
                    facts = entry.stat()
                    found[entry.name.removesuffix(ENDING)] = Stamp(facts.st_mtime_ns, facts.st_size, facts.st_ino)
    except FileNotFoundError:
        return {}
    return dict(sorted(found.items()))


def read(folder: Path, name: str) -> list[Quad]:
    """The statements of a run. Raises InputError, with the file, when it is no TriG or says something about others' nodes.

    All statements must be about the run or its parts, in the run's own graph: so no file can change a fact or another
    run, and no statement stands in two graphs.
    """
    file = folder / (name + ENDING)
    try:
        quads = list(parse(file.read_bytes(), format=RdfFormat.TRIG, rename_blank_nodes=True))
    except (SyntaxError, ValueError) as error:
        raise InputError(f"is no saved run: {error}", file=file, hint="move it away, or save the run again") from error
    run = terms.RUN_BASE + name
    for quad in quads:
        if quad.graph_name != NamedNode(run) or not _belongs(quad, run):
            raise InputError(f"is no saved run: it says something outside of {run}", file=file, hint="move it away")
    return quads


def each(folder: Path) -> Iterator[tuple[str, list[Quad]]]:
    """All runs of a folder in order of time."""
    return ((name, read(folder, name)) for name in stamps(folder))


def _belongs(quad: Quad, run: str) -> bool:
    subject = quad.subject
    return isinstance(subject, BlankNode) or (
        isinstance(subject, NamedNode) and (subject.value == run or subject.value.startswith(run + "/"))
    )


def _flush_folder(folder: Path) -> None:
    """Make the rename itself durable, where the system can."""
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError:
        return
    try:
        os.fsync(handle)
    except OSError:
        pass  # some file systems can't; the file itself is on disk
    finally:
        os.close(handle)


def _forget_abandoned(folder: Path) -> None:
    """Temporary files of writers that were stopped long ago."""
    now = time.time()
    for path in folder.glob(f".*{_PART}"):
        try:
            if now - path.stat().st_mtime > _ABANDONED:
                path.unlink()
        except FileNotFoundError:
            continue
