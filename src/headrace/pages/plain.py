"""A page as plain text for a terminal: words first, then tables that keep to the width.

Columns of text give way when a table is too wide, largest first; numbers never break and stand with their points
below one another.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator, Sequence
from textwrap import wrap

from headrace.pages.citing import DAGGER
from headrace.pages.model import Block, Cell, Column, Page, Table, Verbatim
from headrace.pages.numbers import UNKNOWN, counted, show

_INDENT = "  "
_GAP = "  "
_NARROWEST = 9
_TIED = (f" {DAGGER}", f"\N{NO-BREAK SPACE}{DAGGER}")
_PIECE = re.compile(r"[^\s-]+-?|-")  # what a line break can't part: words, and the parts of words with hyphens


def page(page: Page, width: int = 100) -> str:
    """The whole page in lines of at most `width` characters (where words and numbers allow). Ends with a newline."""
    width = max(width, 40)
    lines = [page.title, *(piece for line in page.subject for piece in wrap(line, width)), ""]
    lines += [*wrap(page.verdict, width), ""]
    hidden = [each.title for each in page.blocks if isinstance(each, Table) and each.detail]
    for each in page.blocks:
        lines += [*block(each, width), ""] if not isinstance(each, Table) or not each.detail else []
    if hidden:
        lines += wrap(f"With --format md or json also: {'; '.join(hidden)}.", width)
    for note in page.footnotes:
        lines += wrap(note, width)
    for caution in page.cautions:
        lines += wrap(f"Caution: {caution[:1].lower()}{caution[1:]}", width, subsequent_indent=_INDENT)
    if page.sources and page.list_sources:
        lines += _sources(page.sources, width)
    elif page.sources:
        lines += wrap(f"{counted(len(page.sources), 'source')}: listed with --format md and in the review.", width)
    if page.versions:
        lines += wrap(page.versions, width, subsequent_indent=_INDENT)
    return "\n".join(line.rstrip() for line in lines) + "\n"


def _sources(sources: Sequence[str], width: int) -> Iterator[str]:
    yield "Sources"
    for number, text in enumerate(sources, start=1):
        yield from wrap(f"[{number}] {text}", width, initial_indent=_INDENT, subsequent_indent=_INDENT * 2)
    yield ""


def block(each: Block, width: int) -> list[str]:
    """The lines of one block, heading included."""
    if isinstance(each, Table):
        return list(_table(each, width))
    if isinstance(each, Verbatim):
        return [each.title, *(_INDENT + line for line in each.text.splitlines())]
    mark = "- " if each.listed else ""
    lines = [each.title] if each.title else []
    for line in each.lines:
        lines += wrap(line, width, initial_indent=_INDENT + mark, subsequent_indent=_INDENT + " " * len(mark))
    return lines


def _table(table: Table, width: int) -> Iterator[str]:
    title, columns, rows = _shown(table)
    if not rows:
        yield title
        yield from wrap(table.empty or "None.", width, initial_indent=_INDENT, subsequent_indent=_INDENT)
        return
    common, said = _units(columns)
    yield from wrap(f"{title} ({said})" if said else title, width, subsequent_indent=_INDENT)
    groups = [show(row[0]) for row in rows] if table.grouped else None
    if groups is not None:
        columns, rows = columns[1:], [row[1:] for row in rows]
    indent = _INDENT * (2 if groups is not None else 1)
    yield from _grid(columns, rows, groups, common, width - len(indent), indent)
    yield from wrap(table.note, width, initial_indent=_INDENT, subsequent_indent=_INDENT)


def _shown(table: Table) -> tuple[str, list[Column], list[list[Cell]]]:
    """Title, columns and rows without details, and without a place that all rows share (it goes to the title)."""
    title, kept = table.title, []
    for place, column in enumerate(table.columns):
        values = {row[place] for row in table.rows}
        if column.alike and len(table.rows) > 1 and len(values) == 1:
            title += f", {column.title} the {values.pop()}"
        elif not column.detail:
            kept.append(place)
    return title, [table.columns[place] for place in kept], [[row[place] for place in kept] for row in table.rows]


def _units(columns: Sequence[Column]) -> tuple[set[str], str]:
    """Units that the title says, and its words: the commonest, and one other if a single column has it."""
    counts = Counter(column.unit for column in columns if column.number and column.unit)
    if not counts:
        return set(), ""
    (first, times), *others = counts.most_common()
    if not others:
        return {first}, first
    if times > 1 and len(others) == 1 and others[0][1] == 1:
        odd = next(column for column in columns if column.number and column.unit == others[0][0])
        return {first, odd.unit}, f"{first}; {odd.title} in {odd.unit}"
    return set(), ""


def _grid(
    columns: Sequence[Column], rows: list[list[Cell]], groups: list[str] | None, said: set[str], width: int, indent: str
) -> Iterator[str]:
    texts = _aligned(columns, rows)
    heads = [_head(column, said) for column in columns]
    widths = _widths(columns, heads, texts, width)
    yield from _line([_fold(head, size) for head, size in zip(heads, widths, strict=True)], columns, widths, indent, True)
    last = None
    for place, cells in enumerate(texts):
        if groups is not None and groups[place] != last:
            last = groups[place]
            yield _INDENT + last
        yield from _line([_fold([cell], size) for cell, size in zip(cells, widths, strict=True)], columns, widths, indent)


def _head(column: Column, said: set[str]) -> list[str]:
    """A column's title, and its unit unless the table's title says it."""
    return [column.title, column.unit] if column.number and column.unit and column.unit not in said else [column.title]


def _aligned(columns: Sequence[Column], rows: list[list[Cell]]) -> list[list[str]]:
    """Cells as text; the numbers of a column are padded so that their decimal points stand below one another."""
    texts = [[show(cell) for cell in row] for row in rows]
    for place, column in enumerate(columns):
        if column.number:
            tails = [_tail(row[place]) for row in texts]
            longest = max(tails)
            for row, tail in zip(texts, tails, strict=True):
                row[place] += " " * (longest - tail)
    return texts


def _tail(text: str) -> int:
    return len(text) - text.index(".") if "." in text and text != UNKNOWN else 0


def _widths(columns: Sequence[Column], heads: list[list[str]], texts: list[list[str]], width: int) -> list[int]:
    """Each column as wide as it needs; text columns then give way, the widest first, whole words as long as possible."""
    widths, floors = [], []
    for place, column in enumerate(columns):
        words = max(len(word) for line in heads[place] for word in line.split())
        lines = words if column.number else max(len(line) for line in heads[place])
        widths.append(max(lines, *(len(row[place]) for row in texts)))
        floors.append(max(words, *(len(piece) for row in texts for piece in _PIECE.findall(row[place])), _NARROWEST))
    spare = width - len(_GAP) * (len(widths) - 1)
    text = [place for place, column in enumerate(columns) if not column.number]
    for floor in (lambda place: floors[place], lambda place: _NARROWEST):
        while sum(widths) > spare and (loose := [place for place in text if widths[place] > floor(place)]):
            widths[max(loose, key=widths.__getitem__)] -= 1
    return widths


def _fold(lines: Sequence[str], width: int) -> list[str]:
    """Lines of at most `width` where words allow; a dagger stays with its word."""
    pieces = [piece for line in lines for piece in (wrap(line.replace(*_TIED), width) if len(line) > width else [line])]
    return [piece.replace(_TIED[1], _TIED[0]) for piece in pieces] or [""]


def _line(
    cells: list[list[str]], columns: Sequence[Column], widths: list[int], indent: str, head: bool = False
) -> Iterator[str]:
    height = max(len(cell) for cell in cells)
    for step in range(height):
        parts = []
        for cell, column, size in zip(cells, columns, widths, strict=True):
            offset = step - (height - len(cell)) if head else step
            text = cell[offset] if 0 <= offset < len(cell) else ""
            parts.append(text.rjust(size) if column.number else text.ljust(size))
        yield indent + _GAP.join(parts).rstrip()
