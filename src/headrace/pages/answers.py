"""Which page answers which question."""

from __future__ import annotations

from headrace.pages import ceiling, drains, grows, refills
from headrace.pages.model import Page
from headrace.values.answers import Result


def page(result: Result, headrace: str, rates: bool = False) -> Page:
    """The page of a result. headrace: the version to print; rates: show the rate of every reaction (refills only)."""
    if result.kind == "refills":
        return refills.page(result, headrace, rates)
    return {"drains": drains.page, "ceiling": ceiling.page, "grows": grows.page}[result.kind](result, headrace)
