"""The requirement: verdict, ledger, groups and refills, closed refills, cost, feed, findings."""

from __future__ import annotations

from headrace.pages import beside, ledger
from headrace.pages.added import added
from headrace.pages.context import CARBON, RATE, Context, versions
from headrace.pages.infeasible import repairs, shortage
from headrace.pages.model import Block, Cell, Column, Notes, Page, Table
from headrace.pages.notes import findings
from headrace.pages.numbers import counted, joined, show
from headrace.pages.verdicts import refills as verdict
from headrace.values.answers import RefillAnswer, RefillRow, Result

_PER_TURN = "mol/mol"
_IDLE = 1e-5


def page(result: Result, headrace: str, rates: bool = False) -> Page:
    """The page of `headrace refills`. rates: with the rate of every reaction that runs."""
    context = Context(result)
    answer = answer_of(result)
    each = blocks(context, answer) + ((reactions(context, answer),) if rates else ())
    return Page(
        title=f"{result.case.title or context.host.label}: what must be put back",
        subject=context.subject(),
        verdict=verdict(context, answer),
        blocks=each,
        main=main(answer),
        footnotes=context.footnotes(),
        cautions=context.cautions(),
        sources=tuple(context.used),
        versions=versions(result, headrace),
    )


def answer_of(result: Result) -> RefillAnswer:
    """The result's answer, which must be one on refills."""
    if not isinstance(result.answer, RefillAnswer):
        raise TypeError(f"a result on {result.kind} has no requirement to show")
    return result.answer


def blocks(context: Context, answer: RefillAnswer, with_findings: bool = True) -> tuple[Block, ...]:
    """All blocks in order; those that need a solution only where there is one."""
    book = ledger.blocks(context, answer.ledger) if answer.ledger else ()
    solved = answer.answer == "feasible"
    stuck: tuple[Block, ...] = () if solved else (shortage(context, answer.shortage), repairs(context, answer.repairs))
    flows: tuple[Block, ...] = (cost(context, answer), feed(context, answer), crossings(context, answer), *aim(answer))
    return (
        *beside.before(context),
        *stuck,
        *book,
        *((groups(context, answer), requirement(context, answer)) if solved else ()),
        *beside.after(context),
        closed(context, answer),
        *(flows if solved else ()),
        *added(context),
        *(findings(context) if with_findings else ()),
    )


def groups(context: Context, answer: RefillAnswer) -> Table:
    """One requirement per group, with what the group can carry."""
    columns = (
        Column("group"),
        *(Column(title, RATE, number=True) for title in ("least", "nominal", "most", "capacity")),
        Column("cover", number=True),
        Column("necessary"),
        Column("split", detail=True),
    )
    rows = tuple(
        (each.label, each.least, each.nominal, each.most, each.capacity, each.cover, each.necessary, each.split)
        for each in answer.groups
    )
    note = "Cover is capacity over nominal; necessary means infeasible without the group."
    return Table("groups", "Requirement by group", columns, rows, empty="No group of refills is open.", note=note)


def requirement(context: Context, answer: RefillAnswer) -> Table:
    """The open refills, by group."""
    columns = (
        Column("group"),
        Column("refill"),
        Column("in", detail=True),
        *(Column(title, RATE, number=True) for title in ("least", "nominal", "most", "capacity")),
        Column("cover", number=True),
        Column("necessary"),
        Column("EC", detail=True),
        Column("genes", detail=True),
        Column("cofactors", detail=True),
        Column("reading", detail=True),
        Column("source", detail=True),
    )
    rows = tuple(_requirement_row(context, answer, row) for row in _in_groups(answer) if row.open)
    note = splits(answer)
    return Table("requirement", "Requirement by refill", columns, rows, grouped=True, empty="No refill is open.", note=note)


def _requirement_row(context: Context, answer: RefillAnswer, row: RefillRow) -> tuple[Cell, ...]:
    recalled = row.reading == "recalled"
    name = context.mark(chain(context, row), recalled)
    values = (row.least, row.nominal, row.most, row.capacity, row.cover, row.necessary)
    facts = (", ".join(row.ec), row.genes, ", ".join(context.compound(each) for each in row.cofactors))
    place = context.place(row.compartment)
    return (group_label(answer, row.group), name, place, *values, *facts, row.reading, context.cite(row.source))


def chain(context: Context, row: RefillRow) -> str:
    """A refill's label; a chain names the steps whose flux it forces."""
    return f"{row.label} with {joined([context.name(step) for step in row.steps])}" if row.steps else row.label


def group_label(answer: RefillAnswer, group: str) -> str:
    """The label of a group."""
    return next((each.label for each in answer.groups if each.group == group), group)


def splits(answer: RefillAnswer) -> str:
    """How the requirement of each group is split, in words."""
    said = [f"{each.label}: {each.split}" for each in answer.groups if each.split and len(each.members) > 1]
    return f"Split: {'; '.join(said)}." if said else ""


def closed(context: Context, answer: RefillAnswer) -> Table:
    """The refills that exist but can't be used, and why."""
    shown = (Column("closed refill"), Column("in", alike=True), Column("why it is closed"))
    columns = (*shown, Column("EC", detail=True), Column("source", detail=True))
    rows = tuple(
        (
            context.mark(row.label, row.reading == "recalled"),
            context.place(row.compartment),
            row.reason,
            ", ".join(row.ec),
            context.cite(row.source),
        )
        for row in _in_groups(answer)
        if not row.open
    )
    return Table("closed", "Closed refills", columns, rows, empty="Every refill of the host is open.")


