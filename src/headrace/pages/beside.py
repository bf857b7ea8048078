"""What stands beside a requirement: measured rates, the strain that exists, the phases of a plan, bands of uncertain inputs."""

from __future__ import annotations

from headrace.pages.context import RATE, Context
from headrace.pages.model import Block, Cell, Column, Notes, Table
from headrace.pages.numbers import counted, joined, show
from headrace.values.fold import Fold
from headrace.values.measured import Reconciled, Reconciliation
from headrace.values.phases import Plan
from headrace.values.uncertainty import Bands

_PER_LITRE = "mmol/L"
_FAR = 1e-9


def sentences(context: Context) -> str:
    """What the verdict adds about them, with a blank in front; "" when there is nothing."""
    result = context.result
    said = []
    if result.plan is not None:
        plan = result.plan
        said.append(f"Of {counted(len(plan.phases), 'phase')}, {plan.binding} binds: {plan.because}. What follows is that phase.")
    if result.parent is not None:
        said.append(_against(context))
    if result.bands is not None:
        said.append(_sure(result.bands))
    return "".join(f" {each}" for each in said if each)


def _against(context: Context) -> str:
    """Runs 1.8 now, needs 5.4, three-fold."""
    assert context.result.parent is not None
    groups = [fold for fold in context.result.folds if fold.kind == "group" and fold.needs is not None and fold.needs > _FAR]
    if not context.result.folds:
        stuck = getattr(context.result.parent.answer, "answer", "") == "infeasible"
        return "The parental strain can't run at its own rates." if stuck else ""
    return " ".join(f"{fold.label[:1].upper()}{fold.label[1:]} runs {show(fold.now)} now, needs {show(fold.needs)}{times(fold)}."
                    for fold in groups)


def times(fold: Fold) -> str:
    """", 3-fold", or that nothing runs now."""
    if fold.fold is None:
        return ", none of it now" if fold.now is not None and fold.now <= _FAR else ""
    return f", {show(fold.fold)}-fold"


def _sure(bands: Bands) -> str:
    group = max((band for band in bands.bands if band.kind == "group"), key=lambda band: band.p50, default=None)
    if group is None:
        return ""
    said = f"With what is uncertain, {group.label} needs {show(group.p5)} to {show(group.p95)} {RATE} in 90 % of cases"
    said += f"; the capacities carry {show(100 * group.carried)} % of them" if group.carried is not None else ""
    drivers = [driver for driver in bands.drivers if driver.about == group.what]
    if not drivers or max(driver.first for driver in drivers) <= 0.01:
        return f"{said}."
    top = max(drivers, key=lambda driver: driver.first)
    return f"{said}. Knowing {top.input} exactly would narrow this most, to about {show(100 * top.narrowed)} % of its width."


def before(context: Context) -> tuple[Block, ...]:
    """What is shown before the sizing: measured rates, and the plan."""
    result = context.result
    parent = result.parent.measured if result.parent is not None else None
    measured = result.measured or parent
    whose = "the parental strain" if parent is not None and result.measured is None else "the strain"
    return (*(reconciliation(measured, whose) if measured else ()), *(phases(result.plan) if result.plan else ()))


def after(context: Context) -> tuple[Block, ...]:
    """What is shown after the requirement: the design against the parental strain, and bands."""
    result = context.result
    return (*((folds(context),) if result.parent is not None else ()), *(bands(result.bands) if result.bands else ()))


def reconciliation(found: Reconciliation, whose: str = "the strain") -> tuple[Block, ...]:
    """Recoveries, the test, reconciled rates, and what would explain a gross error."""
    columns = (Column("balance"), Column("taken up", RATE, number=True), Column("found", RATE, number=True),
               Column("recovery", "%", number=True), Column("+-", "%", number=True), Column("found in", detail=True),
               Column("not measured"))
    rows = tuple((each.element, each.taken, each.found, _percent(each.share), _percent(each.error), ", ".join(each.counted),
                  ", ".join(each.missing)) for each in found.recoveries)
    quotient = found.respiratory_quotient
    note = f"CO2 released per O2 taken up: {show(quotient)} mol/mol." if quotient is not None else ""
    return (Table("recoveries", f"Recoveries, measured on {whose}", columns, rows, note=note),
            Notes("Do the measured rates balance?", (_tested(found),), listed=False), _rates(found), *_suspicions(found))


