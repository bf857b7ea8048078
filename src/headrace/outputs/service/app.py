"""Routes, and the WSGI application: one request in, one response out, errors as bodies that say what went wrong."""

from __future__ import annotations

import sys
import traceback
from collections.abc import Callable, Iterable
from pathlib import Path
from typing import Any

import msgspec

from headrace.outputs.query.formats import BY_NAME, GRAPHS, Format
from headrace.outputs.service import ask, describe, entity, openapi, protocol
from headrace.outputs.service.http import REASONS, HttpError, Request, Response, from_environ
from headrace.outputs.service.negotiate import HTML, choose
from headrace.outputs.service.pages import editor, search, start
from headrace.outputs.service.pages import entity as entity_page
from headrace.outputs.service.pages import run as run_page
from headrace.outputs.service.pages.frame import failure
from headrace.outputs.service.protocol import not_acceptable
from headrace.outputs.service.site import Site

STATIC = Path(__file__).resolve().parent / "static"
_TYPES = {".css": "text/css; charset=utf-8", ".js": "text/javascript; charset=utf-8", ".svg": "image/svg+xml"}
_POLICY = (
    "default-src 'none'; style-src 'self'; script-src 'self'; img-src 'self'; connect-src 'self'; form-action 'self'; "
    "base-uri 'none'; frame-ancestors 'none'"
)
_SAFE = (
    ("X-Content-Type-Options", "nosniff"),
    ("Referrer-Policy", "no-referrer"),
    ("Content-Security-Policy", _POLICY),
    ("Cache-Control", "no-cache"),
    ("Vary", "Accept, Origin"),
)
_FILES = {path.name: (path.read_bytes(), _TYPES[path.suffix]) for path in sorted(STATIC.iterdir()) if path.suffix in _TYPES}
Starter = Callable[[str, list[tuple[str, str]]], Any]


