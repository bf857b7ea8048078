"""One import direction. Imports inside functions and for type checking count like any other."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path
from typing import NamedTuple

import pytest

ROOT = Path(__file__).resolve().parents[2]
LEAVES = {"errors", "names", "units", "settings", "paths", "values", "pages", "solve"}
ORDER = ["graph", "case", "network", "hooks", "plugins", "run", "outputs"]
# Modules beside the layers: what they may import, as the highest layer.
BESIDE = {"": "outputs", "api": "hooks", "testing": "outputs", "benchmark": "outputs", "__main__": "outputs"}
LAZY = ("headrace/__init__.py", "headrace/units.py", "headrace/graph/", "headrace/outputs/", "headrace/solve/sampling.py")
OWNERS = {
    "highspy": {"headrace/solve/linear.py"},
    "flint": {"headrace/solve/exact.py"},
    "pint": {"headrace/units.py"},
    "SALib": {"headrace/solve/sampling.py"},
    "scipy": {"headrace/solve/sampling.py"},
    "importlib": {"headrace/hooks/manager.py"},
    "pkgutil": {"headrace/hooks/manager.py"},
    "pluggy": {"headrace/hooks/manager.py", "headrace/hooks/specs.py"},
}


class Import(NamedTuple):
    """One imported module: its dotted name, where it stands, whether in a function, and the source line."""

    target: str
    line: int
    hidden: bool
    text: str


def sources() -> list[tuple[str, Path]]:
    """(path below src/ or plugins/, file) of all code that ships."""
    found = []
    for base in (ROOT / "src", ROOT / "plugins"):
        found += [(path.relative_to(base).as_posix(), path) for path in sorted(base.rglob("*.py"))]
    return found


def modules() -> set[str]:
    return {module_of(name) for name, _ in sources()}


def module_of(name: str) -> str:
    return name.removesuffix(".py").removesuffix("/__init__").replace("/", ".")


def imports(source: str, name: str) -> Iterator[Import]:
    """Every import of a file; `from package import module` counts as the module where there is one."""
    lines = source.splitlines()
    tree = ast.parse(source, name)
    hidden = {
        id(inner)
        for node in ast.walk(tree)
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda)
        for inner in ast.walk(node)
    }
    package = name.removesuffix(".py").split("/")
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            targets = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            start = ".".join(package[: -node.level]) if node.level else ""
            base = ".".join(filter(None, (start, node.module)))
            targets = [f"{base}.{alias.name}" for alias in node.names]
        elif isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "__import__":
            targets = ["importlib"]
        else:
            continue
        yield from (Import(target, node.lineno, id(node) in hidden, lines[node.lineno - 1]) for target in targets)


def layer(module: str) -> str | None:
    """The layer of a module of ours, "" for the package itself; None for other people's."""
    parts = module.split(".")
    if parts[0] == "headrace_plugins":
        return "plugins"
    if parts[0] != "headrace":
        return None
    return parts[1] if len(parts) > 1 else ""


def rank(name: str) -> int:
    """Leaves 0, then the order of layers; modules beside them rank just above what they may import."""
    if name in LEAVES:
        return 0
    return ORDER.index(BESIDE.get(name, name)) + 1


def wrong_direction(name: str, source: str, known: set[str]) -> list[str]:
    """The imports of a file that break the direction, one line of text each."""
    here = layer(module_of(name))
    assert here is not None
    faults = []
    for item in imports(source, name):
        target = item.target if item.target in known else item.target.rpartition(".")[0]
        there = layer(target)
        if there is None or (there == "" and target == "headrace"):
            continue
        upward = there in BESIDE and here != there and not (there == "api" and rank(here) > rank("hooks"))
        foreign_leaf = here == "values" and there != "values" or here == "solve" and there not in ("solve", "errors")
        if upward or foreign_leaf or rank(there) > rank(here):
            faults.append(f"{name}:{item.line} imports {target}")
    return faults


