"""What a user asks (Scenario), and the same resolved against the facts (Case). Frozen values.

Units after conversion: rates mmol/gDW/h, growth 1/h, amounts mmol/gDW, ratios mol/mol, biomass yield gDW/mmol feed.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from msgspec import Struct

from headrace.values.facts import HostReaction
from headrace.values.measured import Reading
from headrace.values.uncertainty import Input


class Place(Struct, frozen=True):
    """Where a value stands in the user's file: key path such as "feed[0].uptake", and its line (0 = unknown)."""

    key: str
    line: int = 0


class Feed(Struct, frozen=True):
    """A carbon source. uptake in mmol/gDW/h; None asks for the least feed."""

    compound: str
    uptake: float | None = None


class Supplement(Struct, frozen=True):
    """A compound in the medium besides the feed. rate: largest uptake in mmol/gDW/h; None = as needed."""

    compound: str
    rate: float | None = None


class Limit(Struct, frozen=True):
    """The largest total rate, mmol/gDW/h, of all rows that one enzyme catalyses (either direction).

    low, high: where what it was made from has a range (a host's protein fraction).
    """

    label: str
    rows: tuple[str, ...]
    rate: float
    origin: str = "stated in the scenario"
    low: float | None = None
    high: float | None = None


class Demand(Struct, frozen=True):
    """One outlet as asked for. draws: compound -> mole per mole of outlet, from `place`.

    Exactly one of rate (mmol/gDW/h) and yield_per_feed (mole per mole of total feed) is set.
    """

    outlet: str
    label: str
    family: str
    draws: dict[str, Fraction]
    place: str
    rate: float | None = None
    yield_per_feed: float | None = None
    form: str = ""
    molar_mass: float = 0.0
    options: dict[str, Any] = {}


class Level(Struct, frozen=True):
    """Whether a row may run. level: on | basal | off. reason in words; kind is one of

    expressed | added | open | removed | not-expressed | absent | no-capacity. rules: slugs of the rules that decided.
    """

    level: str
    kind: str
    reason: str
    rules: tuple[str, ...] = ()
    fitted: bool = False


class Finding(Struct, frozen=True):
    """What a check says. level: note | caution | stop. source: citation text or "" for a model statement."""

    level: str
    check: str
    about: str
    message: str
    source: str = ""


class Scenario(Struct, frozen=True):
    """A scenario after its keys and units are checked, before names meet the facts. Slugs are resolved later.

    raw: the user's document as plain data. places: key path -> line. text: the document as written ("" from Python).
    inside: of a scenario that is part of another (a phase, the parental strain), top key -> where it stands there.
    """

    title: str
    path: str
    raw: dict[str, Any]
    places: dict[str, int] = {}
    text: str = ""
    inside: dict[str, str] = {}


class Case(Struct, frozen=True):
    """A scenario resolved against the facts: all that the network and the plugins need, in internal units.

    growth: 1/h, or None with growth_yield (gDW per mmol of total feed). oxygen: aerobic | limited | anaerobic, with
    oxygen_rate (mmol/gDW/h) when limited. rows: every row that the network may hold (the host's and added ones) by slug.
    levels: row slug -> Level. releases: compounds that may leave besides outlets. removed_genes: gene symbols.
    opened: True when every row of the host is used whatever its expression ("open").
    energy: quantities in force by kind: maintenance (mmol ATP/gDW/h), growth-associated-atp (mmol ATP/gDW),
    basal-level (mmol/gDW), protons-per-atp (mol/mol, only when a P/O is stated) ...
    uncertain: what is not known exactly. measured: rates measured on this strain; fixed: crossings held at a rate, into the
    cell positive (mmol/gDW/h). quantities: slugs of the quantities used. slack: relative slack of the aim (0 = over its optima).
    """

    title: str
    host: str
    feeds: tuple[Feed, ...]
    demands: tuple[Demand, ...]
    growth: float | None
    oxygen: str
    rows: dict[str, HostReaction]
    levels: dict[str, Level]
    growth_yield: float | None = None
    oxygen_rate: float | None = None
    supplements: tuple[Supplement, ...] = ()
    releases: tuple[str, ...] = ()
    releases_stated: bool = False
    circumstances: tuple[str, ...] = ()
    removed_genes: tuple[str, ...] = ()
    removed_rows: tuple[str, ...] = ()
    added: tuple[str, ...] = ()
    limits: tuple[Limit, ...] = ()
    opened: bool = False
    energy: dict[str, float] = {}
    quantities: tuple[str, ...] = ()
    slack: float = 0.0
    plugin_options: dict[str, dict[str, Any]] = {}
    findings: tuple[Finding, ...] = ()
    source_text: str = ""
    path: str = ""
    uncertain: tuple[Input, ...] = ()
    measured: tuple[Reading, ...] = ()
    fixed: dict[str, float] = {}
