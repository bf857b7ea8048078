"""The page of a saved answer: verdict, the ledger as a figure, and a table per kind of part."""

from __future__ import annotations

from collections import defaultdict

from headrace.graph import terms as facts_terms
from headrace.outputs.rdf import terms
from headrace.outputs.rdf.shape import PARTS
from headrace.outputs.service.entity import Value, labelled, value_of
from headrace.outputs.service.http import Response
from headrace.outputs.service.pages import ledger
from headrace.outputs.service.pages.entity import downloads, terms_path, value
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Html, facts, link, table, tag, text
from headrace.outputs.service.site import Site
from headrace.pages.model import Cell
from headrace.pages.numbers import show

Said = dict[str, list[Value]]
_TITLES = {
    "Drain": "Drains",
    "Group": "Requirement by group",
    "Requirement": "Requirement by refill",
    "Closed": "Closed refills",
    "RemovalRate": "Removals",
    "FedSubstrate": "Feed",
    "Crossing": "Across the cell's boundary",
    "Shortage": "What is short",
    "Repair": "What would open it",
    "Finding": "Findings",
    "EnergyUse": "ATP spent",
    "DemandRate": "Rates of the demands",
    "ReactionRate": "Rates of reactions",
    "Closure": "Closure",
    "Draw": "What a mole of each outlet takes",
}
_ORDER = ("Finding", "Shortage", "Repair", "Group", "Requirement", "Closed", "Drain", "Draw", "FedSubstrate", "Crossing")
# What people see of each kind, in this order; all the rest is in the formats for machines. Kinds that are not listed show all.
_COLUMNS = {
    "Finding": ("findingLevel", "about", "message", "check", "citation"),
    "Group": ("prefLabel", "least", "nominal", "most", "capacity", "cover", "necessary", "member", "split"),
    "Requirement": (
        "prefLabel", "compartment", "least", "nominal", "most", "capacity", "cover", "necessary", "ec", "genes", "cofactor",
        "skeletonsPerTurn", "atp", "carbonFixed", "reading", "citation",
    ),
    "Closed": ("prefLabel", "compartment", "reason", "ec", "genes", "reading", "citation"),
    "Drain": ("outletName", "poolName", "taken", "returned", "shuttled", "net", "carbonNet", "skeletons"),
    "Draw": ("prefLabel", "skeletonsExact", "route", "originNote"),
    "FedSubstrate": ("substrate", "uptake", "carbon"),
    "Crossing": ("compound", "rate"),
    "DrawnCompound": ("compound", "rate"),
    "Shortage": ("poolName", "missing"),
    "Repair": ("change", "rowKind", "aim"),
    "RemovalRate": ("row", "rowName", "rate"),
    "ReactionRate": ("row", "rowName", "rate", "least", "most"),
}  # fmt: skip
_NUMERIC = ("integer", "decimal", "double")
_MANY = 60


def run(site: Site, iri: str) -> Response | None:
    """The page of a run; None when there is none of that address."""
    said = _said(site, iri, f"BIND(<{iri}> AS ?part)")[iri]
    if not said:
        return None
    units = _units(site)
    parts = _said(site, iri, f"<{iri}> <{terms.PART}> ?part")
    tables = _tables(parts, units)
    book = next((part for part in parts.values() if _kind(part) == "Ledger"), None)
    figure = ledger.figure({name.removeprefix(facts_terms.HR): values for name, values in (book or {}).items()})
    title = said[facts_terms.LABEL][0].text
    blocks = [_verdict(said), _about(said, units), downloads(terms_path(iri)), figure, *tables, _scenario(site, iri)]
    return page(title, *blocks)


def _said(site: Site, run: str, pattern: str) -> dict[str, Said]:
    """What is said of the parts that a pattern finds, part by part in their order."""
    rows = site.rows(f"""SELECT ?part ?i ?p ?o ?label {{
      GRAPH <{run}> {{ {pattern} . ?part ?p ?o OPTIONAL {{ ?part <{terms.INDEX}> ?i }} }}
      {labelled("?o", "label")} }} ORDER BY ?i ?part ?p ?o""")
    found: dict[str, Said] = defaultdict(lambda: defaultdict(list))
    for row in rows:
        values = found[row["part"]["value"]][row["p"]["value"]]
        each = value_of(row, "o", "label")
        if not any((each.iri, each.iri or each.text) == (other.iri, other.iri or other.text) for other in values):
            values.append(each)
    return found


def _units(site: Site) -> dict[str, str]:
    """The units of properties, as labels."""
    rows = site.rows(
        f"SELECT ?p ?u {{ ?p <{facts_terms.HAS_UNIT}> ?unit ; <{facts_terms.RDFS}label> ?l . ?unit <{facts_terms.LABEL}> ?u }}"
    )
    return {row["p"]["value"]: row["u"]["value"] for row in rows}


def _kind(part: Said) -> str:
    kinds = [
        each.iri.removeprefix(facts_terms.HR) for each in part.get(facts_terms.TYPE, []) if each.iri.startswith(facts_terms.HR)
    ]
    return kinds[0] if kinds else ""


