"""The core knows no entity by name, and nothing carries shorthand, machine paths or words that don't belong here."""

from __future__ import annotations

import ast
import re
import subprocess
from pathlib import Path

import pytest

from headrace.values.facts import Facts

ROOT = Path(__file__).resolve().parents[2]

# Slugs that the core may say, each with the reason. Docstrings and comments may give examples of any. What plays a role
# ("oxygen", "proton") the core knows by the role's name, which the facts tie to a compound.
EXCEPTIONS: dict[str, str] = {
    "atp": "a need of a draw and a column of the answers; which compound it is, the role of adenylates says",
    "nadh": "the key p-o-nadh of a scenario, a figure that the trade calls so",
    "malate": "an example in the help of headrace query",
}
# Declarations copied from the plugin classes: what they claim and how they describe themselves.
GENERATED = ("src/headrace/hooks/table.py",)


def literals(path: Path) -> list[tuple[int, str]]:
    """The string constants of a file that are no docstrings, with their lines."""
    tree = ast.parse(path.read_text())
    docstrings = {
        id(node.value) for node in ast.walk(tree) if isinstance(node, ast.Expr) and isinstance(node.value, ast.Constant)
    }
    constants = (node for node in ast.walk(tree) if isinstance(node, ast.Constant) and id(node) not in docstrings)
    return [(node.lineno, node.value) for node in constants if isinstance(node.value, str)]


def named(text: str, slugs: set[str]) -> set[str]:
    """The slugs that stand in a text as whole words (hyphens are part of a word)."""
    return slugs.intersection(re.findall(r"[a-z0-9]+(?:-[a-z0-9]+)*", text.lower()))


def entities(facts: Facts) -> set[str]:
    """Slugs of hosts, outlets, routes, enzymes, reactions and compounds."""
    tables = (facts.hosts, facts.outlets, facts.routes, facts.enzymes, facts.reactions, facts.compounds)
    return {slug for table in tables for slug in table} - set(facts.roles)


def test_the_core_names_no_entity(facts: Facts) -> None:
    slugs = entities(facts) - set(EXCEPTIONS)
    found = [
        f"{path.relative_to(ROOT)}:{line}: {', '.join(sorted(names))}"
        for path in sorted((ROOT / "src").rglob("*.py"))
        if path.relative_to(ROOT).as_posix() not in GENERATED
        for line, text in literals(path)
        if (names := named(text, slugs))
    ]
    assert not found, "\n".join(found)


def test_exceptions_are_still_needed(facts: Facts) -> None:
    files = [path for path in (ROOT / "src").rglob("*.py") if path.relative_to(ROOT).as_posix() not in GENERATED]
    texts = [text for path in files for _, text in literals(path)]
    used = {slug for text in texts for slug in named(text, set(EXCEPTIONS))}
    assert set(EXCEPTIONS) == used & entities(facts)


def test_a_named_entity_is_seen() -> None:
    assert named('if enzyme == "pep-carboxylase":', {"pep-carboxylase", "pep"}) == {"pep-carboxylase"}


SHORTHAND = {
    "compartment suffix": r"\[[cmpex]\]",
    "key of a reference table": r"\b(?:akg|accoa|oaa|fum_c|proton_out|nadp_h)\b",
    "boolean logic in text": r"\w \((?:\w+ (?:and|or) )+\w+\)",
    "underscore in an address": r"/id/[a-z]+/[\w./-]*_|(?<![\w:/])(?:c|r|e|o|rt|s|k|h|unit|circ)?:[a-z0-9-]+_[a-z0-9_-]+",
}


@pytest.mark.parametrize("what", SHORTHAND)
def test_facts_carry_no_shorthand(what: str) -> None:
    pattern = re.compile(SHORTHAND[what])
    found = [
        f"{path.relative_to(ROOT)}:{number}: {line.strip()}"
        for path in sorted((ROOT / "graph_data").rglob("*.ttl"))
        for number, line in enumerate(path.read_text().splitlines(), 1)
        if pattern.search(line)
    ]
    assert not found, "\n".join(found[:20])


@pytest.mark.parametrize(
    ("what", "line"),
    [
        ("compartment suffix", '  skos:prefLabel "malate [m]"@en ;'),
        ("key of a reference table", '  rdfs:comment "takes akg"@en ;'),
        ("boolean logic in text", '  hr:gene "sdhC (sdhA and sdhB)" ;'),
        ("underscore in an address", "  hr:compound c:acetyl_coa ;"),
    ],
)
def test_shorthand_is_seen(what: str, line: str) -> None:
    assert re.search(SHORTHAND[what], line)


# Written in halves, so that this file does not hold what it looks for.
FORBIDDEN = [
    r"\btrans" + r"cript\b(?! (?:level|profile))",
    r"\bseed doc" + r"ument\b",
    r"\blec" + r"ture\b",
    r"proto" + r"type LP",
    r"/wo" + r"rk/",
    r"/ro" + r"ot/",
    r"\bpy" + r"pi\.",
    r"\bnpm" + r"js\.",
    r"\bTO" + r"DO\b|\bFIX" + r"ME\b|\bXX" + r"X\b",
    r"NotImplemented" + r"Error\(\)",
]


@pytest.mark.parametrize("pattern", FORBIDDEN)
def test_words_that_do_not_belong_here(pattern: str) -> None:
    names = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, text=True, check=True).stdout.split("\0")
    found = []
    for name in filter(None, names):
        path = ROOT / name
        if not path.is_file() or path.suffix in (".png", ".parquet"):
            continue
        for number, line in enumerate(path.read_text(encoding="utf-8", errors="replace").splitlines(), 1):
            if re.search(pattern, line, re.IGNORECASE):
                found.append(f"{name}:{number}: {line.strip()[:120]}")
    assert not found, "\n".join(found[:20])


def test_only_the_agreed_top_level() -> None:
    names = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout.splitlines()
    top = {name.split("/")[0] for name in names}
    agreed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "src", "plugins", "graph_data", "tests", "examples"}
    assert {name for name in top if not name.startswith(".")} <= agreed
