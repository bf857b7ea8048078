"""`headrace facts push`"""

from __future__ import annotations

from typing import Annotated

import typer

from headrace.outputs.cli.progress import working
from headrace.outputs.cli.terminal import emit

Store = Annotated[str, typer.Option("--store", metavar="URL", help="The store's SPARQL endpoint.", show_default=False)]


def push(store: Store) -> int:
    """Put the facts into a SPARQL store, in place of those that are there.

    HEADRACE_STORE_USER and HEADRACE_STORE_PASSWORD log in; HEADRACE_STORE_GRAPHS says where the store takes graphs.
    """
    from headrace.hooks.manager import Manager  # `--help` needs neither
    from headrace.outputs.stores.push import push as put  # as above

    with working("facts"):
        counts = put(store, Manager.load().fact_folders())
    emit("".join(f"{iri}: {count} statements\n" for iri, count in counts.items()))
    return 0
