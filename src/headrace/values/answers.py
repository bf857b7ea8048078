"""What the phases answer. Frozen values; the main ones have the keys of the JSON output (see README).

Rates are mmol/gDW/h, carbon is mmol C/gDW/h, skeletons are mmol/gDW/h, per-mole figures are exact fractions.
"""

from __future__ import annotations

from fractions import Fraction

from msgspec import Struct

from headrace.values.case import Case, Finding
from headrace.values.facts import Facts
from headrace.values.fold import Fold
from headrace.values.measured import Reconciliation
from headrace.values.phases import Plan
from headrace.values.uncertainty import Bands


class PoolTerm(Struct, frozen=True):
    """One pool of a route vector, mole per mole of outlet (all >= 0 but net = taken - returned)."""

    compound: str
    place: str
    taken: Fraction = Fraction(0)
    returned: Fraction = Fraction(0)
    shuttled: Fraction = Fraction(0)


class Draw(Struct, frozen=True):
    """What one mole of an outlet takes. scale: names of the scenario scalars that multiply it ("growth" or "outlet.0").

    needs: net need per mole (positive = used, negative = made) of atp, nadph, nadh, quinol, co2, ammonium, oxygen, one-carbon.
    skeletons: net skeletons per mole. steps: reaction slug -> mole per mole of outlet. routes: slugs used.
    draws: what one mole draws from the network, compound -> mole (negative: given back); the network draws this.
    missing: steps that the case has no row for.
    """

    outlet: str
    label: str
    scale: tuple[str, ...]
    pools: tuple[PoolTerm, ...]
    needs: dict[str, Fraction]
    skeletons: Fraction
    steps: dict[str, Fraction]
    routes: tuple[str, ...]
    origin: str
    recalled: bool = False
    readings: tuple[str, ...] = ()
    draws: dict[str, Fraction] = {}
    missing: tuple[str, ...] = ()


class DrainRow(Struct, frozen=True):
    """A draw times its rate, one pool. Rates in mmol/gDW/h; skeletons = net times the pool's content."""

    outlet: str
    pool: str
    compound: str
    compartment: str
    taken: float
    returned: float
    shuttled: float
    net: float
    carbon_net: float
    skeletons: float


class LedgerRow(Struct, frozen=True):
    """side: left | right. kind: drained | released | removed | refilled | supplied | carried-in | carried-out."""

    side: str
    kind: str
    what: str
    compartment: str
    skeletons: float


class CompartmentLedger(Struct, frozen=True):
    """The same law in one compartment, with what carriers bring in and out. residual should vanish."""

    compartment: str
    drained: float
    released: float
    removed: float
    carried_out: float
    refilled: float
    supplied: float
    carried_in: float
    residual: float


class Ledger(Struct, frozen=True):
    """net_drain + released + removed = refilled + supplied, in skeletons (mmol/gDW/h)."""

    net_drain: float
    released: float
    removed: float
    refilled: float
    supplied: float
    residual: float
    rows: tuple[LedgerRow, ...]
    compartments: tuple[CompartmentLedger, ...]


class RefillRow(Struct, frozen=True):
    """One refill of the host. None = not known or not defined (never a guess)."""

    refill: str
    label: str
    group: str
    ec: tuple[str, ...]
    compartment: str
    steps: tuple[str, ...]
    skeletons_per_turn: float
    least: float | None
    nominal: float | None
    most: float | None
    split: str
    capacity: float | None
    cover: float | None
    necessary: bool
    open: bool
    reason: str
    atp: float
    carbon_fixed: float
    genes: str = ""
    cofactors: tuple[str, ...] = ()
    reading: str = ""
    source: str = ""


class GroupRow(Struct, frozen=True):
    """A group of refills that can stand in for one another: one requirement, one capacity."""

    group: str
    label: str
    members: tuple[str, ...]
    least: float | None
    nominal: float | None
    most: float | None
    capacity: float | None
    cover: float | None
    necessary: bool
    split: str


class FeedRow(Struct, frozen=True):
    """What is taken of one carbon source: uptake in mmol/gDW/h, carbon in mmol C/gDW/h."""

    substrate: str
    uptake: float
    carbon: float


class Crossing(Struct, frozen=True):
    """Net rate across the cell's boundary; into the cell positive."""

    compound: str
    rate: float


class Shortage(Struct, frozen=True):
    """A pool that can't be served: missing in mmol/gDW/h.

    price: by how much the whole shortage (mmol C/gDW/h, see `headrace.network.shortage`) falls per mmol/gDW/h put into it.
    """

    pool: str
    missing: float
    price: float | None = None


class Repair(Struct, frozen=True):
    """A smallest change that opens an infeasible case; aim = least feed carbon of the repaired case (None if not defined).

    kind: reopen | express | regulator | reverse | add | raise | supplement | release | uptake | lower, or joint where
    several are needed. parts: each of them in words, none of which can be left out. reason: why what it opens is shut.
    refills: slugs of the refills that it opens.
    """

    change: str
    kind: str
    aim: float | None
    parts: tuple[str, ...] = ()
    reason: str = ""
    refills: tuple[str, ...] = ()