def _percent(share: float | None) -> float | None:
    return None if share is None else 100 * share


def _tested(found: Reconciliation) -> str:
    balances = joined(list(found.balances))
    if found.verdict == "not checked":
        return f"Not checked: with these readings no balance of {balances} is free of unmeasured rates."
    test = f"chi-square {show(found.h)} with {counted(found.freedom, 'degree')} of freedom, p = {show(found.p)}"
    if found.verdict == "consistent":
        return f"Yes: {test}. The reconciled rates of growth, feeds and products are those that the strain is sized at."
    return f"NO: {test}. {found.named[:1].upper()}{found.named[1:]}."


def _rates(found: Reconciliation) -> Table:
    numbers = (Column(title, RATE, number=True) for title in ("measured", "+-", "reconciled", "+- after"))
    columns = (Column("rate"), Column("way"), *numbers, Column("shift", number=True), Column("checked", detail=True),
               Column("used", detail=True))
    note = "Growth is in 1/h. Shift: reconciled less measured, in standard errors. What has no reading follows from the balances."
    return Table("reconciled", "Measured and reconciled rates", columns, tuple(_rate(row) for row in found.rates), note=note)


def _rate(row: Reconciled) -> tuple[Cell, ...]:
    way = "" if row.direction == "growth" else row.direction
    numbers = (row.measured, row.error, row.reconciled, row.remaining, row.shift)
    return (row.label, way, *numbers, row.checked, row.sized or row.exact)


def _suspicions(found: Reconciliation) -> tuple[Table, ...]:
    if found.verdict != "gross error":
        return ()
    columns = (Column("what may be wrong"), Column("how"), Column("it would be", RATE, number=True),
               Column("chi-square without", number=True), Column("p", number=True), Column("explains"))
    how = {"reading": "misread", "forgotten": "not measured"}
    rows = tuple((each.label, how[each.kind], each.would_be, each.h, each.p, each.explains) for each in found.suspicions)
    return (Table("suspicions", "What would explain it", columns, rows, empty="Nothing that was tried."),)


def phases(plan: Plan) -> tuple[Block, ...]:
    """The plan: each phase, what each group carries in it, and totals."""
    blocks: tuple[Block, ...] = (_phases(plan), _carried(plan), _totals(plan))
    return (*blocks, Notes("About the plan", plan.findings)) if plan.findings else blocks


def _phases(plan: Plan) -> Table:
    columns = (Column("phase"), Column("lasts", "h", number=True), Column("growth", "1/h", number=True),
               Column("biomass", "gDW/L", number=True), Column("to", "gDW/L", number=True),
               Column("integral", "gDW h/L", number=True, detail=True), Column("drained", RATE, number=True),
               Column("refilled", RATE, number=True), Column("cover", number=True), Column("binds"))
    rows = tuple((row.name if row.answer == "feasible" else f"{row.name} (can't run)", row.hours, row.growth, row.start, row.end,
                  row.integral, row.drained, row.refilled, row.cover, row.binds) for row in plan.phases)
    sums = f"{show(plan.hours)} h, {show(plan.integral)} gDW h/L, {show(plan.final_biomass)} gDW/L at its end"
    return Table("phases", "Phases", columns, rows, note=f"Litres are those of the start. Whole plan: {sums}.")


