"""The keys of a scenario file: names, types, and what each accepts in words. The JSON Schema comes from here.

Quantities are text with a unit; the `Kind` in their annotation says which. What the user leaves out is UNSET.
"""

from __future__ import annotations

from typing import Annotated, Any, Literal

import msgspec
from msgspec import UNSET, Meta, Struct, UnsetType

from headrace import units

Name = Annotated[str, Meta(min_length=1, max_length=200)]
Text = Annotated[str, Meta(max_length=1000)]
Rate = Annotated[str, Meta(description=units.RATE.accepted), units.RATE]
MolarRate = Annotated[str, Meta(description=units.MOLAR_RATE.accepted), units.MOLAR_RATE]
Growth = Annotated[str | Literal[0], Meta(description=units.GROWTH.accepted), units.GROWTH]
Yield = Annotated[str, Meta(description=units.YIELD.accepted), units.YIELD]
Productivity = Annotated[str, Meta(description=units.PRODUCTIVITY.accepted), units.PRODUCTIVITY]
CellDensity = Annotated[str, Meta(description=units.CELL_DENSITY.accepted), units.CELL_DENSITY]
Capacity = Annotated[str, Meta(description=units.CAPACITY.accepted), units.CAPACITY]
Content = Annotated[str, Meta(description=units.CONTENT.accepted), units.CONTENT]
Ratio = Annotated[str, Meta(description=units.RATIO.accepted), units.RATIO]
Share = Annotated[str, Meta(description=units.SHARE.accepted), units.SHARE]
Temperature = Annotated[str, Meta(description=units.TEMPERATURE.accepted), units.TEMPERATURE]
Factor = Annotated[str, Meta(description=units.FACTOR.accepted), units.FACTOR]
GrowthRate = Annotated[str, Meta(description=units.GROWTH_RATE.accepted), units.GROWTH_RATE]
GrowthError = Annotated[str, Meta(description=units.GROWTH_ERROR.accepted), units.GROWTH_ERROR]
RateError = Annotated[str, Meta(description=units.RATE_ERROR.accepted), units.RATE_ERROR]
Duration = Annotated[str, Meta(description=units.DURATION.accepted), units.DURATION]

# A scenario is small; this bounds what a stranger's file can make the program do.
LONGEST_LIST = 500


class Table(Struct, frozen=True, rename="kebab", forbid_unknown_fields=True):
    """A table of the file: keys are the fields' names with hyphens, and no others."""


class Feed(Table, frozen=True):
    """A carbon source; without an uptake the least feed is asked for."""

    substrate: Name
    uptake: Rate | UnsetType = UNSET


class Supplement(Table, frozen=True):
    """A compound in the medium besides the feed, with the largest uptake."""

    compound: Name
    rate: MolarRate | UnsetType = UNSET


class Conditions(Table, frozen=True):
    """What surrounds the cells. oxygen-rate: the largest oxygen uptake, for limited oxygen."""

    oxygen: Literal["aerobic", "limited", "anaerobic"] | UnsetType = UNSET
    oxygen_rate: MolarRate | UnsetType = UNSET
    supplements: list[Name | Supplement] = []
    release: list[Name] | UnsetType = UNSET
    circumstances: list[Name] = []


class Strain(Table, frozen=True):
    """Edits of the host: genes, enzymes, EC numbers, reactions or single rows; limits as rates or activities."""

    remove: list[Name] = []
    add: list[Name] = []
    limit: dict[str, Capacity] = {}


class Outlet(Table, frozen=True):
    """A product: exactly one of rate, yield and productivity; biomass is the cell density of a productivity."""

    product: Name
    rate: Rate | UnsetType = UNSET
    yield_: Yield | UnsetType = msgspec.field(name="yield", default=UNSET)
    productivity: Productivity | UnsetType = UNSET
    biomass: CellDensity | UnsetType = UNSET
    form: Name | UnsetType = UNSET
    options: dict[str, Any] = {}


class Energy(Table, frozen=True):
    """Energetics that differ from the host's facts."""

    p_o_nadh: Ratio | UnsetType = UNSET
    maintenance: MolarRate | UnsetType = UNSET
    growth_associated_atp: Content | UnsetType = UNSET
    basal_level: Content | UnsetType = UNSET


class Assay(Table, frozen=True):
    """How activities in [strain] limit were measured: what makes of them what the enzyme carries in the cell.

    saturation: share of the measured activity that the cell's substrate levels allow; extract-protein: share of the cell's
    protein that the assayed extract holds; q10: factor per 10 C between assay and culture.
    """

    saturation: Share | UnsetType = UNSET
    extract_protein: Share | UnsetType = UNSET
    assay_temperature: Temperature | UnsetType = UNSET
    culture_temperature: Temperature | UnsetType = UNSET
    q10: Factor | UnsetType = UNSET


