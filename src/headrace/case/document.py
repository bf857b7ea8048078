"""Scenario files: bytes in, plain data with line numbers out. TOML, or JSON where the text starts with "{"."""

from __future__ import annotations

import json
import math
import re
import stat
import tomllib
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path
from typing import Any, TypeVar

from headrace.case import locate
from headrace.case.check import check
from headrace.errors import InputError
from headrace.values.case import Scenario

_T = TypeVar("_T")

LARGEST_FILE = 1_000_000
LONGEST_LINE = 5_000
DEEPEST = 12


def read(source: str | Path, name: str | None = None) -> Scenario:
    """The scenario in a file, or in a text.

    A string is a text when `name` is given, when it holds a line break or when it starts with "{"; else it is a path.
    name: what messages call the text. Raises InputError for everything that is wrong before names meet the facts.
    """
    if isinstance(source, str) and (name is not None or "\n" in source or source.lstrip().startswith("{")):
        return from_text(source, name or "scenario")
    path = Path(source)
    return from_text(_load(path), str(path), title=path.stem)


def from_text(text: str, name: str, title: str = "") -> Scenario:
    """The scenario that a TOML or JSON text states; messages call it `name`."""
    if len(text.encode("utf-8", "surrogatepass")) > LARGEST_FILE:
        raise _too_large(name)
    if not text.strip():
        raise InputError("the scenario is empty", file=name, accepted="TOML or JSON with at least host and feed")
    is_json = text.lstrip().startswith("{") or name.endswith(".json")
    raw = _guarded(name, lambda: _json(text, name) if is_json else _toml(text, name))
    places = _guarded(name, lambda: (locate.json_lines if is_json else locate.toml_lines)(text))
    try:
        check(raw)
    except InputError as error:
        raise place(error, name, places) from None
    return Scenario(title=raw.get("title") or title, path=name, raw=raw, places=places, text=text)


def from_dict(raw: Mapping[str, Any], name: str = "") -> Scenario:
    """The scenario that plain Python data states: the same keys, types and units as in a file."""
    data = dict(raw)
    _bounded(data, name)
    try:
        check(data)
    except InputError as error:
        raise place(error, name, {}) from None
    return Scenario(title=data.get("title") or "", path=name, raw=data)


def place(
    error: InputError, file: str, places: Mapping[str, int], inside: Mapping[str, str] | None = None
) -> InputError:
    """The error with its file, and the line of its key (or of the table that lacks the key).

    inside: of a scenario that is part of another, the keys that stand elsewhere there; the message gets that place.
    """
    key = error.key
    while key and key not in places:
        key = key[: max(key.rfind("."), key.rfind("["), 0)]
    moved = max((own for own in inside or () if _below(error.key, own)), key=len, default="")
    if moved and inside:
        error = error.moved(inside[moved] + error.key[len(moved) :])
    return error.at(file=file, line=places.get(key))


def _below(key: str, top: str) -> bool:
    return key == top or key.startswith((f"{top}.", f"{top}["))


def _load(path: Path) -> str:
    name = str(path)
    try:
        mode = path.stat().st_mode
        if stat.S_ISDIR(mode):
            raise InputError("this is a folder, not a scenario file", file=name, accepted="one TOML or JSON file")
        if not stat.S_ISREG(mode):
            raise InputError("this is not an ordinary file", file=name, accepted="one TOML or JSON file")
        with path.open("rb") as file:
            content = file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise InputError("there is no such file", file=name, accepted="the path of a scenario file") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise InputError(f"the file can't be read: {reason}", file=name) from None
    if len(content) > LARGEST_FILE:
        raise _too_large(name)
    try:
        return content.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise InputError("the file is not UTF-8 text", file=name, line=line, accepted="UTF-8") from None


def _too_large(name: str) -> InputError:
    return InputError("the file is too large for a scenario", file=name, accepted=f"at most {LARGEST_FILE:,} bytes")


def _toml(text: str, name: str) -> dict[str, Any]:
    for number, written in enumerate(text.split("\n"), start=1):
        if len(written) > LONGEST_LINE:
            raise InputError("the line is too long", file=name, line=number, accepted=f"{LONGEST_LINE:,} characters")
    try:
        raw = tomllib.loads(text)
    except ValueError as error:
        message, line = _where(str(error), text)
        message = "a number has too many digits" if "integer string conversion" in message else message
        raise InputError(f"not TOML: {message}", file=name, line=line, accepted="TOML (or JSON)") from None
    _bounded(raw, name)
    return raw


def _where(message: str, text: str) -> tuple[str, int]:
    """tomllib says the place at the end of its message."""
    match = re.fullmatch(r"(.*?) \(at (?:line (\d+), column \d+|end of document)\)", message, re.DOTALL)
    if match is None:
        return message, 1
    return match[1][:1].lower() + match[1][1:], int(match[2] or text.count("\n") + 1)


def _json(text: str, name: str) -> dict[str, Any]:
    try:
        raw = json.loads(text, object_pairs_hook=_once, parse_constant=_no_constant)
    except json.JSONDecodeError as error:
        message = error.msg[:1].lower() + error.msg[1:]
        raise InputError(f"not JSON: {message}", file=name, line=error.lineno, accepted="JSON (or TOML)") from None
    except ValueError as error:
        message = "a number has too many digits" if "integer string conversion" in str(error) else str(error)
        raise InputError(f"not JSON: {message}", file=name, accepted="JSON (or TOML)") from None
    if not isinstance(raw, dict):
        raise InputError("the scenario is not an object", file=name, line=1, accepted='{"host": ..., "feed": [...]}')
    _bounded(raw, name)
    return raw


def _once(pairs: Iterable[tuple[str, Any]]) -> dict[str, Any]:
    table: dict[str, Any] = {}
    for key, value in pairs:
        if key in table:
            raise ValueError(f"the key {key[:100]!r} stands twice in one object")
        table[key] = value
    return table


def _no_constant(name: str) -> Any:
    raise ValueError(f"{name} is no number")


def _bounded(raw: dict[str, Any], name: str) -> None:
    """Refuse deep nesting, and text and numbers that can't be shown, before anything walks the data by recursion."""
    level: list[Any] = [raw]
    for _ in range(DEEPEST):
        inside: list[Any] = []
        for value in level:
            keys = list(value) if isinstance(value, dict) else []
            for each in [*keys, *(value.values() if isinstance(value, dict) else value)]:
                if isinstance(each, dict | list | tuple):
                    inside.append(each)
                else:
                    _showable(each, name)
        if not inside:
            return
        level = inside
    raise InputError("tables and lists are nested too deeply", file=name, accepted=f"at most {DEEPEST} levels")


def _showable(value: object, name: str) -> None:
    if isinstance(value, str) and any("\ud800" <= letter <= "\udfff" for letter in value):
        raise InputError("the text holds half a character", file=name, read=value[:100], accepted="UTF-8")
    if isinstance(value, float) and not math.isfinite(value):
        raise InputError("the number is not finite", file=name, read=str(value), accepted="a finite number")
    if isinstance(value, int) and value.bit_length() > 64:
        raise InputError("the number has too many digits", file=name, accepted="a number of at most 64 bits")


def _guarded(name: str, work: Callable[[], _T]) -> _T:
    try:
        return work()
    except RecursionError:
        raise InputError("tables and lists are nested too deeply", file=name, accepted=f"{DEEPEST} levels") from None
