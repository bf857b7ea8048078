"""A SPARQL query as tokens, by the terminals of the SPARQL 1.1 grammar (section 19.8 of the recommendation)."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import NamedTuple

from headrace.errors import InputError

_STRING = r"'''(?:'{0,2}(?:[^'\\]|\\.))*'''" + r'|"""(?:"{0,2}(?:[^"\\]|\\.))*"""'
_SHORT = r"'(?:[^'\\\r\n]|\\.)*'" + r'|"(?:[^"\\\r\n]|\\.)*"'
_NAME = r"(?:[^\W\d_](?:[\w.·-]*[\w·-])?)?"
_LOCAL = r"(?:[\w:·.-]|%[0-9A-Fa-f]{2}|\\[_~.\-!$&'()*+,;=/?#@%])*"
_KINDS = {
    "space": r"[ \t\r\n]+",
    "comment": r"\#[^\r\n]*",
    "iri": r"<[^<>\"{}|^`\\\x00-\x20]*>",
    "string": f"{_STRING}|{_SHORT}",
    "blank": r"_:[\w](?:[\w.·-]*[\w·-])?",
    "name": f"{_NAME}:{_LOCAL}",
    "variable": r"[?$]\w+",
    "language": r"@[A-Za-z]+(?:-[A-Za-z0-9]+)*",
    "number": r"[0-9]*\.?[0-9]+(?:[eE][+-]?[0-9]+)?|[0-9]+\.",
    "word": r"[A-Za-z_][\w]*",
    "sign": r"\^\^|&&|\|\||[<>!]=|[^\s\"'\\\x00-\x1f]",
}
_TOKEN = re.compile("|".join(f"(?P<{kind}>{pattern})" for kind, pattern in _KINDS.items()), re.DOTALL)
_ESCAPE = re.compile(r"\\u([0-9A-Fa-f]{4})|\\U([0-9A-Fa-f]{8})")


class Token(NamedTuple):
    """kind: iri, string, name, word, sign ...; text: as written; at: offset in the text."""

    kind: str
    text: str
    at: int


def unescaped(text: str) -> str:
    """The text with its codepoint escapes (section 19.2) replaced, which count before anything else.

    Raises InputError when an escape is left after that, or says no character: nothing may be hidden from the guard.
    """
    if "\\u" not in text and "\\U" not in text:
        return text
    try:
        plain = _ESCAPE.sub(lambda found: _character(found[1] or found[2]), text)
    except ValueError as error:
        raise InputError("a codepoint escape says no character", accepted="the character itself") from error
    if _ESCAPE.search(plain):
        raise InputError("a codepoint escape inside a codepoint escape", accepted="the character itself")
    return plain


def _character(digits: str) -> str:
    number = int(digits, 16)
    if 0xD800 <= number <= 0xDFFF:
        raise ValueError(digits)
    return chr(number)


def tokens(text: str) -> Iterator[Token]:
    """The tokens without space and comments. Raises InputError, with the line, for text that no token begins with."""
    at = 0
    while at < len(text):
        found = _TOKEN.match(text, at)
        if found is None:
            raise InputError("not SPARQL: a string that does not end, or a character that can't stand here", line=line(text, at))
        kind = found.lastgroup or ""
        if kind not in ("space", "comment"):
            yield Token(kind, found[0], at)
        at = found.end()


def line(text: str, at: int) -> int:
    """The line of an offset, from 1."""
    return text.count("\n", 0, at) + 1
