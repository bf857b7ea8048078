"""The queries that ship with Headrace, and those that a user brings as files.

A file begins with a comment that says in one line what it answers. A line `# parameter NAME: KIND` says that the values
in `VALUES ?NAME { ... }` may be replaced; KIND is the kind of entity that a name is looked up among.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path

from msgspec import Struct

from headrace import names
from headrace.errors import InputError
from headrace.graph import terms
from headrace.names import nearest
from headrace.values.facts import Facts

FOLDER = Path(__file__).resolve().parent / "named"
_PARAMETER = re.compile(r"^# parameter (\w+): (\w+)$", re.MULTILINE)


class NamedQuery(Struct, frozen=True):
    """name: of the file. summary: what it answers. parameters: name -> kind of entity."""

    name: str
    summary: str
    text: str
    parameters: dict[str, str] = {}

    def values(self, parameter: str) -> re.Pattern[str]:
        """Where the text gives a parameter its values."""
        return re.compile(r"VALUES \?" + re.escape(parameter) + r" \{[^{}]*\}")

    def with_values(self, given: Mapping[str, str], facts: Facts) -> str:
        """The text with parameters set to the entities that names mean. Raises InputError for unknown ones."""
        text = self.text
        for parameter, name in given.items():
            if parameter not in self.parameters:
                accepted = ", ".join(self.parameters) or "no parameter at all"
                raise InputError(f"query {self.name} has no parameter {parameter!r}", accepted=accepted)
            iri = _entity(self.parameters[parameter], name, facts)
            text = self.values(parameter).sub(f"VALUES ?{parameter} {{ <{iri}> }}", text, count=1)
        return text


def _entity(kind: str, name: str, facts: Facts) -> str:
    index, base = {
        "compound": (names.compounds, terms.COMPOUND_BASE),
        "host": (names.hosts, terms.HOST_BASE),
        "outlet": (names.outlets, terms.OUTLET_BASE),
    }[kind]
    return base + index(facts).find(name).slug


def every() -> dict[str, NamedQuery]:
    """All shipped queries by name."""
    return {path.stem: parsed(path.stem, path.read_text(encoding="utf-8")) for path in sorted(FOLDER.glob("*.rq"))}


def find(name: str) -> NamedQuery:
    """A shipped query. Raises InputError, with the nearest names, for an unknown one."""
    shipped = every()
    if name not in shipped:
        hint = "headrace query --list shows all; a file of your own ends in .rq"
        raise InputError(f"no query {name!r}", read=name, near=nearest(name, shipped), hint=hint)
    return shipped[name]


def parsed(name: str, text: str) -> NamedQuery:
    """A query with what its leading comments say."""
    first = text.split("\n", 1)[0]
    summary = first.removeprefix("#").strip() if first.startswith("#") else ""
    return NamedQuery(name, summary, text, dict(_PARAMETER.findall(text)))
