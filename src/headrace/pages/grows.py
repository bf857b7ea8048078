"""Whether the strain grows; if not, what is missing and what would help."""

from __future__ import annotations

from headrace.pages.context import Context, versions
from headrace.pages.infeasible import repairs
from headrace.pages.model import Block, Column, Notes, Page, Table
from headrace.pages.notes import findings
from headrace.pages.verdicts import grows as verdict
from headrace.values.answers import GrowsAnswer, Result


def page(result: Result, headrace: str) -> Page:
    """The page of `headrace grows`."""
    context = Context(result)
    answer = answer_of(result)
    blocks: list[Block] = []
    if answer.because:
        blocks.append(Notes("Because", answer.because))
    if not answer.grows:
        blocks.append(repairs(context, answer.repairs))
    if answer.fitted:
        line = "a rule that was set from this strain's own growth decides here: not a prediction."
        blocks.append(Notes("Fitted", (line,)))
    return Page(
        title=f"{result.case.title or context.host.label}: does it grow?",
        subject=context.subject(),
        verdict=verdict(context, answer),
        blocks=(*blocks, *findings(context)),
        main=main(context, answer),
        footnotes=context.footnotes(),
        cautions=context.cautions(),
        sources=tuple(context.used),
        versions=versions(result, headrace),
    )


def answer_of(result: Result) -> GrowsAnswer:
    """The result's answer, which must be on growth."""
    if not isinstance(result.answer, GrowsAnswer):
        raise TypeError(f"a result on {result.kind} does not say whether the strain grows")
    return result.answer


def main(context: Context, answer: GrowsAnswer) -> Table:
    """One row: the verdict in columns."""
    columns = (
        Column("host"),
        Column("grows"),
        Column("rate", "1/h", number=True),
        Column("because"),
        Column("missing"),
        Column("flips with basal"),
        Column("fitted"),
    )
    row = (
        context.host.slug,
        answer.grows,
        answer.rate,
        "; ".join(answer.because),
        "; ".join(answer.missing),
        answer.flips_with_basal,
        answer.fitted,
    )
    return Table("grows", "Growth", columns, (row,))
