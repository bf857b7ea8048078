"""The design against the strain that exists. Frozen values."""

from __future__ import annotations

from msgspec import Struct


class Fold(Struct, frozen=True):
    """kind: group | refill | drain | feed | crossing. now: the parental strain's rate; needs: the design's, mmol/gDW/h.

    fold = needs / now, None where the parental strain runs none of it or a rate is not known.
    """

    kind: str
    what: str
    label: str
    now: float | None
    needs: float | None
    fold: float | None
