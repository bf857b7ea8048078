"""Scenarios that are wrong in one way each, and what a user must be told. Shared by tests of the case and of the commands."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import NamedTuple

HERE = Path(__file__).parent


class Broken(NamedTuple):
    """A file and its expected message: part of the text, key ("" = none), line (None = none) and a name that is offered."""

    name: str
    says: str
    key: str = ""
    line: int | None = None
    near: str = ""

    def path(self, folder: Path) -> Path:
        """Where the file is; the one too large to keep is written into `folder`."""
        if self.name != "too-large.toml":
            return HERE / self.name
        large = folder / self.name
        large.write_text('host = "escherichia-coli"\n' + "# filler\n" * 120_000)
        return large


def all_broken() -> list[Broken]:
    """Every entry of expected.toml."""
    expected = tomllib.loads((HERE / "expected.toml").read_text())
    return [Broken(name, **values) for name, values in expected.items()]
