"""What all pages share."""

from __future__ import annotations

from headrace.outputs.service.http import Response
from headrace.outputs.service.negotiate import HTML
from headrace.outputs.service.pages.markup import Child, Html, tag, text

_LINKS = (("/", "Designs"), ("/browse", "Facts"), ("/sparql", "Query"), ("/ask", "Ask"))
CAUTION = "A stoichiometric requirement is a lower bound from a model, not a measurement; recalled facts are shown as such."


def page(
    title: str, *body: Child, status: int = 200, here: str = "", search: str = "", headers: tuple[tuple[str, str], ...] = ()
) -> Response:
    """A whole page. here: the link that is current. search: what the search field holds."""
    head = tag(
        "head",
        tag("meta", charset="utf-8"),
        tag("title", f"{title} - Headrace" if title != "Headrace" else title),
        tag("meta", name="viewport", content="width=device-width, initial-scale=1"),
        tag("meta", name="color-scheme", content="light dark"),
        tag("link", rel="stylesheet", href="/static/headrace.css"),
        tag("link", rel="icon", href="/static/headrace.svg", type="image/svg+xml"),
        tag("script", Html(""), src="/static/headrace.js", defer=True),
    )
    main = tag("main", tag("h1", title), *body, id="main", tabindex="-1")
    shell = tag("body", tag("a", "Skip to the content", href="#main", class_="skip"), _top(here, search), main, _foot())
    markup = Html("<!doctype html>") + tag("html", head, shell, lang="en")
    return Response(status, markup.encode(), HTML.media, headers)


def _top(here: str, search: str) -> Html:
    links = [tag("li", tag("a", label, href=target, aria_current="page" if target == here else None)) for target, label in _LINKS]
    field = tag("input", id="q", name="q", type="search", value=search, maxlength="200", placeholder="malate, 6.4.1.1, aceB ...")
    form = tag("form", tag("label", "Search", for_="q"), field, tag("button", "Find"), action="/search", role="search")
    brand = tag("a", "Headrace", href="/", class_="brand")
    return tag("header", brand, tag("nav", tag("ul", *links), aria_label="Pages"), form)


def _foot() -> Html:
    machines = [
        tag("a", label, href=target) for target, label in (("/void", "VoID"), ("/openapi.json", "OpenAPI"), ("/ns", "vocabulary"))
    ]
    return tag(
        "footer",
        tag("p", CAUTION),
        tag("p", "For machines: ", *_between(machines, ", "), "; SPARQL 1.1 at ", tag("code", "/sparql"), "."),
    )


def _between(items: list[Html], gap: str) -> list[Html]:
    found: list[Html] = []
    for item in items:
        found += [text(gap), item] if found else [item]
    return found


def failure(status: int, title: str, message: str, *more: Child) -> Response:
    """A page that says what went wrong."""
    return page(title, tag("p", message, class_="wrong"), *more, status=status)
