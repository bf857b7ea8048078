"""Small changes to a case, as repairs and alternatives propose them; `headrace.case.resolve` applies them in order.

Names are slugs of the facts. A change that does not fit the case (an unknown row, a limit that was never stated)
raises InputError, so that no proposal is dropped in silence.
"""

from __future__ import annotations

from fractions import Fraction

from msgspec import Struct


class Reopen(Struct, frozen=True, tag=True):
    """Turn a row of the host on, whatever its expression, its removal or a limit of zero say."""

    row: str


class Close(Struct, frozen=True, tag=True):
    """Turn a row off."""

    row: str


class Add(Struct, frozen=True, tag=True):
    """Bring a reaction into a compartment ("" = the cytosol). direction: forward | reverse | both."""

    reaction: str
    place: str = ""
    direction: str = "forward"


class Supply(Struct, frozen=True, tag=True):
    """Put a compound into the medium. rate: largest uptake in mmol/gDW/h; None = as needed."""

    compound: str
    rate: float | None = None


class LetOut(Struct, frozen=True, tag=True):
    """Let a compound leave besides outlets."""

    compound: str


class Raise(Struct, frozen=True, tag=True):
    """Set a stated limit (by its label) to another rate in mmol/gDW/h; None drops it."""

    limit: str
    rate: float | None = None


class Scale(Struct, frozen=True, tag=True):
    """Multiply an outlet's rate or yield by a factor; outlet "growth" means the growth rate or biomass yield."""

    outlet: str
    factor: Fraction


class Unrule(Struct, frozen=True, tag=True):
    """Switch an expression rule's conditions off: the rows that name it are at its level under every condition."""

    rule: str


class Uptake(Struct, frozen=True, tag=True):
    """Set a feed's uptake to another rate in mmol/gDW/h; None leaves it to the aim."""

    compound: str
    rate: float | None = None


Change = Reopen | Close | Add | Supply | LetOut | Raise | Scale | Unrule | Uptake