def _verdict(said: Said) -> Html:
    answer = said.get(f"{facts_terms.HR}answer")
    grows = said.get(f"{facts_terms.HR}grows")
    word = answer[0].text if answer else ("grows" if grows and grows[0].text == "true" else "does not grow" if grows else "")
    bad = word in ("infeasible", "does not grow")
    return tag(
        "p",
        word.capitalize() + "." if word else "Drains alone: no network was solved.",
        class_=f"verdict {'no' if bad else 'yes'}",
    )


def _about(said: Said, units: dict[str, str]) -> Html:
    """The run's own values, but for what the page shows elsewhere."""
    skipped = {facts_terms.TYPE, facts_terms.LABEL, terms.PART, terms.OF_SCENARIO, terms.OF_CASE, f"{facts_terms.HR}answer"}
    pairs = []
    for name, values in said.items():
        if name in skipped or name.startswith("http://www.w3.org/ns/prov#") and not values[0].iri:
            continue
        unit = f" {units[name]}" if name in units and values[0].kind in _NUMERIC else ""
        shown = [text([_short(each), unit]) for each in values]
        pairs.append((_words(name), shown[0] if len(shown) == 1 else tag("ul", *(tag("li", each) for each in shown))))
    return facts(pairs)


def _short(each: Value) -> Html:
    return text(show(float(each.text.replace("INF", "inf")))) if each.kind in _NUMERIC else value(each)


def _words(name: str) -> str:
    """A property's name as a heading."""
    last = name.replace("#", "/").rpartition("/")[2].removesuffix("Name")
    last = {"prefLabel": "name", "rowKind": "kind", "findingLevel": "level"}.get(last, last)
    return "".join(f" {char.lower()}" if char.isupper() else char for char in last).strip()


def _kind_shown(part: Said) -> str:
    """The kind under which a part is shown: closed refills have a table of their own."""
    kind, is_open = _kind(part), part.get(f"{facts_terms.HR}open")
    return "Closed" if kind == "Requirement" and is_open and is_open[0].text == "false" else kind


def _tables(parts: dict[str, Said], units: dict[str, str]) -> list[Html]:
    by_kind: dict[str, list[Said]] = defaultdict(list)
    for part in parts.values():
        by_kind[_kind_shown(part)].append(part)
    known = [each.kind.removeprefix(facts_terms.HR) for each in PARTS.values()]
    order = [*_ORDER, *(kind for kind in known if kind not in _ORDER), *sorted(set(by_kind) - set(known) - set(_ORDER))]
    kinds = [kind for kind in dict.fromkeys(order) if kind in by_kind and kind not in ("Ledger", "")]
    return [tag("section", tag("h2", _TITLES.get(kind, kind)), _table(kind, by_kind[kind], units)) for kind in kinds]


def _table(kind: str, rows: list[Said], units: dict[str, str]) -> Html:
    names = _columns(kind, rows)
    numeric = [any(each.kind in _NUMERIC for row in rows for each in row.get(name, ())) for name in names]
    heads = [
        _words(name) + (f" ({units[name]})" if name in units and at else "") for name, at in zip(names, numeric, strict=True)
    ]
    body = [[_cell(row.get(name, [])) for name in names] for row in rows]
    shown = table(_TITLES.get(kind, kind), heads, body, numeric)
    return tag("details", tag("summary", f"{len(rows)} rows"), shown) if len(rows) > _MANY else shown


def _columns(kind: str, rows: list[Said]) -> list[str]:
    """The predicates that a table shows, of those that its rows have."""
    there = dict.fromkeys(name for row in rows for name in row)
    if kind in _COLUMNS:
        wanted = [facts_terms.LABEL if name == "prefLabel" else facts_terms.HR + name for name in _COLUMNS[kind]]
        return [name for name in wanted if name in there]
    return sorted(set(there) - {facts_terms.TYPE, terms.PART, terms.INDEX, terms.TABLE})


def _cell(values: list[Value]) -> Cell | Html:
    if not values:
        return None
    if len(values) == 1 and values[0].kind in _NUMERIC:
        return float(values[0].text.replace("INF", "inf"))
    shown: list[Html] = []
    for each in values:
        shown += [text(", "), value(each)] if shown else [value(each)]
    return text(shown)


def _scenario(site: Site, iri: str) -> Html | None:
    rows = site.rows(
        f"""SELECT ?t ?n {{ <{iri}/scenario> <{terms.SCENARIO_TEXT}> ?t
          OPTIONAL {{ <{iri}/scenario> <{terms.SCENARIO_NAME}> ?n }} }}"""
    )
    links = tag(
        "p", link(f"{iri}/case", "The case that it became"), "; ", link(f"{iri}/activity", "how this answer was made"), "."
    )
    if not rows:
        return tag("section", tag("h2", "Scenario"), links)
    name = rows[0]["n"]["value"] if "n" in rows[0] else "as written"
    return tag("section", tag("h2", "Scenario"), links, tag("details", tag("summary", name), tag("pre", rows[0]["t"]["value"])))