def test_every_layer_is_known() -> None:
    unknown = {layer(module) for module in modules()} - LEAVES - set(ORDER) - set(BESIDE)
    assert not unknown


def test_imports_go_one_way() -> None:
    known = modules()
    faults = [fault for name, path in sources() for fault in wrong_direction(name, path.read_text(), known)]
    assert not faults, "\n".join(faults)


@pytest.mark.parametrize(
    ("name", "line"),
    [
        ("headrace/graph/load.py", "from headrace.network import build"),
        ("headrace/case/levels.py", "def f():\n    from headrace import run"),
        ("headrace/values/case.py", "from headrace.names import slugify"),
        ("headrace/solve/linear.py", "from headrace.values.facts import Facts"),
        ("headrace/hooks/merge.py", "import headrace_plugins.drains.lipids"),
        ("headrace/network/build.py", "from headrace.api import Draw"),
        ("headrace_plugins/drains/lipids.py", "from headrace.run import refills"),
        ("headrace/run.py", "from headrace.outputs.cli import main"),
    ],
)
def test_a_wrong_import_is_seen(name: str, line: str) -> None:
    known = {*modules(), "headrace.run", "headrace.outputs.cli.main", "headrace.network.build", "headrace_plugins.drains.lipids"}
    assert len(wrong_direction(name, line, known)) == 1


def test_no_import_circles() -> None:
    known = modules()
    edges: dict[str, set[str]] = {}
    for name, path in sources():
        typing_only = _type_checking_lines(path.read_text())
        found = (item for item in imports(path.read_text(), name) if item.line not in typing_only)
        targets = {item.target if item.target in known else item.target.rpartition(".")[0] for item in found}
        edges[module_of(name)] = {target for target in targets if target in known and target != "headrace"} - {module_of(name)}
    edges["headrace"] = set()
    assert not (circle := _circle(edges)), " -> ".join(circle)


def _type_checking_lines(source: str) -> set[int]:
    blocks = [node for node in ast.walk(ast.parse(source)) if isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test)]
    return {line for block in blocks for line in range(block.lineno, (block.end_lineno or block.lineno) + 1)}


def _circle(edges: dict[str, set[str]]) -> list[str]:
    """A circle of modules, or nothing (depth first, colours)."""
    done: set[str] = set()

    def visit(module: str, path: list[str]) -> list[str]:
        if module in path:
            return [*path[path.index(module) :], module]
        if module in done:
            return []
        for target in sorted(edges.get(module, ())):
            if found := visit(target, [*path, module]):
                return found
        done.add(module)
        return []

    return next((found for module in sorted(edges) if (found := visit(module, []))), [])


def test_a_circle_is_seen() -> None:
    assert _circle({"a": {"b"}, "b": {"c"}, "c": {"b"}}) == ["b", "c", "b"]


@pytest.mark.parametrize("library", OWNERS)
def test_each_of_these_libraries_has_one_home(library: str) -> None:
    users = {name for name, path in sources() for item in imports(path.read_text(), name) if item.target.split(".")[0] == library}
    assert users <= OWNERS[library]


def test_imports_inside_functions_say_why() -> None:
    faults = []
    for name, path in sources():
        explained = 0  # the last line whose import is explained; the next line may go on from it
        for item in sorted(imports(path.read_text(), name), key=lambda item: item.line):
            if item.hidden and "#" not in item.text and item.line - explained > 1 or item.hidden and not name.startswith(LAZY):
                faults.append(f"{name}:{item.line} {item.text.strip()}")
            elif item.hidden:
                explained = item.line
    assert not faults, "allowed in few places, with the reason on the line:\n" + "\n".join(faults)


def test_solve_is_domain_free() -> None:
    """No word of the trade in the solver's layer: it could serve any other field."""
    words = ("compound", "skeleton", "refill", "outlet", "anchor", "enzyme", "biomass")
    texts = [(name, path.read_text().lower()) for name, path in sources() if "/solve/" in name]
    assert not [f"{name}: {word}" for name, text in texts for word in words if word in text]
