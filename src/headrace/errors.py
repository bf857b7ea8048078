"""Every error that Headrace raises on purpose, with the exit code that the command line gives it.

    HeadraceError                     something the user can act on
    |-- InputError        exit 2      a scenario, an option, a query: file, line, key, what was read, what is accepted
    |-- FactsError        exit 2      a fact file that can't be read or contradicts itself: file, node
    |-- MissingPartError  exit 3      an optional part that is not installed
    `-- PluginError       exit 2      a plugin that breaks its contract: plugin

Each carries `message` (one sentence), `hint` (what to do next) and `data` (plain values for machines).
"Infeasible" is an answer, not an error. Anything else that escapes is a bug.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any


class HeadraceError(Exception):
    """Base of all errors. str() is the one message that a user sees, hint included."""

    exit_code = 2

    def __init__(self, message: str, hint: str = "", data: Mapping[str, Any] | None = None) -> None:
        super().__init__(message)
        self.message = message
        self.hint = hint
        self.data: dict[str, Any] = dict(data or {})

    def where(self) -> str:
        """The place the message is about, for the front of the line; "" when there is none."""
        return ""

    def details(self) -> list[str]:
        """Lines between message and hint."""
        return []

    def __str__(self) -> str:
        where = self.where()
        first = f"{where}: {self.message}" if where else self.message
        return "\n".join([first, *(f"  {line}" for line in [*self.details(), self.hint] if line)])


class InputError(HeadraceError):
    """Bad input from the user. near: the nearest known names; accepted: what would have been right."""

    def __init__(
        self,
        message: str,
        *,
        file: str | Path = "",
        line: int | None = None,
        key: str = "",
        read: object = None,
        accepted: str = "",
        near: Sequence[str] = (),
        hint: str = "",
    ) -> None:
        self.file = str(file)
        self.line = line
        self.key = key
        self.read = read
        self.accepted = accepted
        self.near = tuple(near)
        given = {"file": self.file, "line": line, "key": key, "read": read, "accepted": accepted, "near": list(near)}
        super().__init__(message, hint, {name: value for name, value in given.items() if value not in ("", None, [])})

    def where(self) -> str:
        parts = [self.file, f"line {self.line}" if self.line is not None else "", self.key]
        return ", ".join(part for part in parts if part)

    def details(self) -> list[str]:
        return [
            f"read: {self.read!r}" if self.read is not None else "",
            f"accepted: {self.accepted}" if self.accepted else "",
            f"nearest: {', '.join(self.near)}" if self.near else "",
        ]

    def at(self, *, file: str | Path = "", line: int | None = None, key: str = "") -> InputError:
        """The same error with a place filled in where it has none yet (names know no file, readers do)."""
        return self._placed(self.file or str(file), line if self.line is None else self.line, self.key or key)

    def moved(self, key: str) -> InputError:
        """The same error at another key (that of the file where the value really stands)."""
        return self._placed(self.file, self.line, key)

    def _placed(self, file: str, line: int | None, key: str) -> InputError:
        return type(self)(
            self.message,
            file=file,
            line=line,
            key=key,
            read=self.read,
            accepted=self.accepted,
            near=self.near,
            hint=self.hint,
        )


class FactsError(HeadraceError):
    """Fact files that can't be read, or that contradict themselves. others: how many more faults there are."""

    def __init__(self, message: str, *, file: str | Path = "", node: str = "", hint: str = "", others: int = 0) -> None:
        self.file = str(file)
        self.node = node
        self.others = others
        given = {"file": self.file, "node": node, "others": others}
        super().__init__(message, hint, {name: value for name, value in given.items() if value})

    def where(self) -> str:
        return ", ".join(part for part in (self.file, self.node) if part)

    def details(self) -> list[str]:
        return [f"and {self.others} more: headrace facts check lists all"] if self.others else []


class MissingPartError(HeadraceError):
    """An optional part is not installed. part: what is missing; the hint says how to get it."""

    exit_code = 3

    def __init__(self, part: str, purpose: str, hint: str = "") -> None:
        self.part = part
        super().__init__(f"{purpose} needs {part}, which is not installed", hint, {"part": part})


class PluginError(HeadraceError):
    """A plugin that breaks its contract, named."""

    def __init__(self, plugin: str, message: str, hint: str = "", data: Mapping[str, Any] | None = None) -> None:
        self.plugin = plugin
        super().__init__(message, hint, {"plugin": plugin, **(data or {})})

    def where(self) -> str:
        return f"plugin {self.plugin}"
