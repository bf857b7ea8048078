"""Building, installing and asking from outside, as a user would."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any, NamedTuple

ROOT = Path(__file__).resolve().parents[2]
SCENARIOS = sorted(path.relative_to(ROOT).as_posix() for path in (ROOT / "examples" / "scenarios").glob("*.toml"))

CHECKOUT = {"PYTHONPATH": os.pathsep.join((str(ROOT / "src"), str(ROOT / "plugins")))}  # to run without installing it


class Done(NamedTuple):
    """How a process ended."""

    code: int
    out: str
    err: str


def run(command: Sequence[str | Path], environment: Mapping[str, str] | None = None) -> Done:
    """Run a command at the top of the checkout, without what this process may have put on the import path."""
    inherited = {key: value for key, value in os.environ.items() if key not in ("PYTHONPATH", "HEADRACE_NO_CACHE", "PYTEST_ADDOPTS")}
    done = subprocess.run(
        [str(part) for part in command], cwd=ROOT, env=inherited | dict(environment or {}), capture_output=True, text=True
    )
    return Done(done.returncode, done.stdout, done.stderr)


def must(command: Sequence[str | Path], environment: Mapping[str, str] | None = None) -> str:
    """Run a command that has to work; its output."""
    done = run(command, environment)
    assert done.code == 0, f"{command}\n{done.out}\n{done.err}"
    return done.out


class Clean:
    """A virtual environment that knows nothing but what the tests put into it."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        must([sys.executable, "-m", "venv", folder])
        self.python = folder / ("Scripts" if os.name == "nt" else "bin") / "python"

    def install(self, *what: str | Path) -> None:
        must([self.python, "-m", "pip", "install", "--quiet", "--disable-pip-version-check", *what])

    def headrace(self, *arguments: str | Path, **environment: str) -> Done:
        return run([self.python, "-m", "headrace", *arguments], environment)


def wheel(source: Path, into: Path) -> Path:
    """Build the wheel of a project with the build backend of the test environment."""
    must([sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation", "-w", into, source])
    (made,) = into.glob("*.whl")
    return made


def answer(python: str | Path, scenario: str, environment: Mapping[str, str]) -> Any:
    """The JSON of `headrace refills`, feasible or not."""
    done = run([python, "-m", "headrace", "refills", scenario, "--format", "json"], environment)
    assert done.code in (0, 1), done.err
    return json.loads(done.out)


class Answers(NamedTuple):
    """The JSON of each example, and how `--version` reads, as checkout, wheel and runs without a cache give them."""

    checkout: dict[str, Any]
    wheel: dict[str, Any]
    wheel_without_cache: dict[str, Any]
    checkout_without_cache: dict[str, Any]