class Aim(Table, frozen=True):
    """How the answer is chosen. slack: how far from the best; expression: as expressed, or every gene of the host."""

    slack: Share | UnsetType = UNSET
    expression: Literal["as expressed", "open"] = "as expressed"


class Range(Table, frozen=True):
    """An uncertain quantity: low and high, or sd around the stated value; in the unit that the quantity itself takes.

    low and high are the ends of a uniform or triangular distribution (peak: the stated value), and the 5 % and 95 % points of
    a normal or lognormal one. Nothing is drawn below 0.
    """

    low: Name | UnsetType = UNSET
    high: Name | UnsetType = UNSET
    sd: Name | UnsetType = UNSET
    distribution: Literal["uniform", "triangular", "normal", "lognormal"] | UnsetType = UNSET


Spread = list[Name] | Range


class Uncertainty(Table, frozen=True):
    """What is not known exactly: [low, high], or a table. facts: whether facts with a range of their own vary as well.

    feed, supplement, outlet: by name of the compound or product; limit: by its key in [strain]; split: by enzyme, its measured
    share of a group; composition: by biomass fraction, in % of the known amount.
    """

    growth: Spread | UnsetType = UNSET
    oxygen_rate: Spread | UnsetType = UNSET
    maintenance: Spread | UnsetType = UNSET
    growth_associated_atp: Spread | UnsetType = UNSET
    basal_level: Spread | UnsetType = UNSET
    p_o_nadh: Spread | UnsetType = UNSET
    feed: dict[str, Spread] = {}
    supplement: dict[str, Spread] = {}
    outlet: dict[str, Spread] = {}
    limit: dict[str, Spread] = {}
    split: dict[str, Spread] = {}
    composition: dict[str, Spread] = {}
    facts: Literal["ranges", "values"] = "ranges"


class GrowthReading(Table, frozen=True):
    """A measured growth rate with its standard error."""

    rate: GrowthRate
    error: GrowthError


class RateReading(Table, frozen=True):
    """A measured rate with its standard error."""

    rate: Rate
    error: RateError


class Measured(Table, frozen=True):
    """Rates measured on the strain that exists, by compound: what it takes up and what it releases."""

    growth: GrowthReading | UnsetType = UNSET
    uptake: dict[str, RateReading] = {}
    release: dict[str, RateReading] = {}


class Parent(Table, frozen=True):
    """The strain that exists: a file of its own, or what differs from the scenario.

    growth, feed, conditions and energy are the scenario's unless stated; strain and outlets are none unless stated.
    """

    file: Name | UnsetType = UNSET
    growth: Growth | UnsetType = UNSET
    feed: list[Feed] | UnsetType = UNSET
    conditions: Conditions | UnsetType = UNSET
    strain: Strain | UnsetType = UNSET
    outlet: list[Outlet] | UnsetType = UNSET
    energy: Energy | UnsetType = UNSET


class Phase(Table, frozen=True):
    """One phase of a plan: what differs from the scenario. biomass: dry cells per litre at its start.

    feed and outlet replace the scenario's lists; conditions, strain and energy replace single keys.
    """

    duration: Duration
    name: Name | UnsetType = UNSET
    biomass: CellDensity | UnsetType = UNSET
    growth: Growth | UnsetType = UNSET
    feed: list[Feed] | UnsetType = UNSET
    conditions: Conditions | UnsetType = UNSET
    strain: Strain | UnsetType = UNSET
    outlet: list[Outlet] | UnsetType = UNSET
    energy: Energy | UnsetType = UNSET


class Document(Table, frozen=True):
    """A whole scenario file."""

    host: Name
    feed: list[Feed]
    title: Text = ""
    growth: Growth | UnsetType = UNSET
    conditions: Conditions = Conditions()
    strain: Strain = Strain()
    outlet: list[Outlet] = []
    energy: Energy = Energy()
    capacity: Assay = Assay()
    aim: Aim = Aim()
    uncertainty: Uncertainty = Uncertainty()
    measured: Measured | UnsetType = UNSET
    parent: Parent | UnsetType = UNSET
    phase: list[Phase] = []
    plugin: dict[str, dict[str, Any]] = {}


# Keys that are planned: they are refused by name, never ignored.
PLANNED: dict[str, frozenset[str]] = {
    "": frozenset({"phases", "medium", "environment", "sampling"}),
    "conditions": frozenset({"medium", "temperature", "ph", "ionic-strength", "environment"}),
    "feed": frozenset({"phase", "uncertainty"}),
    "outlet": frozenset({"phase", "uncertainty"}),
    "aim": frozenset({"alternatives", "certify"}),
}


def schema() -> dict[str, Any]:
    """JSON Schema (2020-12) of a scenario, for editors and other programs."""
    body = msgspec.json.schema(Document)
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "Headrace scenario", **body}
