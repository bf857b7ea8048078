"""`headrace plugins`"""

from __future__ import annotations

from typing import TYPE_CHECKING

import typer

import headrace
from headrace.outputs.cli.shared import Format, FormatOption, printed
from headrace.outputs.cli.terminal import emit
from headrace.pages.model import Column, Page, Table
from headrace.pages.numbers import counted

if TYPE_CHECKING:
    from headrace.hooks.manager import Manager


def plugins(format: FormatOption = Format.table) -> int:
    """What is loaded, from where and with which hooks."""
    from headrace.hooks.manager import Manager  # the other commands come to it through the core

    manager = Manager.load()
    if format is Format.json:
        from headrace.outputs import jsonout  # each format loads only what it needs

        emit(jsonout.text(_document(manager)), exact=True)
    else:
        emit(printed(page(manager), format), exact=format is not Format.table)
    return 0


def page(manager: Manager) -> Page:
    """All plugins as a page."""
    table = _loaded(manager)
    refused = _refused(manager)
    return Page(
        title="Plugins",
        subject=(),
        verdict=f"{counted(len(table.rows), 'plugin')} {_are(table)} loaded, {len(refused.rows)} {_are(refused)} refused.",
        blocks=(table, refused) if refused.rows else (table,),
        main=table,
        versions=f"headrace {headrace.__version__}",
    )


def _are(table: Table) -> str:
    return "is" if len(table.rows) == 1 else "are"


def _loaded(manager: Manager) -> Table:
    columns = (Column("plugin"), Column("from"), Column("hooks"), Column("families"), Column("what it does"))
    entries = manager.entries.values()
    rows = tuple((e.name, e.origin, ", ".join(e.hooks), ", ".join(e.families), e.summary) for e in entries)
    return Table("plugins", "Loaded", columns, rows, empty="None.")


def _refused(manager: Manager) -> Table:
    columns = (Column("plugin"), Column("from"), Column("why it is not used"))
    return Table("refused", "Refused", columns, tuple((r.name, r.origin, r.reason) for r in manager.refused))


def _document(manager: Manager) -> dict[str, object]:
    loaded = [
        {"name": e.name, "origin": e.origin, "hooks": list(e.hooks), "families": list(e.families), "summary": e.summary}
        for e in manager.entries.values()
    ]
    refused = [{"name": r.name, "origin": r.origin, "reason": r.reason} for r in manager.refused]
    return {"plugins": loaded, "refused": refused, "versions": {"headrace": headrace.__version__}}


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(plugins)
