"""`headrace serve`"""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Annotated

import typer

Host = Annotated[str, typer.Option("--host", metavar="ADDRESS", help="Where to listen; only this machine unless told otherwise.")]
Port = Annotated[int, typer.Option("--port", min=0, max=65535, help="The port; 0 takes any free one.")]
Results = Annotated[
    Path | None,
    typer.Option("--results", metavar="DIR", help="Folder of saved answers (default: .headrace here).", show_default=False),
]
Store = Annotated[str, typer.Option("--store", metavar="URL", help="Serve what this SPARQL store holds.", show_default=False)]
Seconds = Annotated[float, typer.Option("--time-limit", metavar="SECONDS", min=0.1, help="When to stop a query.")]
Size = Annotated[int, typer.Option("--result-limit", metavar="MB", min=1, help="The largest result, in megabytes.")]
Workers = Annotated[int, typer.Option("--workers", min=1, max=64, help="How many queries run at once.")]
Cors = Annotated[
    str, typer.Option("--cors", metavar="ORIGIN", help='Whose web pages may read: any ("*"), one origin, or none ("").')
]


def serve(
    host: Host = "127.0.0.1",
    port: Port = 8480,
    results: Results = None,
    store: Store = "",
    seconds: Seconds = 10.0,
    size: Size = 50,
    workers: Workers = 2,
    cors: Cors = "*",
) -> int:
    """Serve facts and saved answers: SPARQL endpoint and pages.

    Read-only, but for answers to scenarios that are saved when asked. Ends with Ctrl-C.
    """
    from headrace.hooks.manager import Manager  # `--help` needs none of these
    from headrace.outputs.service.app import App  # as above
    from headrace.outputs.service.serve import Plan, Server, site  # as above
    from headrace.outputs.service.site import Limits  # as above

    folder = None if store else (results or Path.cwd() / ".headrace").resolve()
    limits = Limits(seconds=seconds, result=size * 1_000_000)
    plan = Plan(host, port, folder, store, Manager.load().fact_folders(), workers, limits, cors=cors)
    with site(plan) as served:
        server = Server(App(served), plan)
        sys.stderr.write(f"headrace: serving {server.url} (SPARQL at {server.url}/sparql); saved answers: {store or folder}\n")
        sys.stderr.flush()
        server.run()
    return 0


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(serve)
