"""Several scenarios at a glance: the index of a review."""

from __future__ import annotations

from collections.abc import Sequence

from headrace.pages.context import LOWER_BOUND, RATE, Context
from headrace.pages.model import Cell, Column, Page, Table
from headrace.pages.numbers import counted
from headrace.pages.refills import answer_of
from headrace.pages.verdicts import refills as verdict
from headrace.values.answers import Result


def page(results: Sequence[Result], headrace: str) -> Page:
    """One row per scenario with its verdict."""
    columns = (
        Column("scenario"),
        Column("host"),
        Column("drained", RATE, number=True),
        Column("put back", RATE, number=True),
        Column("design cover", number=True),
        Column("verdict"),
    )
    table = Table("overview", "Scenarios", columns, tuple(_row(result) for result in results))
    feasible = sum(answer_of(result).answer == "feasible" for result in results)
    return Page(
        title="Design review: overview",
        subject=(),
        verdict=f"{feasible} of {counted(len(results), 'design')} can run as stated.",
        blocks=(table,),
        main=table,
        cautions=(LOWER_BOUND,),
        versions=f"headrace {headrace}; facts {results[0].facts_version[:16]}",
    )


def _row(result: Result) -> tuple[Cell, ...]:
    context, answer = Context(result), answer_of(result)
    book = answer.ledger
    drained, refilled = (book.net_drain, book.refilled) if book else (None, None)
    return (result.case.title, context.host.label, drained, refilled, answer.design_cover, verdict(context, answer))
