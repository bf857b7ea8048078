"""Answers as plain data, and whether two of them are the same but for the order of rows and the last digits."""

from __future__ import annotations

import json
from collections.abc import Mapping
from fractions import Fraction
from math import isclose, isfinite
from typing import Any

from msgspec import Struct

RELATIVE = 1e-6
ABSOLUTE = 1e-7  # mmol/gDW/h; far above what two solves of one programme differ by


def plain(value: Any) -> Any:
    """Structs as dicts, tuples as lists sorted by their content, fractions as exact text; numbers as they are."""
    if isinstance(value, Struct):
        return {name: plain(getattr(value, name)) for name in value.__struct_fields__}
    if isinstance(value, Mapping):
        return {str(key): plain(item) for key, item in value.items()}
    if isinstance(value, list | tuple | set | frozenset):
        return sorted((plain(item) for item in value), key=_key)
    return str(value) if isinstance(value, Fraction) else value


def resorted(value: Any) -> Any:
    """Plain data with every list sorted again, after its texts have changed."""
    if isinstance(value, dict):
        return {key: resorted(item) for key, item in value.items()}
    return sorted((resorted(item) for item in value), key=_key) if isinstance(value, list) else value


def difference(one: Any, other: Any, path: str = "") -> str:
    """The first place where two plain answers differ, in words; "" when they are the same."""
    if isinstance(one, dict) and isinstance(other, dict):
        if one.keys() != other.keys():
            return f"{path}: {sorted(one.keys() ^ other.keys())} on one side only"
        return next((found for key in one if (found := difference(one[key], other[key], f"{path}.{key}"))), "")
    if isinstance(one, list) and isinstance(other, list):
        if len(one) != len(other):
            return f"{path}: {len(one)} and {len(other)} entries"
        pairs = enumerate(zip(one, other, strict=True))
        return next((found for number, pair in pairs if (found := difference(*pair, f"{path}[{number}]"))), "")
    return "" if _same(one, other) else f"{path}: {one!r} and {other!r}"


def _same(one: Any, other: Any) -> bool:
    if isinstance(one, float | int) and isinstance(other, float | int) and isfinite(one) and isfinite(other):
        return isclose(one, other, rel_tol=RELATIVE, abs_tol=ABSOLUTE)
    return bool(one == other)


def _key(value: Any) -> str:
    return json.dumps(_rounded(value), sort_keys=True, default=str)


def _rounded(value: Any) -> Any:
    if isinstance(value, float):
        return round(value, 5) + 0.0
    if isinstance(value, dict):
        texts_first = sorted(value.items(), key=lambda item: (not isinstance(item[1], str), item[0]))
        return [_rounded(item) for _, item in texts_first]
    return [_rounded(item) for item in value] if isinstance(value, list) else value
