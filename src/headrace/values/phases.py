"""A plan of phases, and what it needs over time. Frozen values. Litres are those of the plan's start."""

from __future__ import annotations

from msgspec import Struct

from headrace.values.case import Scenario


class Phase(Struct, frozen=True):
    """One phase as asked for: its own scenario, its duration in h, biomass at its start in gDW/L (None = goes on from before)."""

    name: str
    scenario: Scenario
    hours: float
    biomass: float | None = None
    key: str = ""


class Carried(Struct, frozen=True):
    """What one group of refills does in one phase, or over the plan.

    rate: mmol/gDW/h (over the plan: per integrated biomass); peak: the largest rate of any phase; at_end: mmol/L/h at the
    end of the phase (over the plan: the largest of all); total: mmol/L.
    """

    group: str
    label: str
    rate: float
    peak: float
    at_end: float
    total: float
    capacity: float | None
    cover: float | None


class Flow(Struct, frozen=True):
    """What is taken up or made over a phase or the plan. kind: feed | product | taken | made. total: mmol/L; grams: g/L (None

    where nothing gives a molar mass); per_biomass: mmol per gDW that the phase or plan ends with; at_end: mmol/L/h at the end
    of the phase (over the plan: the largest of all).
    """

    kind: str
    what: str
    label: str
    total: float
    grams: float | None
    per_biomass: float
    at_end: float


class PhaseRow(Struct, frozen=True):
    """One phase as answered. start, end: gDW/L; integral: gDW h/L. drained, refilled: skeletons, mmol/gDW/h.

    cover: the least of its groups (None without capacities). binds: whether this phase asks most of the strain.
    """

    name: str
    hours: float
    begins: float
    growth: float
    start: float
    end: float
    integral: float
    answer: str
    drained: float
    refilled: float
    cover: float | None
    binds: bool
    groups: tuple[Carried, ...]
    flows: tuple[Flow, ...]


class Plan(Struct, frozen=True):
    """All phases. binding: name of the phase that binds; because: why, in words. integral: gDW h/L over the plan."""

    phases: tuple[PhaseRow, ...]
    hours: float
    integral: float
    final_biomass: float
    groups: tuple[Carried, ...]
    flows: tuple[Flow, ...]
    drained: float
    refilled: float
    binding: str
    because: str
    findings: tuple[str, ...] = ()
