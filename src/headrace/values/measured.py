"""Rates that were measured on a strain, and what the balances say about them. Frozen values.

Rates are mmol/gDW/h (growth 1/h); direction is uptake | release | growth, and a rate is counted positive in its direction.
"""

from __future__ import annotations

from msgspec import Struct


class Reading(Struct, frozen=True):
    """One measured rate with its standard error. compound is "" for growth. key: where it stands in the scenario."""

    label: str
    compound: str
    direction: str
    rate: float
    error: float
    key: str = ""


class Recovery(Struct, frozen=True):
    """What comes out of what goes in. taken, found: mmol of the element (or electrons)/gDW/h; share = found / taken.

    error: of the share, from the readings' errors. counted: what stands on the side of found. missing: crossings that were
    not measured and would count here; then there is no recovery (share None).
    """

    element: str
    taken: float
    found: float
    share: float | None
    error: float | None
    counted: tuple[str, ...]
    missing: tuple[str, ...] = ()


class Reconciled(Struct, frozen=True):
    """One rate. measured, error: as read (None where it was not); reconciled, remaining: value and standard error after.

    shift: (reconciled - measured) / error. checked: whether a balance checks the reading. sized: whether the strain's case
    is computed with the reconciled value. exact: taken from the scenario as it stands there, without an error.
    """

    label: str
    compound: str
    direction: str
    measured: float | None
    error: float | None
    reconciled: float | None
    remaining: float | None
    shift: float | None
    checked: bool
    sized: bool
    exact: bool = False


class Suspicion(Struct, frozen=True):
    """What would mend the balances. kind: reading (it is wrong) | forgotten (a compound that was not measured).

    h, freedom, p: the test without it; would_be: the rate that the balances ask for (None where they don't say).
    explains: whether the rest then passes the test.
    """

    kind: str
    label: str
    compound: str
    direction: str
    h: float
    freedom: int
    p: float
    would_be: float | None
    error: float | None
    explains: bool


class Reconciliation(Struct, frozen=True):
    """verdict: consistent | gross error | not checked. h: weighted sum of squares with `freedom` degrees of freedom.

    p: the chance of an h at least as large. balances: the elements used. level: of the test. named: what a gross error is
    put down to, in words ("" when there is none). gap: what rates without errors leave open among themselves, the largest
    of the balances (mmol/gDW/h).
    """

    verdict: str
    named: str
    recoveries: tuple[Recovery, ...]
    rates: tuple[Reconciled, ...]
    suspicions: tuple[Suspicion, ...]
    h: float
    freedom: int
    p: float
    gap: float
    balances: tuple[str, ...]
    level: float = 0.05
    respiratory_quotient: float | None = None
