"""Keys and types of a scenario against `model`: the first fault as one InputError with its key.

Walks the model's annotations itself rather than reading a library's message, so that a fault inside any table has
its exact key, an unknown key its nearest known one, and a quantity its accepted units.
"""

from __future__ import annotations

import re
import unicodedata
from functools import lru_cache
from types import NoneType, UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin, get_type_hints

import msgspec
from msgspec import Meta, Struct, UnsetType

from headrace import units
from headrace.case.locate import join
from headrace.case.model import LONGEST_LIST, PLANNED, Document
from headrace.errors import InputError
from headrace.names import nearest


def check(raw: object) -> Document:
    """The document as typed tables. Raises InputError with key, what was read and what is accepted."""
    _value(raw, Document, "")
    return msgspec.convert(raw, Document)


def _value(value: object, kind: Any, path: str, meta: Meta | None = None) -> None:
    origin = get_origin(kind)
    if origin is Annotated:
        _annotated(value, kind, path)
    elif origin in (Union, UnionType):
        _value(value, _member(value, get_args(kind)), path)
    elif origin is Literal:
        _choice(value, get_args(kind), path)
    elif origin is list:
        _list(value, get_args(kind)[0], path)
    elif origin is dict:
        _free_table(value, get_args(kind)[1], path)
    elif kind is str:
        _text(value, path, meta or Meta())
    elif isinstance(kind, type) and issubclass(kind, Struct):
        _table(value, kind, path)


def _annotated(value: object, kind: Any, path: str) -> None:
    base, *extras = get_args(kind)
    quantity = next((extra for extra in extras if isinstance(extra, units.Kind)), None)
    if quantity is None:
        return _value(value, base, path, next((extra for extra in extras if isinstance(extra, Meta)), None))
    try:
        units.read(value, quantity)
    except InputError as error:
        raise error.at(key=path) from None


def _member(value: object, kinds: tuple[Any, ...]) -> Any:
    """The alternative that a value is judged by: a table's for a table, else the first that is none."""
    real = [kind for kind in kinds if kind not in (UnsetType, NoneType)]
    tables = [kind for kind in real if isinstance(kind, type) and issubclass(kind, Struct)]
    others = [kind for kind in real if kind not in tables]
    return tables[0] if tables and (isinstance(value, dict) or not others) else others[0]


def _table(value: object, kind: type[Struct], path: str) -> None:
    if not isinstance(value, dict):
        raise _wrong("a table", value, path)
    hints, fields = _hints(kind), msgspec.structs.fields(kind)
    known = {field.encode_name: field for field in fields}
    for key in value:
        if key not in known:
            raise _unknown(str(key), known, path)
    for name, field in known.items():
        if name in value:
            _value(value[name], hints[field.name], join(path, name))
        elif field.required:
            raise InputError(f"the key {name!r} is missing", key=path, accepted=_example(name))


def _unknown(key: str, known: dict[str, Any], path: str) -> InputError:
    table = re.sub(r"\[\d+\]", "", path)
    where = join(path, key)
    if key in PLANNED.get(table, ()):
        return InputError(f"{key!r} is not built yet", key=where, hint="take it out; it is never ignored in silence")
    accepted = ", ".join(known)
    return InputError(f"unknown key {key!r}", key=where, accepted=accepted, near=nearest(key, known))


def _free_table(value: object, kind: Any, path: str) -> None:
    if not isinstance(value, dict):
        raise _wrong("a table", value, path)
    _short(value, path)
    for key, each in value.items():
        _text(key, path, Meta(min_length=1, max_length=200))
        _value(each, kind, join(path, key))


def _list(value: object, kind: Any, path: str) -> None:
    if not isinstance(value, list | tuple):
        if isinstance(kind, type) and issubclass(kind, Struct):
            hint = f"write [[{path}]] above its keys, with two brackets"
            raise InputError("a list of tables is needed", key=path, read=_shown(value), accepted=hint)
        raise _wrong('a list such as ["a", "b"]', value, path)
    _short(value, path)
    for index, each in enumerate(value):
        _value(each, kind, f"{path}[{index}]")


def _choice(value: object, choices: tuple[Any, ...], path: str) -> None:
    if isinstance(value, bool) or value not in choices:
        accepted = ", ".join(f'"{choice}"' if isinstance(choice, str) else str(choice) for choice in choices)
        near = nearest(value, [str(choice) for choice in choices]) if isinstance(value, str) else ()
        raise InputError(
            "not one of the words accepted here", key=path, read=_shown(value), accepted=accepted, near=near
        )


def _text(value: object, path: str, meta: Meta) -> None:
    if not isinstance(value, str):
        raise _wrong("text in quotes", value, path)
    if meta.max_length is not None and len(value) > meta.max_length:
        raise InputError("the text is too long", key=path, accepted=f"at most {meta.max_length} characters")
    if meta.min_length and not value.strip():
        raise InputError("the text is empty", key=path, read=value, accepted="a name")
    if any(unicodedata.category(letter) in ("Cc", "Cs") for letter in value):
        raise InputError("the text holds control characters", key=path, read=_shown(value), accepted="plain text")


def _short(value: Any, path: str) -> None:
    if len(value) > LONGEST_LIST:
        raise InputError("too many entries", key=path, read=len(value), accepted=f"at most {LONGEST_LIST}")


def _wrong(needed: str, value: object, path: str) -> InputError:
    what = "a table" if isinstance(value, dict) else "a list" if isinstance(value, list) else type(value).__name__
    words = {"str": "text", "int": "a number", "float": "a number", "bool": "a truth value", "NoneType": "nothing"}
    return InputError(
        f"{words.get(what, what)} where {needed} is needed", key=path, read=_shown(value), accepted=needed
    )


def _shown(value: object) -> object:
    """A short stand-in for long or deep values."""
    if isinstance(value, dict | list | tuple):
        return f"{'a table' if isinstance(value, dict) else 'a list'} of {len(value)}"
    return value if not isinstance(value, str) or len(value) <= 100 else value[:100] + "..."


def _example(name: str) -> str:
    """What a missing key would look like."""
    return {"feed": "[[feed]] with substrate and, unless the least is asked for, uptake"}.get(name, f'{name} = "..."')


@lru_cache(maxsize=32)
def _hints(kind: type[Struct]) -> dict[str, Any]:
    return get_type_hints(kind, include_extras=True)
