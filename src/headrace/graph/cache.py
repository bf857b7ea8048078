"""The built facts on disk, so that a command needn't read Turtle again. Deleting the folder costs only time.

One file per (facts version, build-code version): SHA-256 of the rest, then msgpack. It is written beside its
place and moved there in one step, so a reader sees all of it or nothing, and two processes may build at once. A file
that is short, altered or of another shape is ignored and built again.
"""

from __future__ import annotations

import gc
import hashlib
import os
import time
from fractions import Fraction
from functools import cache
from pathlib import Path
from typing import Any

import msgspec

from headrace.values import codec
from headrace.values.facts import Facts

KEPT = 6
STALE = 3600.0  # seconds
_DIGEST = hashlib.sha256().digest_size


def read(folder: Path, version: str, rules: str = "") -> Facts | None:
    """The cached facts of this version, or None when there is no whole and current file. rules: digest of the finding rules."""
    try:
        data = _file(folder, version + rules).read_bytes()
    except OSError:
        return None
    digest, body = data[:_DIGEST], memoryview(data)[_DIGEST:]
    if hashlib.sha256(body).digest() != digest:
        return None
    collecting = gc.isenabled()
    gc.disable()  # decoding makes many objects and no garbage; looking for some doubles its time
    try:
        facts = msgspec.msgpack.decode(body, type=Facts, dec_hook=_decode)
    except msgspec.MsgspecError:
        return None
    finally:
        if collecting:
            gc.enable()
    return facts if facts.version == version else None


def write(folder: Path, facts: Facts, rules: str = "") -> bool:
    """Keep the facts for the next process. False when the folder can't be written: the cache is only a help."""
    body = msgspec.msgpack.encode(facts, enc_hook=codec.encode_hook)
    try:
        folder.mkdir(parents=True, exist_ok=True)
        part = folder / f"facts-{os.getpid()}-{time.monotonic_ns()}.part"
        try:
            with part.open("xb") as stream:
                stream.write(hashlib.sha256(body).digest() + body)
            os.replace(part, _file(folder, facts.version + rules))
        except BaseException:
            part.unlink(missing_ok=True)
            raise
        _forget_old(folder)
    except OSError:
        return False
    return True


@cache
def code_version() -> str:
    """Hash of the code that builds facts: this package, the shape of the values and the solver of contents."""
    here = Path(__file__).resolve().parent
    digest = hashlib.sha256()
    values = (here.parent / "values" / f"{name}.py" for name in ("basis", "depth", "facts"))
    for path in [*sorted(here.glob("*.py")), *values, here.parent / "solve" / "exact.py"]:
        digest.update(path.read_bytes())
    return digest.hexdigest()[:8]


@cache
def _fraction(text: str) -> Fraction:
    return Fraction(text)


def _decode(kind: type, value: Any) -> Any:
    """codec.decode_hook with each number read once: most counts are 1 or -1."""
    return _fraction(value) if kind is Fraction and isinstance(value, str) else codec.decode_hook(kind, value)


def _file(folder: Path, version: str) -> Path:
    return folder / f"facts-{version}-{code_version()}.msgpack"


def _forget_old(folder: Path) -> None:
    """Keep the newest few files; a process that loses its file builds again. Parts that a killed process left go too."""
    for path in sorted(folder.glob("facts-*.msgpack"), key=_written, reverse=True)[KEPT:]:
        path.unlink(missing_ok=True)
    for path in folder.glob("facts-*.part"):
        if _written(path) < time.time() - STALE:
            path.unlink(missing_ok=True)


def _written(path: Path) -> float:
    try:
        return path.stat().st_mtime
    except FileNotFoundError:
        return 0.0
