"""One thing that is wrong with the facts."""

from __future__ import annotations

from msgspec import Struct


class Fault(Struct, frozen=True, order=True):
    """rule: which check speaks (a slug); node: the entity below the base address, such as "compound/malate";
    message: what disagrees, with both values; file: relative path of the fact file, where known."""

    rule: str
    node: str
    message: str
    file: str = ""
