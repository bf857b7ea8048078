"""The plugins that ship with Headrace, written by `python -m headrace.hooks`; a test compares both."""

from __future__ import annotations

from headrace.hooks.entry import Entry

FIRST_PARTY: tuple[Entry, ...] = (
    Entry(
        name="dependence",
        module="headrace_plugins.checks.dependence",
        attribute="Dependence",
        summary="Which refills, cofactors and unconfirmed facts a design can't do without.",
        hooks=("checks",),
        families=(),
    ),
    Entry(
        name="whole-network",
        module="headrace_plugins.refills.whole_network",
        attribute="WholeNetwork",
        summary="Requirement of each refill from the host's whole network: least feed carbon, then least total rate.",
        hooks=("refills",),
        families=(),
    ),
    Entry(
        name="review",
        module="headrace_plugins.reports.review",
        attribute="Review",
        summary="The design-review document as Markdown, with its tables as CSV.",
        hooks=("report",),
        families=(),
    ),
)
