"""What passes between the service and the workers that answer scenarios."""

from __future__ import annotations

from typing import Any

from msgspec import Struct

QUESTIONS = ("refills", "drains", "ceiling", "grows")


class Question(Struct, frozen=True):
    """what: one of QUESTIONS. text: the scenario, TOML or JSON. outlet: for a ceiling. rates: with every reaction's rate."""

    what: str
    text: str
    outlet: str = ""
    rates: bool = False
    agent: str = ""


class Reply(Struct, frozen=True):
    """document: the JSON text, or "" with `wrong` (the message) and `data` (its parts). name, trig: the run. page: HTML."""

    document: str = ""
    name: str = ""
    trig: bytes = b""
    page: str = ""
    title: str = ""
    wrong: str = ""
    data: dict[str, Any] = {}
