"""Texts from outside as parts of our own queries."""

from __future__ import annotations

_ESCAPES = {"\\": "\\\\", '"': '\\"', "\n": "\\n", "\r": "\\r", "\t": "\\t"}


def quoted(text: str) -> str:
    """A text as a SPARQL string; nothing in it can end the string.

    >>> print(quoted('a"b\\\\'))
    "a\\"b\\\\"
    """
    return '"' + "".join(_ESCAPES.get(char, char) for char in text if char >= " " or char in _ESCAPES) + '"'
