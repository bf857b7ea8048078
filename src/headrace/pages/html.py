"""A page as a fragment of HTML, for notebooks and the service; every text is escaped."""

from __future__ import annotations

from collections.abc import Iterator
from html import escape

from headrace.pages.model import Block, Page, Table, Verbatim
from headrace.pages.numbers import show


def page(page: Page) -> str:
    """The whole page, in one element, without style or script."""
    return "\n".join(("<div>", *_parts(page), "</div>")) + "\n"


def _parts(page: Page) -> Iterator[str]:
    yield f"<h2>{escape(page.title)}</h2>"
    yield f"<p>{'<br>'.join(escape(line) for line in page.subject)}</p>"
    yield f"<p><strong>{escape(page.verdict)}</strong></p>"
    for each in page.blocks:
        yield from block(each)
    yield from (f"<p>{escape(line)}</p>" for line in (*page.footnotes, *page.cautions))
    if page.sources:
        cited = "".join(f"<li>{escape(text)}</li>" for text in page.sources)
        yield f"<details><summary>Sources</summary><ol>{cited}</ol></details>"
    if page.versions:
        yield f"<p><small>{escape(page.versions)}</small></p>"


def block(each: Block) -> Iterator[str]:
    """The elements of one block, heading included."""
    if isinstance(each, Table):
        yield table(each)
        return
    if each.title:
        yield f"<h3>{escape(each.title)}</h3>"
    if isinstance(each, Verbatim):
        yield f"<pre>{escape(each.text)}</pre>"
    elif each.listed:
        yield f"<ul>{''.join(f'<li>{escape(line)}</li>' for line in each.lines)}</ul>"
    else:
        yield from (f"<p>{escape(line)}</p>" for line in each.lines)


def table(table: Table) -> str:
    """A table with its title as caption, or its sentence for "nothing here"."""
    if not table.rows:
        return f"<h3>{escape(table.title)}</h3><p>{escape(table.empty or 'None.')}</p>"
    heads = "".join(f'<th scope="col">{escape(column.heading)}</th>' for column in table.columns)
    numbers = [' align="right"' if column.number else "" for column in table.columns]
    rows = "".join(
        f"<tr>{''.join(f'<td{at}>{escape(show(cell))}</td>' for cell, at in zip(row, numbers, strict=True))}</tr>"
        for row in table.rows
    )
    note = f"<p>{escape(table.note)}</p>" if table.note else ""
    caption = f"<caption>{escape(table.title)}</caption>"
    return f'<div class="scroll"><table>{caption}<thead><tr>{heads}</tr></thead><tbody>{rows}</tbody></table></div>{note}'
