"""The server: waitress in front of the application, and the processes behind it."""

from __future__ import annotations

import contextlib
import logging
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from msgspec import Struct

from headrace.errors import InputError, MissingPartError
from headrace.outputs.query import wire
from headrace.outputs.query.pool import Pool, Queries
from headrace.outputs.rdf.facts import Folders
from headrace.outputs.service.app import App
from headrace.outputs.service.ask import Scenarios
from headrace.outputs.service.site import Limits, Site

_THREADS = 260  # a waiting query holds one; 200 clients and a few pages at once
_PATIENCE = 30.0


class Plan(Struct, frozen=True):
    """Where to listen, what to serve and how much of it. port 0: any free one. cors: as in `Site`."""

    host: str = "127.0.0.1"
    port: int = 8480
    results: Path | None = None
    store: str = ""
    extra: Folders = ()
    workers: int = 2
    limits: Limits = Limits()
    memory: int = 1 << 30
    cors: str = "*"
    patience: float = _PATIENCE
    idle: int = 60


class Server:
    """A bound server. url: its address. run() serves until close() is called from elsewhere."""

    def __init__(self, app: App, plan: Plan) -> None:
        try:
            from waitress import create_server  # an optional part
        except ImportError as error:
            raise MissingPartError("waitress", "headrace serve", 'pip install "headrace[serve]" brings it') from error
        logging.getLogger("waitress").setLevel(logging.ERROR)
        try:
            self._server: Any = create_server(
                app,
                host=plan.host,
                port=plan.port,
                threads=_THREADS,
                connection_limit=2000,
                channel_timeout=plan.idle,
                cleanup_interval=10,
                max_request_header_size=65536,
                max_request_body_size=plan.limits.request,
                outbuf_overflow=1 << 20,
                ident="headrace",
                clear_untrusted_proxy_headers=True,
                asyncore_use_poll=True,
            )
        except OSError as error:
            raise InputError(
                f"can't listen on {plan.host}, port {plan.port}: {error.strerror or error}", hint="--port chooses another"
            ) from error
        self.port = int(self._server.effective_port)
        shown = f"[{plan.host}]" if ":" in plan.host else plan.host
        self.url = f"http://{shown}:{self.port}"

    def run(self) -> None:
        """Serve until interrupted or closed."""
        self._server.run()

    def close(self) -> None:
        """Stop listening and let the threads end."""
        self._server.close()
        self._server.task_dispatcher.shutdown(cancel_pending=True, timeout=1)


@contextlib.contextmanager
def site(plan: Plan) -> Iterator[Site]:
    """The site of a plan, with its processes, which end with it."""
    scenarios = Scenarios(max(plan.limits.seconds, 30.0))
    try:
        if plan.store:
            from headrace.outputs.stores.remote import RemoteQueries  # files need no network client

            yield Site(RemoteQueries(plan.store, plan.limits), scenarios, None, plan.limits, plan.cors)
            return
        extra = tuple((name, str(path)) for name, path in plan.extra)
        settings = wire.Settings("query", str(plan.results or ""), extra, plan.memory)
        with Pool(settings, plan.workers, plan.patience, reserve=1) as pool:
            queries = Queries(pool, plan.limits.seconds, plan.limits.result)
            yield Site(queries, scenarios, plan.results, plan.limits, plan.cors)
    finally:
        scenarios.close()
