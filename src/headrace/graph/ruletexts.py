"""Finding rules as text: which there are, and a digest that tells a cached build whether they are the same."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import NamedTuple

from headrace.errors import FactsError
from headrace.graph.files import normalised

FOLDER = ("rules", "findings")


class RuleText(NamedTuple):
    """name: of the file, with "plugin/NAME/" before a plugin's; summary: what it finds; query: SPARQL text."""

    name: str
    summary: str
    query: str


def rule_texts(folders: Sequence[Path], extra: Sequence[tuple[str, Path]] = ()) -> tuple[RuleText, ...]:
    """The finding rules below each folder's rules/findings, by name; extra: (plugin name, folder).

    Raises FactsError for a rule without a summary line.
    """
    homes = [*(("", folder) for folder in folders), *((f"plugin/{name}/", folder) for name, folder in extra)]
    return tuple(sorted(_read(prefix + path.stem, path) for prefix, home in homes for path in _paths(home)))


def digest(rules: Iterable[RuleText]) -> str:
    """SHA-256 over names and texts, shortened to 8 hexadecimal digits; "" without rules."""
    text = "".join(f"{rule.name}\0{len(rule.query)}\0{rule.query}" for rule in rules)
    return hashlib.sha256(text.encode()).hexdigest()[:8] if text else ""


def _paths(home: Path) -> list[Path]:
    return sorted(home.joinpath(*FOLDER).glob("*.rq"))


def _read(name: str, path: Path) -> RuleText:
    text = normalised(path).decode()
    first = text.split("\n", 1)[0]
    if not first.startswith("# ") or not first.endswith("."):
        raise FactsError('a rule starts with one sentence ("# What it finds.")', file=path.name)
    return RuleText(name, first[2:], text)
