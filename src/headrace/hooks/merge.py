"""The one place that applies what plugins propose, and finds where proposals disagree.

Plugins propose frozen values; nothing here changes one. Two refill methods never overwrite one another: the first
stays the answer, the others stand beside it, and a disagreement on total skeletons is a stop.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

from msgspec import Struct

from headrace.errors import PluginError
from headrace.values.answers import AddedTable, Document, Draw, Ledger, RefillAnswer
from headrace.values.case import Demand, Finding

LEVELS = ("stop", "caution", "note")
_LEFT = ("drained", "released", "removed")
_RIGHT = ("refilled", "supplied")
_SAME = 1e-6  # relative; two methods that solve to 1e-9 agree far better
_CLOSED = 1e-9  # absolute, mmol/gDW/h, and relative to the largest term
TAKEN = frozenset(  # the keys of an answer in JSON, which no table may have; a test holds them to the output
    "scenario host findings versions plugins answer aim units drains draws ledger groups refills removals feed crossings drawn "
    "shortage repairs closure energy demands surplus_carbon cycling_cap design_cover rates".split()
)


class Merged(Struct, frozen=True):
    """answer: of the first method; others: of the rest, by plugin name; findings: failures and disagreements."""

    method: str
    answer: RefillAnswer
    others: tuple[tuple[str, RefillAnswer], ...]
    findings: tuple[Finding, ...]


class Said(Struct, frozen=True):
    """What the checks say: findings, stops first, and tables in the order given."""

    findings: tuple[Finding, ...]
    tables: tuple[AddedTable, ...] = ()


class Totals(Struct, frozen=True):
    """Skeletons of one ledger (mmol/gDW/h), summed anew from its rows. gap = left side - right side."""

    drained: float
    made: float
    gap: float
    scale: float


def draws(proposals: Sequence[tuple[str, Demand, Any]]) -> tuple[Draw, ...]:
    """All draws in the order of their outlets. Raises PluginError for a proposal that is no draw, empty or negative."""
    found: list[Draw] = []
    owner: dict[tuple[str, str], str] = {}
    for plugin, outlet, proposed in proposals:
        if not isinstance(proposed, tuple) or not proposed or not all(isinstance(draw, Draw) for draw in proposed):
            raise PluginError(plugin, f"drains of {outlet.outlet} gave {type(proposed).__name__}, not a tuple of draws")
        for draw in proposed:
            _check_draw(plugin, draw)
            key = (draw.outlet, " ".join(draw.scale))
            if key in owner and owner[key] != plugin:
                raise PluginError(plugin, f"and plugin {owner[key]} both drain {draw.outlet}")
            owner[key] = plugin
            found.append(draw)
    return tuple(found)


def refills(answers: Sequence[tuple[str, Any]], failures: Sequence[Finding] = ()) -> Merged:
    """The first method's answer and what the others say. Ledgers are summed anew from their rows, never trusted.

    Findings: a stop for a ledger that does not close, for methods that disagree on whether the case is feasible, and
    for methods that disagree on total skeletons, those drained or those made anew (refilled - removed), mmol/gDW/h.
    Raises PluginError for a proposal that is no answer.
    """
    for plugin, answer in answers:
        if not isinstance(answer, RefillAnswer):
            raise PluginError(plugin, f"refills gave {type(answer).__name__}, not an answer")
    method, answer = answers[0]
    found = list(failures)
    for plugin, other in answers:
        found.extend(_ledger_findings(plugin, other.ledger))
    for plugin, other in answers[1:]:
        found.extend(_disagreements(method, answer, plugin, other))
    return Merged(method, answer, tuple(answers[1:]), tuple(found))


def said(proposals: Sequence[tuple[str, Any]]) -> Said:
    """Findings and tables apart. A table whose key is taken, or that is no rectangle, is a stop that names the plugin."""
    tables: dict[str, AddedTable] = {}
    rest: list[tuple[str, Any]] = []
    for plugin, proposed in proposals:
        given = list(proposed) if proposed is not None else []
        for table in (item for item in given if isinstance(item, AddedTable)):
            if fault := _table_fault(table, tables):
                given.append(Finding("stop", "plugins", plugin, f"plugin {plugin}: its table {table.key!r} {fault}"))
            else:
                tables[table.key] = table
        rest.append((plugin, [item for item in given if not isinstance(item, AddedTable)]))
    return Said(findings(rest), tuple(tables.values()))


def findings(proposals: Iterable[tuple[str, Any]]) -> tuple[Finding, ...]:
    """All findings, each once: stops first, then cautions, then notes, in the order given.

    A check that gives something else is a stop that names the plugin.
    """
    found: dict[Finding, None] = {}
    for plugin, proposed in proposals:
        for finding in proposed if proposed is not None else ():
            if not isinstance(finding, Finding) or finding.level not in LEVELS:
                message = f"plugin {plugin}: a check gave no finding but {finding!r:.80}"
                finding = Finding("stop", "plugins", plugin, message)
            found.setdefault(finding)
    return tuple(sorted(found, key=lambda finding: LEVELS.index(finding.level)))


def documents(proposals: Iterable[tuple[str, Any]]) -> tuple[Document, ...]:
    """All documents. Raises PluginError for one that is none, that leaves the folder, or that two plugins write."""
    found: dict[str, tuple[str, Document]] = {}
    for plugin, proposed in proposals:
        for document in proposed if proposed is not None else ():
            if not isinstance(document, Document):
                raise PluginError(plugin, f"report gave {type(document).__name__}, not a document")
            name = document.name
            if not name or name.startswith(".") or any(mark in name for mark in ("/", "\\", "\0", ":")):
                raise PluginError(plugin, f"{name!r} is not a plain file name")
            if name.lower() in found:
                raise PluginError(plugin, f"and plugin {found[name.lower()][0]} both write {name}")
            found[name.lower()] = (plugin, document)
    return tuple(document for _, document in found.values())


def totals(ledger: Ledger) -> Totals:
    """drained = sum of drained rows; made = refilled - removed; gap = left - right, each from the rows alone."""
    by_kind: dict[str, float] = {}
    for row in ledger.rows:
        by_kind[row.kind] = by_kind.get(row.kind, 0.0) + row.skeletons
    left = sum(by_kind.get(kind, 0.0) for kind in _LEFT)
    right = sum(by_kind.get(kind, 0.0) for kind in _RIGHT)
    made = by_kind.get("refilled", 0.0) - by_kind.get("removed", 0.0)
    return Totals(by_kind.get("drained", 0.0), made, left - right, max(1.0, left, right))


def _table_fault(table: AddedTable, known: dict[str, AddedTable]) -> str:
    """What is wrong with a table; "" if nothing is. The keys of an answer itself are taken."""
    if not table.key.isidentifier() or table.key in known or table.key in TAKEN:
        return "has a key that is taken or is no plain name"
    if table.single and len(table.rows) != 1:
        return f"is said to have one row and has {len(table.rows)}"
    if len({column.key for column in table.columns}) < len(table.columns):
        return "has two columns of one key"
    return "" if all(len(row) == len(table.columns) for row in table.rows) else "has a row of another length than its columns"


def _check_draw(plugin: str, draw: Draw) -> None:
    if not draw.scale or not draw.origin:
        raise PluginError(plugin, f"its draw of {draw.outlet} has no {'origin' if draw.scale else 'scale'}")
    for pool in draw.pools:
        if min(pool.taken, pool.returned, pool.shuttled) < 0:
            where = f"{pool.compound} ({pool.place})"
            raise PluginError(plugin, f"its draw of {draw.outlet} has a negative term at {where}")


def _ledger_findings(plugin: str, ledger: Ledger | None) -> Iterable[Finding]:
    if ledger is None:
        return
    total = totals(ledger)
    if abs(total.gap) > _CLOSED * total.scale:
        message = f"the ledger of {plugin} does not close: its rows leave {total.gap:.3g} mmol/gDW/h"
        yield Finding("stop", "ledger", plugin, message)


def _disagreements(first: str, answer: RefillAnswer, second: str, other: RefillAnswer) -> Iterable[Finding]:
    if answer.answer != other.answer:
        message = f"{first} says {answer.answer}, {second} says {other.answer}"
        yield Finding("stop", "methods", second, message)
        return
    if answer.ledger is None or other.ledger is None:
        return
    ours, theirs = totals(answer.ledger), totals(other.ledger)
    pairs = (("drained", ours.drained, theirs.drained), ("made anew (refilled less removed)", ours.made, theirs.made))
    for what, one, two in pairs:
        if abs(one - two) > _SAME * max(1.0, abs(one), abs(two)):
            message = f"{first} and {second} disagree on skeletons {what}: {one:.6g} and {two:.6g} mmol/gDW/h"
            yield Finding("stop", "methods", second, message)