class App:
    """The service as a WSGI application over one site."""

    def __init__(self, site: Site) -> None:
        self.site = site

    def __call__(self, environ: dict[str, Any], start_response: Starter) -> Iterable[bytes]:
        """One request, as WSGI has it."""
        method = str(environ["REQUEST_METHOD"]).upper()
        response = self._answered(environ)
        headers = [("Content-Type", response.media), ("Content-Length", str(len(response.body)))]
        if response.status in (204, 303):
            headers = [("Content-Length", "0")]
        headers += [*response.headers, *_SAFE, *self._cors()]
        start_response(f"{response.status} {REASONS[response.status]}", headers)
        return [b"" if method == "HEAD" else response.body]

    def _answered(self, environ: dict[str, Any]) -> Response:
        request = Request("GET", "/")
        try:
            request = from_environ(environ, self.site.limits.request)
            return self.respond(request)
        except HttpError as error:
            return failed(request, error)
        except (ConnectionError, TimeoutError) as error:  # the client went away while its body was read
            return failed(request, HttpError(400, "body", f"the body did not arrive: {type(error).__name__}"))
        except Exception as error:  # a bug of ours: said as such, and the service goes on
            traceback.print_exc(file=sys.stderr)
            return failed(request, HttpError(500, "bug", f"this is a bug in Headrace: {type(error).__name__}"))

    def _cors(self) -> list[tuple[str, str]]:
        return [("Access-Control-Allow-Origin", self.site.cors)] if self.site.cors else []

    def respond(self, request: Request) -> Response:
        """The response to a request. Raises HttpError."""
        if request.method == "OPTIONS":
            return self._options()
        path = request.path
        if path == "/sparql":
            return self._sparql(request)
        if path == "/ask" or path.startswith("/ask/"):
            return self._ask(request, path.removeprefix("/ask").strip("/"))
        if request.method not in ("GET", "HEAD"):
            raise HttpError(405, "method", f"{request.method} is not served here", [("Allow", "GET, HEAD, OPTIONS")])
        return self._read(request, path)

    def _options(self) -> Response:
        allowed = [("Allow", protocol.METHODS)]
        if self.site.cors:
            allowed += [
                ("Access-Control-Allow-Methods", protocol.METHODS),
                ("Access-Control-Allow-Headers", "Accept, Content-Type"),
                ("Access-Control-Max-Age", "600"),
            ]
        return Response(204, headers=tuple(allowed))

    def _read(self, request: Request, path: str) -> Response:
        site = self.site
        if path == "/":
            return start.start(site)
        if path == "/search":
            return search.results(site, request.first("q"))
        if path == "/browse":
            return start.browse(site)
        if path.startswith("/browse/"):
            return start.listing(site, path.removeprefix("/browse/"), _offset(request)) or _missing(path)
        if path in ("/void", "/.well-known/void"):
            text = describe.void(base(request), describe.counts(site), describe.facts_version(site))
            return describe.respond(request, text)
        if path == "/openapi.json":
            return Response(200, openapi.text(base(request)), "application/json")
        if path.startswith("/static/") and (known := _FILES.get(path.removeprefix("/static/"))):
            return Response(200, *known)
        if path == "/ns":
            return self._entity(request, entity.VOCABULARY)
        iri = entity.iri_of(path.removeprefix("/id/")) if path.startswith("/id/") else None
        if iri is None:
            return _missing(path)
        return self._entity(request, iri)

    def _entity(self, request: Request, iri: str) -> Response:
        """An address: a page for people, statements for machines."""
        chosen = _entity_format(request)
        if chosen is not HTML:
            if not entity.exists(self.site, iri):
                return _missing(request.path)
            name = (("Content-Disposition", f'inline; filename="{iri.rpartition("/")[2]}.{chosen.ending}"'),)
            return Response(200, entity.statements(self.site, iri, chosen.name), chosen.media, name)
        if iri == entity.VOCABULARY:
            return start.vocabulary(self.site)
        if iri == entity.run_of(iri):
            return run_page.run(self.site, iri) or _missing(request.path)
        found = entity.describe(self.site, iri)
        return entity_page.entity(found) if found else _missing(request.path)

    def _sparql(self, request: Request) -> Response:
        operation = protocol.asked(request)
        if operation is None:
            chosen = choose(request.accept, (*GRAPHS, HTML))
            if chosen is HTML:
                return editor.editor(request.first("example"))
            return describe.respond(request, describe.service(f"{base(request)}/sparql", describe.counts(self.site)))
        wants_page = HTML in protocol.formats(operation, request.accept)
        try:
            outcome = protocol.run(self.site, operation, request.accept)
        except HttpError as error:
            if wants_page:
                return editor.wrong(operation.text, error)
            raise
        return editor.answer(operation.text, outcome) if outcome.format is HTML else protocol.response(outcome)

    def _ask(self, request: Request, what: str) -> Response:
        if request.method == "POST":
            return ask.post(self.site, request, what)
        if request.method in ("GET", "HEAD") and not what:
            return ask.get(self.site, request)
        raise HttpError(405, "method", "a scenario is sent with POST", [("Allow", "POST, OPTIONS")])


def _offset(request: Request) -> int:
    text = request.first("offset", "0")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 8 else 0


def _missing(path: str) -> Response:
    raise HttpError(404, "address", f"nothing is known of {path[:200]}")


def _entity_format(request: Request) -> Format:
    if name := request.first("format"):
        if name == HTML.name:
            return HTML
        if name not in {each.name for each in GRAPHS}:
            raise HttpError(400, "format", f"no format of that name; known: {', '.join(each.name for each in GRAPHS)}")
        return BY_NAME[name]
    chosen = choose(request.accept, (HTML, *GRAPHS))
    if chosen is None:
        raise not_acceptable((HTML, *GRAPHS))
    return chosen


def base(request: Request) -> str:
    """The service's own address as the client sees it; a Host header that is no host counts as none."""
    host = request.headers.get("host", "")
    plain = host.replace(":", "").replace(".", "").replace("-", "").replace("[", "").replace("]", "")
    return f"http://{host}" if plain.isascii() and plain.isalnum() and len(host) < 256 else "http://localhost"


def failed(request: Request, error: HttpError) -> Response:
    """An error as a page for people, else as JSON."""
    if choose(request.accept, (Format("json", "application/json", "json"), HTML)) is HTML:
        page = failure(error.status, REASONS[error.status], str(error))
        return msgspec.structs.replace(page, headers=error.headers)
    body = msgspec.json.encode({"error": {"kind": error.kind, "status": error.status, "message": str(error)}})
    return Response(error.status, body, "application/json", error.headers)
