"""Programs that some tests need: skipped with the reason where one is missing; in CI that is a failure."""

from __future__ import annotations

import os
import shutil
import sys
from pathlib import Path

import pytest


def program(name: str, package: str) -> str:
    """The path of a program. package: what brings it, for the message."""
    beside = Path(sys.executable).parent / name
    found = str(beside) if beside.exists() else shutil.which(name)
    if found:
        return found
    reason = f"{name} is not installed ({package} brings it)"
    if os.environ.get("CI", "") not in ("", "0", "false"):
        pytest.fail(f"in CI nothing is skipped: {reason}")
    pytest.skip(reason)