def _carried(plan: Plan) -> Table:
    columns = (Column("group"), Column("phase"), Column("requirement", RATE, number=True),
               Column("at its end", "mmol/L/h", number=True), Column("in all", _PER_LITRE, number=True),
               Column("capacity", RATE, number=True), Column("cover", number=True))
    found = [(row.name, group) for row in plan.phases for group in row.groups if group.rate > _FAR]
    found += [("whole plan", group) for group in plan.groups if group.total > _FAR]
    rows = tuple((group.label, name, group.rate, group.at_end, group.total, group.capacity, group.cover)
                 for name, group in sorted(found, key=lambda pair: pair[1].label))
    note = "Whole plan: the requirement is the mean over the integrated biomass, the rest is the worst of all phases."
    title, empty = "Requirement by group and phase", "No refill runs."
    return Table("phase-groups", title, columns, rows, grouped=True, empty=empty, note=note)


def _totals(plan: Plan) -> Table:
    columns = (Column("what"), Column("kind"), Column("in all", _PER_LITRE, number=True), Column("mass", "g/L", number=True),
               Column("per biomass", "mmol/gDW", number=True), Column("largest", "mmol/L/h", number=True))
    rows = tuple((flow.label, flow.kind, flow.total, flow.grams, flow.per_biomass, flow.at_end) for flow in plan.flows)
    return Table("totals", "Totals of the plan", columns, rows, note="Per biomass: of the gDW that the plan ends with.")


def folds(context: Context) -> Table:
    """What runs now, what is needed, and how many times as much."""
    columns = (Column("what"), Column("runs now", RATE, number=True), Column("needs", RATE, number=True),
               Column("fold", number=True))
    rows = tuple((fold.label, fold.now, fold.needs, fold.fold) for fold in context.result.folds)
    parent = context.result.parent
    title = parent.case.title if parent is not None else ""
    now = Context(parent).subject()[0] if parent is not None else ""
    return Table("fold", f"Against the parental strain{f' ({title})' if title else ''}", columns, rows,
                 empty="One of the two can't run.", note=f"Now: {now}." if now else "")


def bands(found: Bands) -> tuple[Block, ...]:
    """Bands, what drives them, and the inputs."""
    columns = (Column("what"), *(Column(title, RATE, number=True) for title in ("nominal", "P5", "P50", "P95")),
               Column("capacity is enough", "%", number=True))
    rows = tuple((band.label, band.nominal, band.p5, band.p50, band.p95, _percent(band.carried)) for band in found.bands)
    given = (Column("input"), Column("unit"), *(Column(title, number=True) for title in ("nominal", "low", "high")),
             Column("distribution"), Column("from", detail=True))
    inputs = tuple((i.label, i.unit, i.nominal, i.low, i.high, i.distribution, i.origin) for i in found.inputs)
    note = "Low and high of normal and lognormal: 5 % and 95 % points."
    return (Table("bands", f"Bands over {found.samples} samples", columns, rows, note=_counted(found)), _drivers(found),
            Table("inputs", "What is uncertain", given, inputs, note=note),
            Notes("About the samples", found.notes))


def _drivers(found: Bands) -> Table:
    about = {band.what: band.label for band in found.bands}
    columns = (Column("requirement"), Column("input"), Column("alone", "%", number=True),
               Column("+-", "%", number=True, detail=True), Column("with others", "%", number=True),
               Column("width left", "%", number=True))
    ordered = sorted(found.drivers, key=lambda each: (list(about).index(each.about), -each.first))
    rows = tuple((about[each.about], each.input, 100 * each.first, 100 * each.first_error, 100 * each.total, 100 * each.narrowed)
                 for each in ordered)
    note = "Shares of the variance that an input explains alone and with all others (Sobol indices); width that is left of the " \
           "band when the input is known exactly."
    empty = "Nothing: no requirement varies, or too few samples have an answer."
    return Table("drivers", "What drives the bands", columns, rows, grouped=True, empty=empty, note=note)


def _counted(found: Bands) -> str:
    said = f"Seed {found.seed}. {found.feasible} of {found.samples} samples can be met"
    if found.beyond_capacity:
        said += f", {found.beyond_capacity} only beyond the stated limits (they count with what they would need)"
    if found.infeasible:
        said += f", {found.infeasible} not at all (they are left out)"
    return f"{said}."
