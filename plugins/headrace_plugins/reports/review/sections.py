"""What a review says, in order: question, verdict, assumptions, drains, ledger, requirement, ceilings, findings."""

from __future__ import annotations

import headrace
from headrace.pages import ceiling, drains, ledger, refills
from headrace.pages.context import Context, versions
from headrace.pages.model import Block, Cell, Column, Notes, Page, Table, Verbatim
from headrace.pages.notes import collected, findings
from headrace.pages.numbers import joined
from headrace.pages.verdicts import ceiling as ceiling_verdict
from headrace.pages.verdicts import refills as verdict
from headrace.values.answers import Result
from headrace_plugins.reports.review.assumptions import assumptions

BIOSAFETY = (
    "Building and handling engineered organisms is subject to local biosafety rules and to review by the responsible body."
)


class Review:
    """The sections of one scenario's review."""

    def __init__(self, result: Result, question: str = "") -> None:
        self.result = result
        self.context = Context(result)
        self.answer = refills.answer_of(result)
        self.question = question or self._usual_question()

    def _usual_question(self) -> str:
        outlets = joined([demand.label for demand in self.result.case.demands]) or "growth"
        cycle = f"the citric acid cycle of {self.context.host.label}"
        return f"What does making {outlets} take out of {cycle}, and what must be put back?"

    def page(self) -> Page:
        """The whole review. Blocks come first, since they say which sources are cited."""
        context, result = self.context, self.result
        title = result.case.title or context.host.label
        blocks = self._blocks()
        return Page(
            title=f"Design review: {title}",
            subject=(f"Question: {self.question}", *context.subject()),
            verdict=verdict(context, self.answer),
            blocks=blocks,
            main=refills.main(self.answer),
            footnotes=context.footnotes(),
            cautions=(*context.cautions(), BIOSAFETY),
            sources=tuple(context.used),
            versions=versions(result, headrace.__version__),
        )

    def _blocks(self) -> tuple[Block, ...]:
        context, case = self.context, self.result.case
        drained = (drains.outlets(context), drains.pools(context), drains.rates(context), drains.needs(context))
        asked = (Verbatim("The scenario as written", case.source_text),) if case.source_text else ()
        return (
            assumptions(context, self.answer),
            *drained,
            *refills.blocks(context, self.answer, with_findings=False),
            *self._ceilings(),
            drains.routes(context),
            *findings(context),
            *asked,
        )

    def _ceilings(self) -> tuple[Block, ...]:
        found: list[Block] = []
        for other in self.result.related:
            answer = ceiling.answer_of(other)
            table = ceiling.side_by_side(answer)
            said = Notes(f"Ceiling of {answer.outlet}", (ceiling_verdict(self.context, answer),), listed=False)
            found += [said, table]
        return tuple(found)

    def tables(self) -> tuple[Table, ...]:
        """The tables that are also written as CSV, in full."""
        context, book = self.context, self.answer.ledger
        each = [assumptions(context, self.answer), drains.main(context)]
        each += [ledger.rows(context, book)] if book else []
        each += [refills.main(self.answer), refills.groups(context, self.answer), refills.crossings(context, self.answer)]
        each += [self._ceiling_table()] if self.result.related else []
        each += [drains.routes(context), self._finding_table(), self._source_table()]
        return tuple(table for table in each if table.rows)

    def _ceiling_table(self) -> Table:
        answers = [ceiling.answer_of(other) for other in self.result.related]
        tables = [ceiling.side_by_side(answer) for answer in answers]
        rows = [(answer.outlet, *row) for answer, table in zip(answers, tables, strict=True) for row in table.rows]
        return Table("ceilings", "Ceilings", (Column("outlet"), *tables[0].columns), tuple(rows))

    def _finding_table(self) -> Table:
        titles = ("level", "check", "about", "message", "source")
        rows: tuple[tuple[Cell, ...], ...] = tuple(
            (item.level, item.check, item.about, item.message, item.source) for item in collected(self.result)
        )
        return Table("findings", "Findings", tuple(Column(title) for title in titles), rows)

    def _source_table(self) -> Table:
        self._blocks()  # numbers stand for sources in the order in which the document cites them
        rows = tuple(enumerate(self.context.used, start=1))
        return Table("sources", "Sources", (Column("number"), Column("source")), rows)
