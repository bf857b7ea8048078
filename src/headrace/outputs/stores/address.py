"""Where a store answers queries and where it takes graphs.

The address that a user gives is that of the SPARQL query endpoint. The graph store endpoint is HEADRACE_STORE_GRAPHS
or, without that, what the two kinds of server that are tried in the tests have beside theirs: `/query` with `/store`,
and `/sparql` with `/sparql-graph-crud` (`-auth` with a user). HEADRACE_STORE_USER and HEADRACE_STORE_PASSWORD log in.
"""

from __future__ import annotations

import os
from collections.abc import Mapping
from urllib.parse import urlsplit

from msgspec import Struct

from headrace.errors import InputError


class Address(Struct, frozen=True):
    """query, graphs: endpoints. user, password: "" for none."""

    query: str
    graphs: str
    user: str = ""
    password: str = ""


def parse(url: str, environ: Mapping[str, str] = os.environ) -> Address:
    """The address of a store. Raises InputError for what is no web address or holds a password.

    >>> parse("http://localhost:7878/query", {}).graphs
    'http://localhost:7878/store'
    """
    for each in (url, environ.get("HEADRACE_STORE_GRAPHS", "")):
        _check(each)
    user, password = environ.get("HEADRACE_STORE_USER", ""), environ.get("HEADRACE_STORE_PASSWORD", "")
    return Address(url, environ.get("HEADRACE_STORE_GRAPHS") or _beside(url, bool(user)), user, password)


def _check(url: str) -> None:
    if not url:
        return
    accepted = "the address of a SPARQL endpoint, such as http://localhost:7878/query"
    try:
        parts = urlsplit(url)
        wrong = parts.scheme not in ("http", "https") or not parts.hostname or (parts.port or 1) < 1
    except ValueError:
        wrong, parts = True, urlsplit("")
    if wrong or any(char <= " " for char in url):
        raise InputError("no address of a store", key="--store", read=url, accepted=accepted)
    if parts.username or parts.password:
        raise InputError(
            "a password in an address is seen by everyone", hint="set HEADRACE_STORE_USER and HEADRACE_STORE_PASSWORD"
        )


def _beside(url: str, logs_in: bool) -> str:
    plain = url.partition("?")[0].rstrip("/")
    if plain.endswith("/query"):
        return plain.removesuffix("/query") + "/store"
    if plain.endswith("/sparql"):
        return plain.removesuffix("/sparql") + "/sparql-graph-crud" + ("-auth" if logs_in else "")
    return ""
