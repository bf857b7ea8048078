"""Line numbers of keys: a scan of TOML or JSON text that is known to parse, for messages only.

Paths are written as in messages: "feed[0].uptake", "strain.limit.pyruvate-carboxylase", "conditions.supplements[1]".
"""

from __future__ import annotations

import json
import re
import tomllib
from bisect import bisect_right

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_SPACE = re.compile(r"(?:[ \t]|#[^\n]*)*")
_LINES = re.compile(r"(?:[ \t\r\n]|#[^\n]*)*")
_SCALAR = re.compile(r"[^,\]}#\n]*")
_QUOTED = re.compile(
    r'"""(?:[^\\]|\\.)*?"{3,5}(?!")|' r"'''.*?'{3,5}(?!')|" r'"(?:[^"\\\n]|\\.)*"|' r"'[^'\n]*'", re.DOTALL
)


def join(path: str, key: str) -> str:
    """The path of a key inside the table at `path`.

    >>> join(join("", "strain"), "remove")
    'strain.remove'
    """
    return f"{path}.{key}" if path else key


def toml_lines(text: str) -> dict[str, int]:
    """Key path -> line (from 1) of a TOML document that `tomllib` reads."""
    return _Scan(text).document()


def json_lines(text: str) -> dict[str, int]:
    """Key path -> line (from 1) of a JSON document that `json` reads."""
    scan = _Scan(text)
    scan.skip(_LINES)
    scan.value("")
    scan.places.pop("", None)
    return scan.places


class _Scan:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.places: dict[str, int] = {}
        self.starts = [0, *(match.end() for match in re.finditer("\n", text))]
        self.counts: dict[str, int] = {}

    def document(self) -> dict[str, int]:
        table = ""
        self.skip(_LINES)
        while self.at < len(self.text):
            if self.text[self.at] == "[":
                table = self.header()
            else:
                self.pair(table)
            self.skip(_LINES)
        return self.places

    def header(self) -> str:
        """[a.b] or [[a.b]]: the path that the keys below it belong to."""
        start, array = self.at, self.text.startswith("[[", self.at)
        self.at += 2 if array else 1
        *outer, last = self.key()
        self.at += 2 if array else 1
        path = ""
        for part in outer:
            path = self.latest(join(path, part))
            self.note(path, start)
        path = join(path, last)
        if array:
            self.counts[path] = self.counts.get(path, 0) + 1
            self.note(path, start)
        path = self.latest(path)
        self.note(path, start)
        return path

    def latest(self, path: str) -> str:
        """An array of tables means its last table."""
        return f"{path}[{self.counts[path] - 1}]" if path in self.counts else path

    def key(self) -> list[str]:
        parts: list[str] = []
        while True:
            self.skip(_SPACE)
            parts.append(self.name())
            self.skip(_SPACE)
            if self.text[self.at] != ".":
                return parts
            self.at += 1

    def name(self) -> str:
        if self.text[self.at] in "\"'":
            return _unquoted(self.quoted())
        match = _BARE.match(self.text, self.at)
        self.at = match.end() if match else self.at + 1
        return match[0] if match else ""

    def pair(self, table: str) -> None:
        """key = value of TOML, or "key": value of JSON."""
        start, path = self.at, table
        for part in self.key():
            path = join(path, part)
            self.note(path, start)
        self.at += 1
        self.skip(_LINES)
        self.value(path)

    def value(self, path: str) -> None:
        self.note(path, self.at)
        sign = self.text[self.at]
        if sign in "\"'":
            self.quoted()
        elif sign in "[{":
            self.bracketed(path, sign)
        else:
            self.skip(_SCALAR)

    def bracketed(self, path: str, sign: str) -> None:
        index = 0
        self.at += 1
        while True:
            self.skip(_LINES)
            if self.text[self.at] in "]}":
                self.at += 1
                return
            if self.text[self.at] == ",":
                self.at += 1
            elif sign == "{":
                self.pair(path)
            else:
                self.value(f"{path}[{index}]")
                index += 1

    def quoted(self) -> str:
        match = _QUOTED.match(self.text, self.at)
        if match is None:
            raise ValueError(f"a string without an end at {self.at}")
        self.at = match.end()
        return match[0]

    def skip(self, pattern: re.Pattern[str]) -> None:
        match = pattern.match(self.text, self.at)
        self.at = match.end() if match else self.at

    def note(self, path: str, at: int) -> None:
        self.places.setdefault(path, bisect_right(self.starts, at))


def _unquoted(text: str) -> str:
    """What a quoted key means, by JSON's rules where they hold and by TOML's else."""
    try:
        return str(json.loads(text))
    except ValueError:
        return str(tomllib.loads(f"x = {text}")["x"])