def cost(context: Context, answer: RefillAnswer) -> Table:
    """What the open refills cost, per turn and at the nominal rate. A chain's cost is that of all its steps."""
    columns = (
        Column("refill"),
        Column("skeletons per turn", _PER_TURN, number=True),
        Column("ATP per turn", _PER_TURN, number=True),
        Column("CO2 fixed per turn", _PER_TURN, number=True),
        Column("ATP", RATE, number=True),
        Column("CO2 fixed", RATE, number=True),
    )
    rows = tuple(
        (chain(context, row), row.skeletons_per_turn, *per_turn, *(_times(row, amount) for amount in per_turn))
        for row in answer.refills
        for per_turn in ((row.atp, row.carbon_fixed),)
        if row.open and max(row.nominal or 0.0, row.most or 0.0) > _IDLE
    )
    return Table("cost", "Cost of the refills", columns, rows, empty="No refill runs.")


def _times(row: RefillRow, per_turn: float) -> float | None:
    return None if row.nominal is None else per_turn * row.nominal


def feed(context: Context, answer: RefillAnswer) -> Table:
    """What is fed."""
    columns = (Column("feed"), Column("uptake", RATE, number=True), Column("carbon", CARBON, number=True))
    rows = tuple((context.compound(row.substrate), row.uptake, row.carbon) for row in answer.feed)
    surplus = f"Surplus carbon: {show(answer.surplus_carbon)} {CARBON}." if answer.surplus_carbon is not None else ""
    return Table("feed", "Feed", columns, rows, empty="Nothing is fed.", note=surplus)


def crossings(context: Context, answer: RefillAnswer) -> Table:
    """What crosses the cell's boundary: into the cell positive."""
    columns = (Column("compound"), Column("into the cell", RATE, number=True))
    ordered = sorted(answer.crossings, key=lambda each: (each.rate < 0, -abs(each.rate), each.compound))
    rows = tuple((context.compound(each.compound), each.rate) for each in ordered)
    off = max((abs(value) for value in answer.closure.values()), default=None)
    parts = joined(list(answer.closure))
    note = ""
    if off is not None:
        note = f"{parts} close below 1e-9." if off < 1e-9 else f"CLOSURE FAILS: {parts} close only within {off:.3g}."
    return Table("crossings", "Across the cell's boundary", columns, rows, empty="Nothing crosses.", note=note)


def reactions(context: Context, answer: RefillAnswer) -> Table:
    """The rate of every reaction that runs or could."""
    columns = (Column("reaction"), *(Column(title, RATE, number=True) for title in ("rate", "least", "most")))
    moving = [row for row in answer.rates if max(abs(rate or 0.0) for rate in (row.rate, row.least, row.most)) > _IDLE]
    rows = tuple((context.name(row.reaction), row.rate, row.least, row.most) for row in moving)
    idle = len(answer.rates) - len(moving)
    note = f"{counted(idle, 'reaction')} can't move by more than {_IDLE:g} {RATE}: --format json has all." if idle else ""
    return Table("rates", "Rates of the reactions", columns, rows, empty="Nothing runs.", note=note)


def aim(answer: RefillAnswer) -> tuple[Notes, ...]:
    """What was optimised, with which freedom."""
    lines = [f"aim: {answer.aim}"] if answer.aim else []
    if answer.cycling_cap is not None:
        lines.append(f"least and most allow at most {show(answer.cycling_cap)} {RATE} of ATP to be spent in cycling")
    if answer.design_cover is not None:
        lines.append(f"design cover: all outlets and growth could be {show(answer.design_cover)} times as large")
    spent = [f"{use} {show(value)}" for use, value in answer.energy.items()]
    lines += [f"ATP spent ({RATE}): {', '.join(spent)}"] if spent else []
    return (Notes("How it was worked out", tuple(lines)),) if lines else ()


def main(answer: RefillAnswer) -> Table:
    """One row per refill, open or closed, with all columns: the table that csv gives."""
    texts = ("refill", "label", "group", "ec", "compartment", "steps")
    after = ("split", "necessary", "open", "reason", "genes", "cofactors", "reading", "source")
    columns = (
        *(Column(title) for title in texts),
        *(Column(f"{title} per turn", _PER_TURN, number=True) for title in ("skeletons", "ATP", "CO2 fixed")),
        *(Column(title, RATE, number=True) for title in ("least", "nominal", "most", "capacity")),
        Column("cover", number=True),
        *(Column(title) for title in after),
    )
    return Table("refills", "Refills", columns, tuple(_main_row(row) for row in answer.refills), empty="The host has no refill.")


def _main_row(row: RefillRow) -> tuple[Cell, ...]:
    names = (row.refill, row.label, row.group, " ".join(row.ec), row.compartment, " ".join(row.steps))
    rates = (row.skeletons_per_turn, row.atp, row.carbon_fixed, row.least, row.nominal, row.most, row.capacity, row.cover)
    after = (row.split, row.necessary, row.open, row.reason, row.genes, " ".join(row.cofactors), row.reading, row.source)
    return (*names, *rates, *after)


def _in_groups(answer: RefillAnswer) -> list[RefillRow]:
    order = [each.group for each in answer.groups]
    return sorted(answer.refills, key=lambda row: order.index(row.group) if row.group in order else len(order))
