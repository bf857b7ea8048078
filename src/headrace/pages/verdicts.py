"""The answer in a sentence or two, before any table."""

from __future__ import annotations

from collections.abc import Iterable

from headrace.pages.beside import sentences
from headrace.pages.context import RATE, Context
from headrace.pages.numbers import joined, show
from headrace.values.answers import CeilingAnswer, GroupRow, GrowsAnswer, Ledger, RefillAnswer, RefillRow


def refills(context: Context, answer: RefillAnswer) -> str:
    """What is drained, what puts it back, and whether the design carries it; then what stands beside the answer."""
    return _refills(context, answer) + sentences(context)


def _refills(context: Context, answer: RefillAnswer) -> str:
    if answer.answer != "feasible":
        return _impossible(context, answer)
    book = answer.ledger
    if book is None:
        raise ValueError("a feasible answer has a ledger")
    by = _by_size(row for row in answer.refills if row.open) or _by_size(answer.groups)
    amount = f"{show(book.net_drain)} {RATE} of" if book.net_drain > 1e-9 else "no"
    drained = f"{_drainers(context)} {amount} skeletons{_also(book)}"
    if book.refilled < 1e-9:
        return f"{drained}; no refill has to run."
    return f"{drained}; {show(book.refilled)} must be put back by {joined(by)}.{_necessary(answer.groups)}{_cover(answer)}"


def _by_size(rows: Iterable[RefillRow | GroupRow]) -> list[str]:
    """Labels of those that run, largest first."""
    running = [(row.nominal, row.label) for row in rows if row.nominal is not None and row.nominal > 1e-9]
    return [label for _, label in sorted(running, key=lambda pair: -pair[0])]


def _drainers(context: Context) -> str:
    grows = context.case.growth is None or context.case.growth > 0
    return "Outlets and growth drain" if grows and context.case.demands else "Growth drains" if grows else "The outlets drain"


def _also(book: Ledger) -> str:
    """What else moves skeletons, in words."""
    moved = (("released as by-products", book.released), ("removed", book.removed), ("supplied by feeds", book.supplied))
    said = [f"{show(amount)} are {what}" for what, amount in moved if amount > 1e-9]
    return f" ({joined(said)})" if said else ""


def _necessary(groups: tuple[GroupRow, ...]) -> str:
    needed = [group.label for group in groups if group.necessary]
    if not needed:
        return " No single group is indispensable."
    return f" The design can't do without {joined(needed)}."


def _cover(answer: RefillAnswer) -> str:
    if answer.design_cover is None:
        return ""
    enough = "carry it" if answer.design_cover >= 1 else "DO NOT carry it"
    return f" The capacities {enough} (design cover {show(answer.design_cover)})."


def _impossible(context: Context, answer: RefillAnswer) -> str:
    short = [context.name(each.pool) for each in answer.shortage]
    closed = [row.label for row in answer.refills if not row.open]
    what = f": {joined(short)} can't be served" if short else ""
    shut = f" {len(closed)} of {len(answer.refills)} refills are closed." if closed else ""
    first = f" The smallest change that opens it: {answer.repairs[0].change}." if answer.repairs else ""
    return f"No, this design can't run{what}.{shut}{first}"


def ceiling(context: Context, answer: CeilingAnswer) -> str:
    """The largest yield, and what the next ceiling above it would be."""
    outlet, substrate = context.name(answer.outlet), context.compound(answer.substrate)
    if answer.answer != "feasible" or answer.mol_per_mol is None:
        return f"No: this design can't make {outlet} from {substrate}."
    said = f"{outlet} from {substrate}: at most {show(answer.mol_per_mol)} mol/mol as expressed"
    if answer.open_mol_per_mol is not None:
        said += f", {show(answer.open_mol_per_mol)} with every gene of the host in use"
    binding = f" What binds: {joined(list(answer.binding))}." if answer.binding else ""
    return f"{said}.{binding}"


def grows(context: Context, answer: GrowsAnswer) -> str:
    """Yes with the largest rate, or no with what is missing."""
    if answer.grows:
        said = f"Yes: {context.host.label} grows, at most at {show(answer.rate)} /h at the stated feed."
    else:
        lacking = f": {joined([context.name(each) for each in answer.missing])} can't be served" if answer.missing else ""
        said = f"No: {context.host.label} does not grow{lacking}."
    return said + (" The verdict flips with the basal level." if answer.flips_with_basal else "")
