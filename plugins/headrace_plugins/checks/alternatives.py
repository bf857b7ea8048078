"""Which smallest sets of refills carry a case, and what each costs against the best."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from msgspec import Struct

from headrace.api import (
    AddedTable,
    Alternative,
    Alternatives,
    Case,
    Facts,
    Finding,
    RefillAnswer,
    TableColumn,
    alternatives,
    options,
)
from headrace_plugins.refills.whole_network import EXAMPLE

CARBON, RATE = "mmol C/gDW/h", "mmol/gDW/h"


class Options(Struct, frozen=True, forbid_unknown_fields=True, rename="kebab"):
    """most: how many to show (0: none are looked for). changes: closed refills take part, through what opens them."""

    most: int = 0
    changes: bool = False


class AlternativeSets:
    """All smallest sets of refills, exactly, ranked by feed carbon, ATP, reduced carriers, CO2 fixed and enzyme."""

    name = "alternatives"
    summary = "All smallest sets of refills (and of changes) that carry a case, ranked, each priced against the best."
    options = Options
    example = EXAMPLE + "[plugin.alternatives]\nmost = 20\nchanges = true\n"

    def checks(self, case: Case, answers: Sequence[RefillAnswer], facts: Facts) -> Iterable[Finding | AddedTable]:
        chosen = options(self, case)
        if not answers or chosen.most <= 0:
            return
        found = alternatives(facts, case, chosen.changes)
        yield _table(found, chosen)
        yield from _findings(case, found, chosen)


def _table(found: Alternatives, chosen: Options) -> AddedTable:
    columns = (
        TableColumn("rank", "rank", number=True),
        TableColumn("set", "set", detail=True),
        TableColumn("refills", "refills or changes"),
        TableColumn("changes", "changes", detail=True),
        TableColumn("reasons", "now", detail=True),
        TableColumn("aim", "feed", CARBON, number=True),
        TableColumn("extra", "above the best", CARBON, number=True),
        TableColumn("atp", "ATP spent", RATE, number=True),
        TableColumn("redox", "reduced carriers spent", RATE, number=True),
        TableColumn("carbon_fixed", "CO2 fixed", RATE, number=True),
        TableColumn("total_rate", "total rate", RATE, number=True, detail=True),
        TableColumn("enzyme_low", "enzyme, low", "mg/gDW", number=True, detail=True),
        TableColumn("enzyme_high", "enzyme, high", "mg/gDW", number=True),
        TableColumn("rates", "rates", detail=True),
    )
    rows = tuple(_row(rank, row) for rank, row in enumerate(found.rows[: chosen.most], 1))
    title = "Smallest sets of refills that carry it"
    return AddedTable("alternatives", title, columns, rows, note=_note(found, chosen), empty=_none(chosen))


def _row(rank: int, row: Alternative) -> tuple[str | tuple[str, ...] | float | bool | None, ...]:
    low, high = row.enzyme or (None, None)
    rates = tuple(f"{slug} {rate:.6g}" for slug, rate in row.rates.items())
    return (
        rank,
        row.set,
        row.labels or ("no refill at all",),
        row.changes,
        row.reasons,
        row.carbon,
        row.extra,
        row.atp,
        row.redox,
        row.fixed,
        row.total,
        low,
        high,
        rates,
    )


def _note(found: Alternatives, chosen: Options) -> str:
    shown = min(chosen.most, len(found.rows))
    held = f"{shown} of {len(found.rows)} sets" if shown < len(found.rows) else f"all {len(found.rows)} sets"
    stopped = f"; the search was stopped: larger sets than {found.search.level} were not looked for"
    searched = "" if found.search.complete else stopped
    spent = "ATP and reduced carriers are those of the refills and the steps that feed them, negative where made"
    return f"{held} of {len(found.candidates)} refills or changes{searched}. {spent}. Feed is the least that each set needs."


def _none(chosen: Options) -> str:
    return "No set of these carries it." if chosen.changes else "No set of open refills carries it (--changes adds closed ones)."


def _findings(case: Case, found: Alternatives, chosen: Options) -> Iterable[Finding]:
    turned = sorted(
        {
            choice.label
            for row in found.rows[: chosen.most]
            for choice in found.candidates
            if choice.kind == "reverse" and choice.label in row.changes
        }
    )
    if turned:
        words = f"whether these can run that way is for their driving force to say: {'; '.join(turned)}"
        yield Finding("caution", "alternatives", case.title, words)
