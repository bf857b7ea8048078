"""Lint and types are tests."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]


def run(*command: str) -> str:
    """What a tool says when it fails, "" when it passes."""
    done = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True)
    return done.stdout + done.stderr if done.returncode else ""


def test_lint() -> None:
    assert not (said := run("ruff", "check", "--no-cache", "src", "plugins", "tests", "examples")), said


def test_types() -> None:
    assert not (said := run("mypy")), said
