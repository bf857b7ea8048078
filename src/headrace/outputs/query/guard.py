"""What a query may not do, found at the level of tokens, before any engine sees it.

Refused: updates, SERVICE, LOAD, and FROM with a graph that is not here. Nothing is ever fetched for a query; workers
moreover can open no file or connection while they answer one (`work`).
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from urllib.parse import urljoin, urlsplit

from msgspec import Struct

from headrace.errors import InputError
from headrace.graph import terms
from headrace.outputs.query.tokens import Token, line, tokens, unescaped
from headrace.outputs.rdf.terms import RUN_BASE

FORMS = ("select", "construct", "describe", "ask")
UPDATES = ("insert", "delete", "load", "clear", "drop", "create", "add", "move", "copy", "with")
LONGEST = 1_000_000
DEEPEST = 64
PREFIXES = {name: base for name, base in terms.PREFIXES.items() if name != "except"} | {"run": RUN_BASE}
_OPEN, _CLOSE = "([{", ")]}"
_FOREIGN = ("bif", "sql")  # engine extensions that reach outside of the data


class Query(Struct, frozen=True):
    """A query that may run. form: select, construct, describe, ask. default, named: the graphs of its FROM and FROM NAMED
    clauses; both None without any. undeclared: usual prefixes that it uses without declaring them. names_graphs: whether
    it has a GRAPH pattern."""

    text: str
    form: str
    default: tuple[str, ...] | None = None
    named: tuple[str, ...] | None = None
    undeclared: tuple[str, ...] = ()
    names_graphs: bool = False

    def standalone(self) -> str:
        """The text with all its prefixes declared, for an engine that knows none. (On the first line, so that the lines
        of error messages stay right.)"""
        return "".join(f"PREFIX {name}: <{PREFIXES[name]}> " for name in self.undeclared) + self.text


def check(text: str) -> Query:
    """The query, if it may run. Raises InputError, with the line, for what is refused or is no query."""
    if len(text) > LONGEST:
        raise InputError(f"the query has {len(text)} characters", accepted=f"at most {LONGEST}")
    plain = unescaped(text)
    found = list(_shallow(plain, tokens(plain)))
    start, prefixes, base = _prologue(plain, found)
    form = _form(plain, found, start)
    _words(plain, found[start:])
    default, named = _dataset(plain, found[start:], prefixes, base)
    names_graphs = any(token.kind == "word" and token.text.lower() == "graph" for token in found[start:])
    return Query(plain, form, default, named, _undeclared(plain, found, prefixes), names_graphs)


def _refuse(text: str, token: Token, what: str, accepted: str = "", hint: str = "") -> InputError:
    return InputError(what, line=line(text, token.at), read=token.text[:80], accepted=accepted, hint=hint)


def _shallow(text: str, found: Iterable[Token]) -> Iterator[Token]:
    """The tokens, up to where brackets stand too deep."""
    depth = 0
    for token in found:
        if token.kind == "sign" and token.text in _OPEN:
            depth += 1
            if depth > DEEPEST:
                raise _refuse(text, token, f"nested deeper than {DEEPEST} brackets")
        elif token.kind == "sign" and token.text in _CLOSE:
            depth -= 1
        yield token


def _prologue(text: str, found: Sequence[Token]) -> tuple[int, dict[str, str], str]:
    """Where the prologue ends, and the prefixes and base that it declares."""
    prefixes, base, at = {}, "", 0
    while at < len(found) and found[at].kind == "word" and found[at].text.lower() in ("prefix", "base"):
        word = found[at].text.lower()
        if word == "base" and at + 1 < len(found) and found[at + 1].kind == "iri":
            base = urljoin(base, found[at + 1].text[1:-1])
            at += 2
        elif word == "prefix" and at + 2 < len(found) and found[at + 1].kind == "name" and found[at + 2].kind == "iri":
            prefixes[found[at + 1].text.removesuffix(":")] = urljoin(base, found[at + 2].text[1:-1])
            at += 3
        else:
            raise _refuse(text, found[at], "an unfinished declaration", "PREFIX name: <IRI>, or BASE <IRI>")
    return at, prefixes, base


def _form(text: str, found: Sequence[Token], start: int) -> str:
    accepted = "SELECT, CONSTRUCT, DESCRIBE or ASK"
    if start == len(found):
        raise InputError("no query", accepted=accepted)
    word = found[start].text.lower()
    if found[start].kind == "word" and word in UPDATES:
        raise _refuse(text, found[start], "updates are refused: the data are read-only", accepted)
    if found[start].kind != "word" or word not in FORMS:
        raise _refuse(text, found[start], "not a query", accepted)
    return word


def _words(text: str, found: Sequence[Token]) -> None:
    for token in found:
        if token.kind == "word" and token.text.lower() == "service":
            raise _refuse(text, token, "SERVICE is refused: a query reaches no other address")
        if token.kind == "word" and token.text.lower() == "load":
            raise _refuse(text, token, "LOAD is refused: the data are read-only")
        if token.kind == "name" and token.text.partition(":")[0].lower() in _FOREIGN:
            raise _refuse(text, token, "extensions of an engine are refused")
        if token.kind == "iri" and urlsplit(token.text[1:-1].strip()).scheme.lower() in (*_FOREIGN, "file"):
            raise _refuse(text, token, "addresses of files and extensions are refused")


def _dataset(
    text: str, found: Sequence[Token], prefixes: dict[str, str], base: str
) -> tuple[tuple[str, ...] | None, tuple[str, ...] | None]:
    default: list[str] = []
    named: list[str] = []
    for at, token in enumerate(found):
        if token.kind != "word" or token.text.lower() != "from":
            continue
        follows = found[at + 1 : at + 3]
        is_named = bool(follows) and follows[0].kind == "word" and follows[0].text.lower() == "named"
        graph = follows[-1] if is_named else follows[0] if follows else token
        (named if is_named else default).append(local_graph(_resolved(text, graph, prefixes, base), line(text, token.at)))
    return (tuple(default), tuple(named)) if default or named else (None, None)


def _resolved(text: str, token: Token, prefixes: dict[str, str], base: str) -> str:
    if token.kind == "iri":
        return urljoin(base, token.text[1:-1])
    prefix, _, rest = token.text.partition(":")
    known = prefixes | {name: iri for name, iri in PREFIXES.items() if name not in prefixes}
    if token.kind != "name" or prefix not in known:
        raise _refuse(text, token, "FROM without the address of a graph", "FROM <IRI>, or FROM NAMED <IRI>")
    return known[prefix] + rest.replace("\\", "")


def local_graph(iri: str, at: int | None = None) -> str:
    """The address, if a graph of this service can have it. Raises InputError for any other."""
    if not iri.startswith(terms.ID) or any(char in iri for char in '<>"{}|^`\\') or any(char <= " " for char in iri):
        hint = "nothing is fetched for a query; SELECT DISTINCT ?g { GRAPH ?g {} } lists the graphs that are here"
        raise InputError("a graph that is not here", line=at, read=iri[:200], hint=hint)
    return iri


def _undeclared(text: str, found: Sequence[Token], prefixes: dict[str, str]) -> tuple[str, ...]:
    used = {token.text.partition(":")[0] for token in found if token.kind == "name"}
    return tuple(sorted(name for name in used - set(prefixes) if name in PREFIXES))
