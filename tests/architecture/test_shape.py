"""Files that fit in a head, functions that fit on a screen, public names that are a list, docstrings on all of them."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path
from statistics import quantiles

import pytest

import headrace
from headrace import api

ROOT = Path(__file__).resolve().parents[2]
LONGEST_FILE = 400
LONGEST_FUNCTION = 60
# Longer ones, each with the reason. The generated table of plugins is not read by people.
LONG_FILES: dict[str, str] = {"src/headrace/hooks/table.py": "generated"}
LONG_FUNCTIONS: dict[str, str] = {"tests/linked/sample.py:_refill_rows": "a table of data"}


def code() -> list[Path]:
    return [path for base in ("src", "plugins", "tests", "examples") for path in sorted((ROOT / base).rglob("*.py"))]


def functions(path: Path) -> Iterator[tuple[str, int]]:
    """(file:name, lines) of each function."""
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            assert node.end_lineno is not None
            yield f"{path.relative_to(ROOT)}:{node.name}", node.end_lineno - node.lineno + 1


def test_files_fit_in_a_head(capsys: pytest.CaptureFixture[str]) -> None:
    lengths = {str(path.relative_to(ROOT)): len(path.read_text().splitlines()) for path in code()}
    tenths = quantiles(lengths.values(), n=10)
    with capsys.disabled():
        print(f"\nfiles: half below {tenths[4]:.0f} lines, nine in ten below {tenths[8]:.0f}, longest {max(lengths.values())}")
    assert not {name: lines for name, lines in lengths.items() if lines > LONGEST_FILE and name not in LONG_FILES}


def test_functions_fit_on_a_screen(capsys: pytest.CaptureFixture[str]) -> None:
    lengths = {name: lines for path in code() for name, lines in functions(path)}
    tenths = quantiles(lengths.values(), n=10)
    with capsys.disabled():
        print(f"\nfunctions: half below {tenths[4]:.0f} lines, nine in ten below {tenths[8]:.0f}, longest {max(lengths.values())}")
    assert not {name: lines for name, lines in lengths.items() if lines > LONGEST_FUNCTION and name not in LONG_FUNCTIONS}


def test_the_public_names_are_this_list() -> None:
    assert headrace.__all__ == ["__version__", "ceiling", "drains", "from_dict", "graph", "grows", "load", "read", "refills"]
    assert all(getattr(headrace, name) for name in headrace.__all__)
    assert dir(headrace) == headrace.__all__
    with pytest.raises(AttributeError, match="no attribute 'refil'"):
        headrace.refil  # noqa: B018


def test_the_names_for_plugins_are_a_list() -> None:
    assert len(api.__all__) == len(set(api.__all__))
    assert all(hasattr(api, name) for name in api.__all__)
    imported = {name for name in vars(api) if not name.startswith("_")} - {"annotations"}
    assert imported == set(api.__all__)


def test_everything_public_is_described() -> None:
    """Modules, classes, functions and public methods of classes that are no overrides."""
    missing = [name for base in ("src", "plugins") for path in sorted((ROOT / base).rglob("*.py")) for name in undescribed(path)]
    assert not missing, "\n".join(missing)


def undescribed(path: Path) -> Iterator[str]:
    tree = ast.parse(path.read_text())
    here = str(path.relative_to(ROOT))
    if tree.body and ast.get_docstring(tree) is None:
        yield here
    for node in tree.body:
        if isinstance(node, ast.ClassDef | ast.FunctionDef) and not node.name.startswith("_") and ast.get_docstring(node) is None:
            yield f"{here}:{node.lineno} {node.name}"
