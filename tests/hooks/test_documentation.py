"""Every hook stands in DEVELOPERS.md with its exact signature, and has a test."""

from __future__ import annotations

import inspect
import os
import re
from pathlib import Path

import pytest

from headrace.hooks.entry import HOOKS
from headrace.hooks.specs import Hooks

ROOT = Path(__file__).resolve().parents[2]
PAGE = ROOT / "DEVELOPERS.md"
BLOCK = re.compile(r"(<!-- hooks: [^>]*-->\n).*?(<!-- /hooks -->)", re.DOTALL)


def signature(hook: str) -> str:
    """`name(argument: Type, ...) -> Type`, as a plugin's author writes it."""
    method = inspect.signature(getattr(Hooks, hook))
    shown = [str(parameter) for parameter in list(method.parameters.values())[1:]]
    return f"{hook}({', '.join(shown)}) -> {method.return_annotation}".replace("'", "")


def described() -> str:
    """The part of the page that is made from the hooks."""
    parts = []
    for hook in HOOKS:
        sentence = inspect.getdoc(getattr(Hooks, hook))
        parts.append(f"```python\n{signature(hook)}\n```\n{sentence}\n")
    return "\n" + "\n".join(parts) + "\n"


def test_the_page_shows_the_exact_hooks() -> None:
    text = PAGE.read_text()
    wanted = BLOCK.sub(lambda match: match[1] + described() + match[2], text)
    if os.environ.get("HEADRACE_WRITE_DOCS"):
        PAGE.write_text(wanted)
    assert text == wanted, "HEADRACE_WRITE_DOCS=1 pytest tests/hooks/test_documentation.py brings the page up to date"
    assert BLOCK.search(text)


@pytest.mark.parametrize("hook", HOOKS)
def test_every_hook_has_one_sentence(hook: str) -> None:
    sentence = inspect.getdoc(getattr(Hooks, hook)) or ""
    assert sentence.endswith(".")
    assert len(sentence) < 130


CALLS = {
    "facts": "fact_folders",
    "drains": "drains",
    "refills": "refills",
    "checks": "checks",
    "report": "report",
}


@pytest.mark.parametrize("hook", HOOKS)
def test_every_hook_has_a_test_through_the_manager(hook: str) -> None:
    texts = [path.read_text() for path in Path(__file__).parent.glob("test_*.py") if path.name != Path(__file__).name]
    assert any(f".{CALLS[hook]}(" in text and "Manager(" in text for text in texts)


def test_attributes_of_a_plugin_are_all_in_the_page() -> None:
    table = re.findall(r"^\| `(\w+)` \|", PAGE.read_text(), re.MULTILINE)
    assert table == ["name", "summary", "families", "facts_needed", "options", "example"]
