"""Search by name, other name, gene, EC number, ChEBI, Rhea or title."""

from __future__ import annotations

from headrace.graph import terms
from headrace.outputs.query.literals import quoted
from headrace.outputs.service.entity import labelled
from headrace.outputs.service.http import Response
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import link, table, tag
from headrace.outputs.service.site import Site

_MOST = 100
_LONGEST = 200
_ABOUT = (terms.LABEL, terms.ALIAS, terms.CITATION, f"{terms.RDFS}label", "http://purl.org/dc/terms/title")


def results(site: Site, wanted: str) -> Response:
    """What carries a name that holds the words, exact names first."""
    words = " ".join(wanted.split())[:_LONGEST]
    if not words:
        return page(
            "Search",
            tag("p", "Type a name into the field above: a compound, an enzyme, a gene, an EC number, a design."),
            search="",
        )
    rows = site.rows(_query(words))
    title = f"Search: {words}"
    if not rows:
        hint = "Try fewer letters, or a number such as 6.4.1.1."
        return page(title, tag("p", f"Nothing is called “{words}”. {hint}"), search=words)
    heads = ("name", "what it is", "found as")
    body = [
        (
            link(row["s"]["value"], row.get("label", row["found"])["value"]),
            row.get("kind", {}).get("value", ""),
            row["found"]["value"],
        )
        for row in rows[:_MOST]
    ]
    note = tag("p", f"The first {_MOST}; say more of the name to see others.") if len(rows) > _MOST else None
    return page(title, table("Found", heads, body), note, search=words)


def _query(words: str) -> str:
    text = quoted(words.lower())
    names = " ".join(f"<{name}>" for name in _ABOUT)
    numbers = f"<{terms.EC}> <{terms.CHEBI}> <{terms.RHEA_ID}>"
    return f"""SELECT ?s (SAMPLE(?l) AS ?label) (SAMPLE(?k) AS ?kind) (MIN(?as) AS ?found) (MAX(?exact) AS ?first) {{
      {{ VALUES ?p {{ {names} }} ?s ?p ?name }}
      UNION {{ ?s <{terms.ISOZYME}>/<{terms.GENE}> ?name }}
      UNION {{ VALUES ?p {{ {numbers} }} ?s ?p ?iri BIND(REPLACE(STR(?iri), "^.*[/_]", "") AS ?name) }}
      FILTER(isIRI(?s) && CONTAINS(LCASE(STR(?name)), {text}))
      BIND(STR(?name) AS ?as) BIND(IF(LCASE(?as) = {text}, 2, IF(STRSTARTS(LCASE(?as), {text}), 1, 0)) AS ?exact)
      {labelled("?s", "l")} OPTIONAL {{ ?s a ?class . ?class <{terms.RDFS}label> ?k }}
    }} GROUP BY ?s ORDER BY DESC(?first) ?label ?s LIMIT {_MOST + 1}"""
