"""The case's answer, proven in exact rational arithmetic from the solver's final basis."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from msgspec import Struct

from headrace.api import AddedTable, Case, Certified, Facts, Finding, RefillAnswer, TableColumn, certified, options
from headrace_plugins.refills.whole_network import EXAMPLE

CARBON, RATE = "mmol C/gDW/h", "mmol/gDW/h"
FAR = 1e-4


class Options(Struct, frozen=True, forbid_unknown_fields=True, rename="kebab"):
    """prove: whether to (`headrace refills --certify` does)."""

    prove: bool = False


class Certificate:
    """Primal and dual feasibility and equal objectives, in fractions; for an infeasible case, that no rates meet it."""

    name = "certificate"
    summary = "The optimum, or that there is none, proven in exact fractions from the solver's final basis."
    options = Options
    example = EXAMPLE + "[plugin.certificate]\nprove = true\n"

    def checks(self, case: Case, answers: Sequence[RefillAnswer], facts: Facts) -> Iterable[Finding | AddedTable]:
        if not answers or not options(self, case).prove:
            return
        found = certified(facts, case)
        yield _table(found)
        yield from _findings(case, found, answers[0])


def _table(found: Certified) -> AddedTable:
    exact = dict(zip(found.objectives, found.proof.objectives, strict=False))
    printed = dict(zip(found.objectives, found.printed, strict=False))
    carbon, total = exact.get("feed carbon"), exact.get("total rate")
    columns = (
        TableColumn("proven", "proven"),
        TableColumn("answer", "answer"),
        TableColumn("feed_carbon", "least feed carbon", CARBON, number=True),
        TableColumn("total_rate", "least total rate", RATE, number=True),
        TableColumn("violation", "least imbalance", RATE, number=True),
        TableColumn("feed_carbon_exact", "feed carbon, exact", detail=True),
        TableColumn("total_rate_exact", "total rate, exact", detail=True),
        TableColumn("violation_exact", "imbalance, exact", detail=True),
        TableColumn("feed_carbon_printed", "feed carbon as printed", CARBON, number=True, detail=True),
        TableColumn("total_rate_printed", "total rate as printed", RATE, number=True, detail=True),
        TableColumn("gap", "largest difference, relative", number=True, detail=True),
        TableColumn("rows", "rows", number=True, detail=True),
        TableColumn("columns", "columns", number=True, detail=True),
        TableColumn("pivots", "exact pivots", number=True, detail=True),
        TableColumn("denominator_digits", "digits of the longest denominator", number=True, detail=True),
        TableColumn("reason", "why not", detail=True),
    )
    violation = found.proof.violation
    row = (
        found.proof.proven,
        found.answer,
        None if carbon is None else float(carbon),
        None if total is None else float(total),
        None if violation is None else float(violation),
        *("" if value is None else str(value) for value in (carbon, total, violation)),
        printed.get("feed carbon"),
        printed.get("total rate"),
        found.gap,
        found.rows,
        found.columns,
        found.proof.pivots,
        found.proof.digits,
        found.proof.reason,
    )
    note = (
        "Proven on the case's programme in fractions: all balances and bounds hold, the duals bound the objective, and both are"
        " equal. Feed carbon first, then total rate among the rates that reach it."
    )
    return AddedTable("certificate", "Certificate", columns, (row,), note=note, single=True)


def _findings(case: Case, found: Certified, answer: RefillAnswer) -> Iterable[Finding]:
    if not found.proof.proven:
        yield Finding("stop", "certificate", case.title, f"the answer could not be proven: {found.proof.reason}")
    elif (found.answer == "infeasible") != (answer.answer == "infeasible"):
        yield Finding("stop", "certificate", case.title, f"the answer says {answer.answer}, and {found.answer} is proven")
    elif found.gap is not None and found.gap > FAR:
        yield Finding("stop", "certificate", case.title, f"what is printed lies {found.gap:.2g} (relative) off what is proven")
