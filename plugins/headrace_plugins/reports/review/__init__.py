"""The design-review document: one Markdown file per scenario with every table, and the tables as CSV files."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

from msgspec import Struct

from headrace.api import Document, Result, slugify
from headrace.pages import csvtext, markdown
from headrace_plugins.refills.whole_network import EXAMPLE
from headrace_plugins.reports.review.sections import Review as Sections


class Options(Struct, frozen=True, forbid_unknown_fields=True):
    """question: what the review is to decide, in the designer's words. tables: also write each table as CSV."""

    question: str = ""
    tables: bool = True


class Review:
    """Proposes the documents of one scenario; needs a result on refills, shows the ceilings beside it."""

    name = "review"
    summary = "The design-review document as Markdown, with its tables as CSV."
    options = Options
    example = EXAMPLE

    def report(self, result: Result, options: Options) -> Iterator[Document]:
        """The review of a result on refills; other results have no review."""
        if result.kind != "refills":
            return
        stem = stem_of(result)
        sections = Sections(result, options.question)
        yield Document(f"{stem}.md", "text/markdown", markdown.page(sections.page()))
        if options.tables:
            for table in sections.tables():
                yield Document(f"{stem}-{table.name}.csv", "text/csv", csvtext.table(table))


def stem_of(result: Result) -> str:
    """File name without ending: from the scenario's file, else from its title."""
    return slugify(Path(result.case.path).stem) or slugify(result.case.title) or "scenario"
