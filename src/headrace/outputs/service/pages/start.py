"""The start page, the list of kinds of facts, and the list of one kind."""

from __future__ import annotations

from headrace.graph import terms
from headrace.outputs.query import named
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.outputs.service.entity import labelled
from headrace.outputs.service.http import Response
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Html, link, table, tag
from headrace.outputs.service.site import Site

_MOST_DESIGNS = 200
MOST = 500
# What can be listed: the path, the class, and what it is called.
KINDS = {
    "hosts": (terms.HOST, "Hosts"),
    "outlets": (terms.OUTLET, "Outlets"),
    "compounds": (terms.COMPOUND, "Compounds"),
    "reactions": (terms.REACTION, "Reactions"),
    "enzymes": (terms.ENZYME, "Enzymes"),
    "routes": (terms.ROUTE, "Routes"),
    "refills": (terms.REFILL, "Refills"),
    "removals": (terms.REMOVAL, "Removals"),
    "quantities": (terms.QUANTITY, "Numbers"),
    "absences": (terms.ABSENCE, "Known absences"),
    "sources": (terms.DOCUMENT, "Sources"),
}


def start(site: Site) -> Response:
    """Saved designs, and ways into the facts."""
    lead = tag(
        "p",
        "What strain designs take out of the citric acid cycle, and what must be put back: saved answers, and the facts "
        "that they rest on, each with its source.",
        class_="lead",
    )
    return page("Headrace", lead, designs(site), queries(), here="/")


def designs(site: Site) -> Html:
    """The saved designs, newest first."""
    rows = site.rows(named.find("designs").text + f" LIMIT {_MOST_DESIGNS}")
    if not rows:
        hint = tag("code", "headrace refills SCENARIO --save")
        return tag(
            "section",
            tag("h2", "Saved designs"),
            tag("p", "None yet. Save one with ", hint, ", or ", tag("a", "ask here", href="/ask"), "."),
        )
    heads = ("design", "host", "question", "answer", "design cover", "saved")
    body = []
    for row in rows:
        said = {name: term["value"] for name, term in row.items()}
        cover = float(said["cover"].replace("INF", "inf")) if "cover" in said else None
        when = tag("time", said["created"][:16].replace("T", " "), datetime=said["created"])
        body.append((link(said["run"], said["design"]), said["host"], said["question"], said.get("answer", ""), cover, when))
    return tag(
        "section", tag("h2", "Saved designs"), table("Saved designs, newest first", heads, body, (False,) * 4 + (True, False))
    )


def queries() -> Html:
    """The shipped queries as links into the editor."""
    items = [
        tag("li", tag("a", query.summary, href=f"/sparql?example={name}"), " ", tag("code", name))
        for name, query in named.every().items()
    ]
    return tag("section", tag("h2", "Questions to start from"), tag("ul", *items, class_="questions"))


def browse(site: Site) -> Response:
    """The kinds of facts with their numbers."""
    classes = " ".join(f"<{kind}>" for kind, _ in KINDS.values())
    found = site.rows(f"SELECT ?c (COUNT(DISTINCT ?s) AS ?n) {{ VALUES ?c {{ {classes} }} ?s a ?c }} GROUP BY ?c")
    counts = {row["c"]["value"]: int(row["n"]["value"]) for row in found}
    rows = [(tag("a", label, href=f"/browse/{path}"), counts.get(kind, 0)) for path, (kind, label) in KINDS.items()]
    return page("Facts", table("Kinds of facts", ("kind", "how many"), rows, (False, True)), here="/browse")


def listing(site: Site, path: str, offset: int) -> Response | None:
    """The facts of one kind, a page of them; None for an unknown kind."""
    if path not in KINDS:
        return None
    kind, title = KINDS[path]
    rows = site.rows(
        f"""SELECT DISTINCT ?s ?label ?kind {{ ?s a <{kind}> FILTER(isIRI(?s) && !STRSTARTS(STR(?s), "{RUN_BASE}"))
          {labelled("?s", "label")} OPTIONAL {{ ?s <{terms.QUANTITY_KIND}> ?k {labelled("?k", "kind")} }} }}
          ORDER BY ?label ?kind ?s LIMIT {MOST + 1} OFFSET {offset}"""
    )
    items = [tag("li", link(row["s"]["value"], _name(row)), tag("small", " ", _where(row["s"]["value"]))) for row in rows[:MOST]]
    more = tag("p", tag("a", f"The next {MOST}", href=f"/browse/{path}?offset={offset + MOST}")) if len(rows) > MOST else None
    return page(title, tag("ul", *items, class_="names"), more, here="/browse")


def _name(row: dict[str, dict[str, str]]) -> str:
    return (row.get("label") or row.get("kind") or {"value": row["s"]["value"].rpartition("/")[2]})["value"]


def _where(iri: str) -> str:
    """The host that an address lies below; "" for what lies below none."""
    parts = iri.removeprefix(terms.HOST_BASE).split("/") if iri.startswith(terms.HOST_BASE) else []
    return parts[0].replace("-", " ").capitalize() if len(parts) > 1 else ""


def vocabulary(site: Site) -> Response:
    """All terms of our vocabulary, each with its own anchor."""
    comment, named_by, unit = f"{terms.RDFS}comment", f"{terms.RDFS}isDefinedBy", terms.HAS_UNIT
    rows = site.rows(
        f"""SELECT ?s ?label ?comment ?unit ?class {{
          ?s <{named_by}> <{terms.HR.rstrip("#")}> ; <{comment}> ?comment ; <{terms.TYPE}> ?class
          {labelled("?s", "label")} OPTIONAL {{ ?s <{unit}>/<{terms.LABEL}> ?unit }} }} ORDER BY LCASE(?label) ?s"""
    )
    parts = []
    terms_once = {row["s"]["value"]: row for row in reversed(rows)}
    for row in reversed(terms_once.values()):
        said = {name: term["value"] for name, term in row.items()}
        kind = "class" if said["class"].endswith("#Class") else "property"
        name = said["s"].removeprefix(terms.HR)
        inner = (
            tag("dt", tag("code", f"hr:{name}"), f" {said.get('label', '')} ", tag("small", kind), id=name),
            tag("dd", said["comment"]),
        )
        parts.append(inner if "unit" not in said else (*inner, tag("dd", f"In {said['unit']}.")))
    lead = tag("p", "The words of facts and saved answers. Prefix: ", tag("code", f"hr: <{terms.HR}>"), class_="lead")
    return page("Vocabulary", lead, tag("dl", *parts, class_="terms"))
