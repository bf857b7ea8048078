"""Runs finding rules over the facts, once per build: each row becomes a `RuleRow`, which a case is held against later.

A rule is a SELECT of ?level ?about ?message, any of the triggers (?host and those that `RuleRow` names) and ?source,
which may differ between rows that say the same. Triggers are addresses; ?oxygen is hr:present or hr:absent.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import msgspec
from pyoxigraph import NamedNode, QuerySolutions, Store

from headrace.errors import FactsError
from headrace.graph import terms
from headrace.graph.files import FactFile
from headrace.graph.read import quads, short
from headrace.graph.rules import store_of
from headrace.graph.ruletexts import RuleText
from headrace.values.depth import RuleRow
from headrace.values.facts import Facts

LEVELS = ("note", "caution", "stop")
SAID = ("level", "about", "message")
# Trigger -> the address that its values stand below; "" keeps the kind before the slug ("enzyme/…").
TRIGGERS = {
    "host": terms.HOST_BASE,
    "refill": "",
    "runs": "",
    "opened": "",
    "drained": terms.COMPOUND_BASE,
    "made": terms.COMPOUND_BASE,
    "feed": terms.COMPOUND_BASE,
    "oxygen": terms.HR,
    "missing": terms.COMPOUND_BASE,
}
Cells = dict[str, str]


def completed(facts: Facts, rules: Sequence[RuleText], files: Sequence[FactFile]) -> Facts:
    """The facts with the rows of all rules. Raises FactsError for a rule that is none."""
    if not rules:
        return facts
    store = store_of({file.name: quads(file) for file in files})
    return msgspec.structs.replace(facts, rule_rows=tuple(row for rule in rules for row in rows(rule, store)))


def rows(rule: RuleText, store: Store) -> tuple[RuleRow, ...]:
    """The rows of one rule, sorted; those that differ in their source only are one row."""
    sources: dict[tuple[tuple[str, str], ...], set[str]] = {}
    for cells in _cells(rule, store):
        source = cells.pop("source", "")
        sources.setdefault(tuple(sorted(cells.items())), set()).update({source} if source else ())
    found = (RuleRow(rule=rule.name, sources=tuple(sorted(cited)), **dict(cells)) for cells, cited in sources.items())
    return tuple(sorted(found, key=lambda row: (row.host, row.about, row.message, row.runs, row.refill, row.opened, row.feed)))


def _cells(rule: RuleText, store: Store) -> Iterable[Cells]:
    try:
        found = store.query(rule.query, use_default_graph_as_union=True)
    except SyntaxError as error:
        raise _wrong(rule, f"not valid SPARQL: {error}") from error
    if not isinstance(found, QuerySolutions):
        raise _wrong(rule, "a finding rule is a SELECT")
    names = {variable.value for variable in found.variables}
    if unknown := sorted(names - {*SAID, *TRIGGERS, "source"}):
        raise _wrong(rule, f"?{unknown[0]} is neither said nor a trigger; accepted: {', '.join((*SAID, *TRIGGERS, 'source'))}")
    if lacking := sorted(set(SAID) - names) or (["a trigger"] if names <= {*SAID, "source", "host"} else []):
        raise _wrong(rule, f"a finding rule selects {lacking[0]}")
    for solution in found:
        yield {name: text for name in names if (text := _text(rule, name, solution[name]))}


def _text(rule: RuleText, name: str, node: object) -> str:
    """A cell as the values hold it; "" where the row leaves a trigger or the source open."""
    if node is None:
        if name in SAID:
            raise _wrong(rule, f"a row leaves ?{name} open")
        return ""
    value = str(getattr(node, "value", node))
    if name == "level" and value not in LEVELS:
        raise _wrong(rule, f"?level reads {value!r}; accepted: {', '.join(LEVELS)}")
    if name in ("level", "message"):
        return value
    base = {"about": "", "source": terms.SOURCE_BASE}.get(name, TRIGGERS.get(name, ""))
    if not isinstance(node, NamedNode) or not value.startswith(base or terms.ID):
        raise _wrong(rule, f"?{name} reads {short(value)}; accepted: an address below {base or terms.ID}")
    if name == "about":
        return value.rsplit("/", 1)[-1]
    return value[len(base) :] if base else short(value)


def _wrong(rule: RuleText, message: str) -> FactsError:
    return FactsError(message, file=f"rules/findings/{rule.name}.rq")