class RateRow(Struct, frozen=True):
    """The net forward rate of a row at the aim, and over its optima (mmol/gDW/h)."""

    reaction: str
    rate: float
    least: float | None = None
    most: float | None = None


class RefillAnswer(Struct, frozen=True):
    """What `headrace refills` answers. Fields below `aim` that need a solution are empty when infeasible.

    drawn: what outlets, biomass and maintenance draw, per compound (negative), so that crossings + drawn close.
    scalars: the rate of each demand ("growth" 1/h, "outlet.0" mmol/gDW/h). energy: mmol ATP/gDW/h by use.
    """

    answer: str
    aim: str
    drains: tuple[DrainRow, ...]
    ledger: Ledger | None
    refills: tuple[RefillRow, ...]
    groups: tuple[GroupRow, ...]
    feed: tuple[FeedRow, ...]
    crossings: tuple[Crossing, ...]
    shortage: tuple[Shortage, ...]
    repairs: tuple[Repair, ...]
    closure: dict[str, float]
    drawn: tuple[Crossing, ...] = ()
    removals: tuple[RateRow, ...] = ()
    rates: tuple[RateRow, ...] = ()
    energy: dict[str, float] = {}
    surplus_carbon: float | None = None
    cycling_cap: float | None = None
    design_cover: float | None = None
    scalars: dict[str, float] = {}
    findings: tuple[Finding, ...] = ()


class Answer(Struct, frozen=True):
    """One solve of a case. status: optimal | infeasible | unbounded | unknown; the rest exists when optimal.

    carbon: feed carbon entering (mmol C/gDW/h). rates: net forward rate per row (mmol/gDW/h). enter, leave: across the
    medium's edge, per compound.
    """

    status: str
    aim: str
    carbon: float | None = None
    rates: dict[str, float] = {}
    enter: dict[str, float] = {}
    leave: dict[str, float] = {}


class CeilingAnswer(Struct, frozen=True):
    """Largest yields of one outlet, side by side. None where not defined (then a finding says why)."""

    outlet: str
    substrate: str
    growth: float
    mol_per_mol: float | None
    open_mol_per_mol: float | None
    g_per_g: float | None
    cmol_per_cmol: float | None
    electron_ceiling_mol_per_mol: float | None
    carbon_ceiling_mol_per_mol: float | None
    carbon_ceiling_with_co2_mol_per_mol: float | None
    co2_rule: str
    binding: tuple[str, ...]
    answer: str
    findings: tuple[Finding, ...] = ()


class GrowsAnswer(Struct, frozen=True):
    """Whether the strain grows on the medium. rate: largest growth, 1/h, at the stated feed."""

    grows: bool
    rate: float
    because: tuple[str, ...]
    missing: tuple[str, ...]
    flips_with_basal: bool
    rules: tuple[str, ...] = ()
    fitted: bool = False
    repairs: tuple[Repair, ...] = ()
    findings: tuple[Finding, ...] = ()


class TableColumn(Struct, frozen=True):
    """key: name in JSON; title: heading for people; unit of its numbers. detail: left out on a terminal."""

    key: str
    title: str
    unit: str = ""
    number: bool = False
    detail: bool = False


class AddedTable(Struct, frozen=True):
    """A table that a check adds to an answer. key: its key in JSON, unlike any other.

    Cells are text, several texts, numbers, yes or no, None. note: a sentence below it; empty: what is said when there are no
    rows. detail: left out on a terminal. single: it has one row, an object in JSON instead of a list of objects.
    """

    key: str
    title: str
    columns: tuple[TableColumn, ...]
    rows: tuple[tuple[str | tuple[str, ...] | float | bool | None, ...], ...]
    note: str = ""
    empty: str = ""
    detail: bool = False
    single: bool = False


class Result(Struct, frozen=True):
    """One question answered. kind: drains | refills | ceiling | grows; answer is None for drains.

    facts_version: hash of all facts used. plugins: names of the plugins that took part. facts: what the answer was
    made from (labels, sources and readings for whoever shows it). related: answers to other questions on the same
    scenario that a report shows beside this one (the ceiling of each outlet). tables: what checks add.

    measured: what the balances say about rates measured on this strain. parent: the same question on the strain that
    exists, and folds: this one against it. plan: of a scenario with phases, whose answers are `phases`; the answer here is
    that of the phase that binds. bands: of uncertain inputs.
    """

    kind: str
    case: Case
    facts_version: str
    facts: Facts
    draws: tuple[Draw, ...]
    drains: tuple[DrainRow, ...]
    answer: RefillAnswer | CeilingAnswer | GrowsAnswer | None
    findings: tuple[Finding, ...] = ()
    plugins: tuple[str, ...] = ()
    related: tuple[Result, ...] = ()
    tables: tuple[AddedTable, ...] = ()
    measured: Reconciliation | None = None
    parent: Result | None = None
    folds: tuple[Fold, ...] = ()
    plan: Plan | None = None
    phases: tuple[Result, ...] = ()
    bands: Bands | None = None


class Document(Struct, frozen=True):
    """A file that a report proposes; the core writes it. name: a plain file name; media_type: such as "text/markdown"."""

    name: str
    media_type: str
    text: str
