"""What a design hangs on: single necessary refills, cofactors, refills that run against a removal, recalled facts."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from headrace.api import Case, Draw, Finding, RefillAnswer, RefillRow
from headrace_plugins.refills.whole_network import EXAMPLE

RUNS = 1e-6


class Dependence:
    """Findings about the refills that a feasible answer uses."""

    name = "dependence"
    summary = "Which refills, cofactors and unconfirmed facts a design can't do without."
    example = EXAMPLE

    def checks(self, case: Case, draws: tuple[Draw, ...], answers: Sequence[RefillAnswer]) -> Iterable[Finding]:
        for answer in answers:
            used = [r for r in answer.refills if r.open and (r.nominal or r.most or 0.0) > RUNS]
            yield from _necessary(used)
            yield from _cofactors(used)
            yield from _against(answer)
            yield from _recalled(used)
            yield from _capacity(answer)
        yield from _recalled_routes(draws)


def _necessary(used: Sequence[RefillRow]) -> Iterator[Finding]:
    for row in used:
        if row.necessary:
            yield Finding("note", "necessity", row.refill, f"the case can't be met without {row.label}", row.source)


def _cofactors(used: Sequence[RefillRow]) -> Iterator[Finding]:
    for row in used:
        if row.cofactors:
            yield Finding("note", "cofactors", row.refill, f"{row.label} needs {', '.join(row.cofactors)}", row.source)


def _against(answer: RefillAnswer) -> Iterator[Finding]:
    if answer.ledger is None or answer.ledger.removed < RUNS or answer.ledger.refilled < RUNS:
        return
    removed = ", ".join(f"{r.reaction} {r.rate:.3g}" for r in answer.removals)
    yield Finding("note", "removal", "ledger", f"skeletons are refilled and removed at once; removed mmol/gDW/h: {removed}")


def _recalled(used: Sequence[RefillRow]) -> Iterator[Finding]:
    for row in used:
        if row.reading == "recalled":
            yield Finding("caution", "unconfirmed", row.refill, f"that this host has {row.label} in this direction is "
                          "recalled, not confirmed in a source", row.source)


def _recalled_routes(draws: Sequence[Draw]) -> Iterator[Finding]:
    for draw in draws:
        if draw.recalled:
            yield Finding("note", "unconfirmed", draw.outlet, f"the route of {draw.label} rests on recalled facts")


def _capacity(answer: RefillAnswer) -> Iterator[Finding]:
    if answer.design_cover is not None and answer.design_cover < 1.2:
        level = "stop" if answer.design_cover < 1 else "caution"
        yield Finding(level, "capacity", "design", f"stated capacities allow {answer.design_cover:.2f} times the rates asked for")
