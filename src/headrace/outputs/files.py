"""Files of a review, written so that a folder never holds half of one.

All texts are made before anything is written; each is written to a temporary folder inside the target and then renamed
into place. A manifest says what Headrace wrote there and with which content: only such files, unchanged since, are
replaced without being asked.
"""

from __future__ import annotations

import hashlib
import os
import shutil
import tempfile
from collections.abc import Sequence
from pathlib import Path

import msgspec

from headrace.errors import InputError
from headrace.values.answers import Document

MANIFEST = "headrace-files.json"


def write(folder: Path, documents: Sequence[Document], force: bool = False) -> tuple[Path, ...]:
    """Write all documents into the folder, which is made if need be, and give their paths.

    force: also replace files that Headrace did not write or that were changed since. Raises InputError, before
    anything is written, for a folder that is none and for files that would be lost.
    """
    if folder.exists() and not folder.is_dir():
        raise InputError("is no folder", file=folder, accepted="a folder, or a path where one can be made")
    known = _manifest(folder)
    if not force:
        _refuse_strangers(folder, documents, known)
    folder.mkdir(parents=True, exist_ok=True)
    written = known | {document.name: _digest(document.text.encode()) for document in documents}
    listing = Document(MANIFEST, "application/json", msgspec.json.format(msgspec.json.encode(written), indent=2).decode() + "\n")
    _rename_into_place(folder, [*documents, listing])
    return tuple(folder / document.name for document in documents)


def _rename_into_place(folder: Path, documents: Sequence[Document]) -> None:
    room = Path(tempfile.mkdtemp(prefix=".headrace-", dir=folder))
    try:
        for document in documents:
            with open(room / document.name, "w", encoding="utf-8", newline="\n") as file:
                file.write(document.text)
                file.flush()
                os.fsync(file.fileno())
        for document in documents:
            os.replace(room / document.name, folder / document.name)
    finally:
        shutil.rmtree(room, ignore_errors=True)


def _refuse_strangers(folder: Path, documents: Sequence[Document], known: dict[str, str]) -> None:
    for document in documents:
        path = folder / document.name
        if path.is_dir():
            raise InputError("is a folder where a document would stand", file=path)
        if path.exists() and known.get(document.name) != _digest(path.read_bytes()):
            why = "was changed since Headrace wrote it" if document.name in known else "was not written by Headrace"
            raise InputError(f"{why} and would be lost", file=path, hint="choose another folder, or --force to replace it")


def _manifest(folder: Path) -> dict[str, str]:
    """What Headrace wrote into the folder: file name -> hash of its content. A manifest that can't be read counts as none."""
    try:
        return msgspec.json.decode((folder / MANIFEST).read_bytes(), type=dict[str, str])
    except (OSError, msgspec.MsgspecError):
        return {}


def _digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def write_new(path: Path, text: str) -> None:
    """Write one new file at once. Raises InputError when something stands there already or its folder is missing."""
    if path.exists():
        raise InputError("is there already", file=path, hint="choose another name; Headrace does not replace it")
    if not path.parent.is_dir():
        raise InputError("its folder is not there", file=path)
    handle, name = tempfile.mkstemp(prefix=".headrace-", dir=path.parent)
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
        os.chmod(name, 0o666 & ~_umask())
        os.link(name, path)  # unlike a rename, fails when another process made the file meanwhile
    finally:
        os.unlink(name)


def _umask() -> int:
    """The process's file mode mask (it can only be read by setting it)."""
    mask = os.umask(0o077)
    os.umask(mask)
    return mask
