"""What commands share: their arguments and options, and how an answer is printed."""

from __future__ import annotations

from collections.abc import Callable
from enum import StrEnum
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

import headrace
from headrace.outputs.cli import seam
from headrace.outputs.cli.progress import Bar, working
from headrace.outputs.cli.saving import Wish, keep
from headrace.outputs.cli.terminal import emit, width

if TYPE_CHECKING:
    from headrace.pages.model import Page
    from headrace.run import Desk
    from headrace.values.answers import Result


class Format(StrEnum):
    """How an answer is printed."""

    table = "table"
    json = "json"
    csv = "csv"
    md = "md"


ScenarioFile = Annotated[Path, typer.Argument(metavar="SCENARIO", help="The scenario file (TOML or JSON).", show_default=False)]
PhaseOption = Annotated[
    str, typer.Option("--phase", metavar="NAME", help="One phase of a scenario with phases.", show_default=False)
]
FormatOption = Annotated[
    Format, typer.Option("--format", help="table for people, json for machines, csv for one table, md for documents.")
]


def stated(**options: Any) -> dict[str, Any]:
    """The options that were given (those that are empty or 0 were not)."""
    return {name: value for name, value in options.items() if value}


def desk() -> Desk:
    """Facts and plugins, loaded once for this command."""
    from headrace.run import Desk  # only commands that answer something pay for the core

    return Desk()


def answer(
    scenario: Path, ask: Callable[[Desk, Bar], Result], format: Format, rates: bool = False, wish: Wish | None = None
) -> int:
    """Ask, save if wished, print, and give the exit code. ask gets the desk and the bar that shows while it takes long."""
    with working(scenario.name) as bar:
        result = ask(desk(), bar)
    keep([result], wish or Wish(), rates)
    emit(rendered(result, format, rates), exact=format is not Format.table)
    return exit_code(result)


def rendered(result: Result, format: Format, rates: bool = False) -> str:
    """The answer as text in a format."""
    if format is Format.json:
        from headrace.outputs import jsonout  # each format loads only what it needs

        return jsonout.text(jsonout.document(result, headrace.__version__, rates))
    from headrace.pages import answers  # as above

    return printed(answers.page(result, headrace.__version__, rates), format)


def printed(page: Page, format: Format) -> str:
    """A page as terminal text, Markdown or CSV."""
    from headrace.pages import csvtext, markdown, plain  # `headrace plugins` and errors need none of them

    if format is Format.csv:
        return csvtext.table(page.main)
    return markdown.page(page) if format is Format.md else plain.page(page, width())


def exit_code(result: Result) -> int:
    """0 for an answer, 1 for the answer "no": infeasible, or does not grow."""
    answer = result.answer
    no = getattr(answer, "answer", "feasible") == "infeasible" or getattr(answer, "grows", True) is False
    return seam.NO if no else 0
