"""Where a fact comes from, and how far it can be trusted."""

from __future__ import annotations

from msgspec import Struct


class Source(Struct, frozen=True):
    """Where a fact comes from. `text` is the citation as shown; `doi` is without a resolver's address."""

    slug: str
    text: str
    doi: str = ""


class Basis(Struct, frozen=True):
    """How far a fact can be trusted. reading: seen | second-hand | recalled; sources: slugs of `Source`."""

    reading: str
    sources: tuple[str, ...] = ()
    note: str = ""
