"""`headrace review`"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import msgspec
import typer

import headrace
from headrace.errors import InputError
from headrace.outputs import files
from headrace.outputs.cli import shared
from headrace.outputs.cli.progress import working
from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, keep, wish
from headrace.outputs.cli.terminal import emit
from headrace.pages.numbers import counted
from headrace.values.answers import Document

if TYPE_CHECKING:
    from headrace.run import Desk
    from headrace.values.answers import Result

Scenarios = Annotated[list[Path], typer.Argument(metavar="SCENARIO...", help="One or more scenario files.", show_default=False)]
Folder = Annotated[Path, typer.Option("-o", "--output", metavar="DIR", help="Folder for the documents.", show_default=False)]
Force = Annotated[bool, typer.Option("--force", help="Also replace files that Headrace did not write.")]


def review(
    scenarios: Scenarios,
    output: Folder,
    force: Force = False,
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """The design-review documents.

    Markdown with all tables, and the tables as CSV files.
    """
    wished = wish(save, results, store, agent)
    desk = shared.desk()
    with working("review", len(scenarios)) as bar:
        asked = [desk.scenario(path) for path in scenarios]  # all are read before any is worked on
        found = []
        for path, question in zip(scenarios, asked, strict=True):
            bar.say(path.name)
            found.append(answered(desk, question))
            bar.step()
    keep([each for result in found for each in (result, *result.related)], wished)
    written = files.write(output, documents(desk, found, scenarios), force)
    emit(_said(written, output))
    return max(shared.exit_code(result) for result in found)


def _said(written: Sequence[Path], folder: Path) -> str:
    """The documents by name, and how many tables stand beside them."""
    tables = [path for path in written if path.suffix == ".csv"]
    lines = [str(path) for path in written if path not in tables]
    lines += [f"and {counted(len(tables), 'table')} as CSV in {folder}"] if tables else []
    return "\n".join(lines) + "\n"


def answered(desk: Desk, question: object) -> Result:
    """The requirement of a scenario, with the ceiling of each of its outlets beside it."""
    result = desk.refills(question)  # type: ignore[arg-type]
    outlets = dict.fromkeys(demand.outlet for demand in result.case.demands)
    phase = shared.stated(phase=result.plan.binding if result.plan else "")
    related = tuple(desk.ceiling(question, outlet, **phase) for outlet in outlets)  # type: ignore[arg-type]
    return msgspec.structs.replace(result, related=related)


def documents(desk: Desk, results: Sequence[Result], scenarios: Sequence[Path]) -> tuple[Document, ...]:
    """All documents of all scenarios, and an index where there are several. Raises InputError when two have one name."""
    found: dict[str, tuple[Path, Document]] = {}
    for result, path in zip(results, scenarios, strict=True):
        for document in desk.plugins.report(result):
            if document.name in found:
                first = found[document.name][0]
                raise InputError(f"this scenario and {first} would both write {document.name}", file=path, hint="rename one")
            found[document.name] = (path, document)
    each = tuple(document for _, document in found.values())
    return each if len(results) < 2 else (*each, index(results))


def index(results: Sequence[Result]) -> Document:
    """One row per scenario: what was asked and the verdict."""
    from headrace.outputs.overview import page  # only several scenarios need it
    from headrace.pages import markdown  # as above

    return Document("index.md", "text/markdown", markdown.page(page(results, headrace.__version__)))


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(review)
