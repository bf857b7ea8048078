"""`python -m headrace.hooks` writes table.py from the classes of the shipped plugins."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path

from headrace.hooks.entry import Entry
from headrace.hooks.manager import survey

TABLE = Path(__file__).with_name("table.py")
_HEAD = '''"""The plugins that ship with Headrace, written by `python -m headrace.hooks`; a test compares both."""

from __future__ import annotations

from headrace.hooks.entry import Entry

FIRST_PARTY: tuple[Entry, ...] = (
'''


def written(entries: Iterable[Entry]) -> str:
    """The text of table.py for these entries."""
    return _HEAD + "".join(_entry(entry) for entry in entries) + ")\n"


def _entry(entry: Entry) -> str:
    shown = ("name", "module", "attribute", "summary", "hooks", "families")
    lines = "".join(f"        {field}={_literal(getattr(entry, field))},\n" for field in shown)
    return f"    Entry(\n{lines}    ),\n"


def _literal(value: str | tuple[str, ...]) -> str:
    if isinstance(value, str):
        return '"' + value.replace("\\", "\\\\").replace('"', '\\"') + '"'
    items = [_literal(item) for item in value]
    return f"({', '.join(items)}{',' if len(items) == 1 else ''})"


if __name__ == "__main__":
    TABLE.write_text(written(survey()), encoding="utf-8")
