"""Scenarios over HTTP: POST one to /ask/QUESTION, get its answer as JSON or RDF, saved as a graph when asked."""

from __future__ import annotations

import queue
from pathlib import Path

import msgspec
from pyoxigraph import RdfFormat, Triple, parse, serialize

from headrace.outputs.query import wire
from headrace.outputs.query.formats import GRAPH_ENGINE, GRAPHS, Format
from headrace.outputs.query.pool import Pool
from headrace.outputs.query.work import used_prefixes
from headrace.outputs.rdf import folder
from headrace.outputs.rdf.run import Run
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.outputs.service.asking_types import QUESTIONS, Question, Reply
from headrace.outputs.service.http import HttpError, Request, Response
from headrace.outputs.service.negotiate import HTML, choose
from headrace.outputs.service.pages import ask as forms
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Html, tag
from headrace.outputs.service.protocol import not_acceptable
from headrace.outputs.service.site import Site

JSON = Format("json", "application/json", "json", ("text/json",))
TRIG = Format("trig", "application/trig", "trig")
_RDF = tuple(each for each in GRAPHS)
OFFERS = (JSON, *_RDF, TRIG, HTML)
FORM = "application/x-www-form-urlencoded"
BODIES = ("application/toml", "application/json", "text/plain", FORM)
_YES = ("true", "1", "yes", "on")


class Scenarios:
    """Answers through a pool whose workers are started when the first scenario comes."""

    def __init__(self, seconds: float, workers: int = 1) -> None:
        self.seconds, self.workers = seconds, workers
        self._pool: Pool | None = None

    def ask(self, question: Question) -> Reply:
        """The reply. Raises HttpError when it took too long or no worker came free."""
        try:
            return msgspec.msgpack.decode(self.pool().ask(msgspec.msgpack.encode(question), self.seconds), type=Reply)
        except wire.LateError as error:
            raise HttpError(500, "time-limit", f"the scenario was stopped after {self.seconds:g} seconds") from error
        except queue.Empty as error:
            raise HttpError(503, "busy", "all workers are busy; try again in a moment", [("Retry-After", "5")]) from error
        except wire.GoneError as error:
            raise HttpError(500, "broken", "the scenario broke its worker") from error

    def pool(self) -> Pool:
        """The pool, started when first needed."""
        if self._pool is None:
            self._pool = Pool(wire.Settings("ask", memory=0), self.workers)
        return self._pool

    def close(self) -> None:
        """End the workers."""
        if self._pool is not None:
            self._pool.close()


def get(site: Site, request: Request) -> Response:
    """The form."""
    return forms.form(may_save=_can_save(site))


def post(site: Site, request: Request, what: str) -> Response:
    """The answer to a scenario."""
    if request.media not in BODIES:
        raise HttpError(415, "media-type", f"the body is {request.media or 'of no stated type'}; accepted: {', '.join(BODIES)}")
    question, save = _question(site, request, what)
    chosen = choose(request.accept, OFFERS)
    if chosen is None:
        raise not_acceptable(OFFERS)
    if save:
        _same_origin(request)
        if not _can_save(site):
            raise HttpError(403, "saving", "this service saves no answers")
    if site.scenarios is None:
        raise HttpError(403, "asking", "this service answers no scenarios")
    reply = site.scenarios.ask(question)
    if reply.wrong:
        return _wrong(reply, question, chosen, _can_save(site))
    headers: tuple[tuple[str, str], ...] = ()
    if save:
        keep(site, Run(reply.name, RUN_BASE + reply.name, reply.trig))
        headers = (("Location", f"/id/run/{reply.name}"),)
        if chosen is HTML:
            return Response(303, headers=headers)
    return Response(200, *_body(reply, chosen), headers=headers)


def keep(site: Site, run: Run) -> None:
    """Save a run where the service saves."""
    if site.engine.store is not None:
        site.engine.store.put_graph(run.iri, run.trig)
    else:
        assert site.results is not None
        folder.save(Path(site.results), run)


def _can_save(site: Site) -> bool:
    return site.results is not None or site.engine.store is not None


def _question(site: Site, request: Request, what: str) -> tuple[Question, bool]:
    """The question, and whether to save the answer; from the URL, or from the form."""
    given = dict(request.form()) if request.media == FORM else dict(request.query)
    text = given.get("scenario", "") if request.media == FORM else request.text()
    what = what or given.get("question", "refills")
    if what not in QUESTIONS:
        raise HttpError(404, "question", f"no question {what[:40]!r}; known: {', '.join(QUESTIONS)}")
    if len(text) > site.limits.text:
        raise HttpError(413, "size", f"the scenario has more than {site.limits.text} characters")
    if request.media == "application/json" and not text.lstrip().startswith("{"):
        raise HttpError(400, "scenario", "the body is no JSON object")
    rates = given.get("rates", "").lower() in _YES
    return Question(what, text, given.get("outlet", ""), rates, given.get("agent", "")[:200]), given.get(
        "save", ""
    ).lower() in _YES


def _same_origin(request: Request) -> None:
    """Pages of other sites may not save here in a visitor's name."""
    origin = request.headers.get("origin", "")
    if origin and origin.partition("://")[2] != request.headers.get("host", ""):
        raise HttpError(403, "origin", "another site's page may not save here")


def _wrong(reply: Reply, question: Question, chosen: Format, may_save: bool) -> Response:
    if chosen is HTML:
        return forms.form(question.text, reply.wrong, may_save, status=400)
    body = {"error": {"kind": "scenario", "message": reply.wrong, **reply.data}}
    return Response(400, msgspec.json.encode(body), JSON.media)


def _body(reply: Reply, chosen: Format) -> tuple[bytes, str]:
    if chosen is JSON:
        return reply.document.encode(), JSON.media
    if chosen is TRIG:
        return reply.trig, TRIG.media
    if chosen is HTML:
        again = tag("p", tag("a", "Ask another", href="/ask"))
        shown = page(reply.title, tag("div", Html(reply.page), class_="answer"), again, here="/ask")
        return shown.body, shown.media
    triples = [Triple(quad.subject, quad.predicate, quad.object) for quad in parse(reply.trig, format=RdfFormat.TRIG)]
    prefixes = used_prefixes(triples) if chosen.name == "turtle" else None
    return serialize(triples, format=GRAPH_ENGINE[chosen.name], prefixes=prefixes) or b"", chosen.media
