"""The page of an address: what it is, its numbers with sources, what it says and what points to it."""

from __future__ import annotations

from headrace.graph import terms
from headrace.outputs.service.entity import MOST_LINKS, Entity, Incoming, Property, Value
from headrace.outputs.service.http import Response
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Child, Html, facts, link, table, tag, text
from headrace.pages.numbers import counted, show

FORMATS = (("turtle", "Turtle"), ("jsonld", "JSON-LD"), ("ntriples", "N-Triples"))
_HIDDEN = (terms.TYPE, terms.LABEL, f"{terms.RDFS}label", f"{terms.RDFS}isDefinedBy")
_NUMERIC = ("integer", "decimal", "double")
_MOST_VALUES = 60


def entity(found: Entity) -> Response:
    """The page of any entity."""
    what = tag("p", _what(found), class_="lead")
    says = [each for each in found.says if each.iri not in _HIDDEN]
    blocks: list[Child] = [what, downloads(terms_path(found.iri))]
    blocks.append(
        _section("What is said", facts((_predicate(each.iri, each.label), _values(each)) for each in says) if says else None)
    )
    blocks.append(_section("Numbers", numbers(found.numbers) if found.numbers else None))
    blocks.append(_section("What points here", [_incoming(each) for each in found.incoming] if found.incoming else None))
    return page(found.label, *blocks)


def terms_path(iri: str) -> str:
    """The path of an address on this service."""
    return "/id/" + iri.removeprefix(terms.ID)


def _section(title: str, body: Child) -> Html | None:
    return tag("section", tag("h2", title), body) if body else None


def _what(found: Entity) -> Html:
    """One sentence: the classes, and the address that names it everywhere."""
    kinds: list[Child] = []
    for kind in found.kinds:
        kinds += [", " if kinds else "", link(kind.iri, kind.text)]
    return text(["A " if kinds else "", *kinds, ". " if kinds else "", "Its address everywhere: ", tag("code", found.iri), "."])


def downloads(path: str) -> Html:
    """Links to the same thing for machines."""
    links = [tag("a", label, href=f"{path}?format={name}", download=True) for name, label in FORMATS]
    return tag("p", "For machines: ", links[0], ", ", links[1], ", ", links[2], class_="machines")


def _predicate(iri: str, label: str) -> Html:
    return (
        tag("a", label, href=f"/ns#{iri.removeprefix(terms.HR)}") if iri.startswith(terms.HR) else tag("span", label, title=iri)
    )


def value(each: Value) -> Html:
    """A value: a link, a number, or text as it stands."""
    if each.iri:
        return link(each.iri, each.text)
    if each.kind in _NUMERIC:
        return tag("span", each.text, class_="number")
    if "\n" in each.text:
        return tag("pre", each.text)
    return text({"true": "yes", "false": "no"}.get(each.text, each.text) if each.kind == "boolean" else each.text)


def _values(property_: Property) -> Html:
    shown = [value(each) for each in property_.values[:_MOST_VALUES]]
    shown += [_nested(parts) for parts in property_.nested[:_MOST_VALUES]]
    left = len(property_.values) + len(property_.nested) - len(shown)
    if left:
        shown.append(tag("em", f"and {left} more in the formats for machines"))
    return shown[0] if len(shown) == 1 else tag("ul", *(tag("li", each) for each in shown))


def _nested(parts: list[tuple[str, Value]]) -> Html:
    said: list[Child] = []
    for name, each in parts:
        said += [", " if said else "", tag("small", f"{name} "), value(each)]
    return text(said)


def numbers(rows: list[dict[str, Value]]) -> Html:
    """Quantities with unit, range, origin, reading and source."""
    body = []
    for row in rows:
        kind = row.get("kind") or Value("number")
        low, high = (row[name].text if name in row else "" for name in ("low", "high"))
        source = value(row["source"]) if "source" in row else ""
        name = link(row["n"].iri, kind.text)
        body.append(
            (
                name,
                show(float(row["value"].text)),
                row["unit"].text,
                f"{low} to {high}" if low or high else "",
                *_trust(row),
                source,
            )
        )
    heads = ("what", "value", "unit", "range", "origin", "reading", "source")
    return table("Numbers with their sources", heads, body, (False, True) + (False,) * 5)


def _trust(row: dict[str, Value]) -> tuple[Html, Html]:
    return tuple(value(row[name]) if name in row else Html("") for name in ("origin", "reading"))  # type: ignore[return-value]


def _incoming(incoming: Incoming) -> Html:
    items = [tag("li", value(each)) for each in incoming.values]
    title = [_predicate(incoming.iri, incoming.label), f": {counted(incoming.total, 'entity', 'entities')}"]
    more = tag("p", f"The first {MOST_LINKS} of {incoming.total}; the rest by a query.") if incoming.total > len(items) else None
    inner = [tag("summary", title), tag("ul", *items, class_="names"), more]
    return tag("details", *inner, open=incoming.total <= 20)
