"""A page as Markdown with pipe tables."""

from __future__ import annotations

import re
from collections.abc import Iterator

from headrace.pages.model import Block, Notes, Page, Table, Verbatim
from headrace.pages.numbers import show


def page(page: Page) -> str:
    """The whole page. Ends with a newline."""
    return "\n".join(_lines(page)).rstrip("\n") + "\n"


def _lines(page: Page) -> Iterator[str]:
    yield f"# {escape(page.title)}"
    yield ""
    for line in page.subject:
        yield f"{escape(line)}  "
    yield ""
    yield f"**{escape(page.verdict)}**"
    yield ""
    for each in page.blocks:
        yield from block(each)
    if page.footnotes:
        yield from (f"{escape(line)}  " for line in page.footnotes)
        yield ""
    if page.cautions:
        yield from block(Notes("Cautions", page.cautions))
    if page.sources:
        yield "## Sources"
        yield ""
        yield from (f"{number}. {escape(text)}" for number, text in enumerate(page.sources, start=1))
        yield ""
    if page.versions:
        yield escape(page.versions)


def block(each: Block, level: int = 2) -> Iterator[str]:
    """The lines of one block, with an empty line at the end."""
    if each.title:
        yield f"{'#' * level} {escape(each.title)}"
        yield ""
    if isinstance(each, Table):
        yield from table(each)
    elif isinstance(each, Verbatim):
        yield from _fenced(each.text)
    else:
        for place, line in enumerate(each.lines):
            if place and not each.listed:
                yield ""
            yield f"{'- ' if each.listed else ''}{escape(line)}"
    yield ""


def table(table: Table) -> Iterator[str]:
    """A pipe table, or its sentence for "nothing here"."""
    if not table.rows:
        yield escape(table.empty or "None.")
        return
    yield _row(escape(column.heading) for column in table.columns)
    yield _row("---:" if column.number else "---" for column in table.columns)
    for row in table.rows:
        yield _row(escape(show(cell)) for cell in row)
    if table.note:
        yield ""
        yield escape(table.note)


def _fenced(text: str) -> Iterator[str]:
    """A code block whose fence is longer than any run of backticks in the text."""
    longest = max((len(run) for run in re.findall("`+", text)), default=0)
    fence = "`" * max(3, longest + 1)
    yield from (fence, *text.rstrip("\n").splitlines(), fence)


def _row(cells: Iterator[str]) -> str:
    return f"| {' | '.join(cells)} |"


def escape(text: str) -> str:
    """Text that Markdown leaves as it is: no pipes that split cells, no stars, underscores, tags or backticks that
    format, no headings or quotes, no line breaks."""
    for mark in "\\|*_`<":
        text = text.replace(mark, f"\\{mark}")
    text = " ".join(text.split())
    return f"\\{text}" if text.startswith(("#", ">")) else text
