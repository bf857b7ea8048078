"""All that a plugin imports: the values it gets and gives, errors, and exact numbers.

A plugin is a class with `name` and `summary` and, as it needs them, `families`, `facts_needed`, `options` and
`example`; its methods named like a hook (`facts`, `drains`, `refills`, `checks`, `report`) are its hooks. See DEVELOPERS.md.
"""

from __future__ import annotations

from fractions import Fraction

from headrace.errors import HeadraceError, InputError, PluginError
from headrace.hooks.bench import Bench
from headrace.hooks.merge import LEVELS
from headrace.hooks.options import options
from headrace.names import nearest, slugify
from headrace.network.alternatives import Alternative, Alternatives
from headrace.network.alternatives import of_case as alternatives
from headrace.network.budgets import Entry as BudgetEntry
from headrace.network.budgets import PerLitre, carbon_budget, per_litre, pool_budgets
from headrace.network.build import Network
from headrace.network.capacity import Sized, sized
from headrace.network.capacity import groups as sized_groups
from headrace.network.certified import Certified, certified
from headrace.network.curve import Bend, Curve, curve
from headrace.network.drive import Drive, DriveStep
from headrace.network.drive import Settings as DriveSettings
from headrace.network.drive import drives as driving_forces
from headrace.network.prices import Price, prices, settled
from headrace.network.requirement import require
from headrace.network.routes import RouteBook, RouteVector
from headrace.network.triggers import State, fired, leans_on, state_of
from headrace.pages.csvtext import table as table_as_csv
from headrace.pages.markdown import page as page_as_markdown
from headrace.pages.model import Column, Notes, Page, Table
from headrace.units import quantity
from headrace.values.answers import (
    AddedTable,
    Answer,
    CompartmentLedger,
    Crossing,
    Document,
    DrainRow,
    Draw,
    FeedRow,
    GroupRow,
    Ledger,
    LedgerRow,
    PoolTerm,
    RateRow,
    RefillAnswer,
    RefillRow,
    Repair,
    Result,
    Shortage,
    TableColumn,
)
from headrace.values.case import Case, Demand, Feed, Finding, Level, Limit, Supplement
from headrace.values.changes import Add, Change, Close, LetOut, Raise, Reopen, Scale, Supply, Unrule, Uptake
from headrace.values.depth import Concentration, Constant, Effect, RuleRow, Vitamin
from headrace.values.facts import Compound, Facts, Host, HostReaction, Outlet, Reaction, Route

__all__ = [
    "LEVELS",
    "Add",
    "AddedTable",
    "Alternative",
    "Alternatives",
    "Answer",
    "Bench",
    "Bend",
    "BudgetEntry",
    "Case",
    "Certified",
    "Change",
    "Close",
    "Column",
    "CompartmentLedger",
    "Compound",
    "Concentration",
    "Constant",
    "Crossing",
    "Curve",
    "Demand",
    "Document",
    "DrainRow",
    "Draw",
    "Drive",
    "DriveSettings",
    "DriveStep",
    "Effect",
    "Facts",
    "Feed",
    "FeedRow",
    "Finding",
    "Fraction",
    "GroupRow",
    "HeadraceError",
    "Host",
    "HostReaction",
    "InputError",
    "Ledger",
    "LedgerRow",
    "LetOut",
    "Level",
    "Limit",
    "Network",
    "Notes",
    "Outlet",
    "Page",
    "PerLitre",
    "PluginError",
    "PoolTerm",
    "Price",
    "Raise",
    "RateRow",
    "Reaction",
    "RefillAnswer",
    "RefillRow",
    "Reopen",
    "Repair",
    "Result",
    "Route",
    "RouteBook",
    "RouteVector",
    "RuleRow",
    "Scale",
    "Shortage",
    "Sized",
    "State",
    "Supplement",
    "Supply",
    "Table",
    "TableColumn",
    "Unrule",
    "Uptake",
    "Vitamin",
    "alternatives",
    "carbon_budget",
    "certified",
    "curve",
    "driving_forces",
    "exact",
    "fired",
    "leans_on",
    "nearest",
    "options",
    "page_as_markdown",
    "per_litre",
    "pool_budgets",
    "prices",
    "quantity",
    "require",
    "settled",
    "shares",
    "sized",
    "sized_groups",
    "slugify",
    "state_of",
    "table_as_csv",
]


def exact(number: str | int | Fraction) -> Fraction:
    """A number as an exact fraction, from its text; a float is refused, since it has lost its digits already.

    >>> exact("0.1") + exact("1/5")
    Fraction(3, 10)
    """
    if isinstance(number, float):
        raise TypeError(f"{number!r} is a float; write it as text to keep it exact")
    return Fraction(number)


def shares(parts: dict[str, Fraction]) -> dict[str, Fraction]:
    """Shares as fractions of their sum: share_i = part_i / sum of parts. Raises ValueError when a part is negative or all are 0.

    >>> shares({"a": Fraction(1), "b": Fraction(3)})
    {'a': Fraction(1, 4), 'b': Fraction(3, 4)}
    """
    total = sum(parts.values(), Fraction(0))
    if total <= 0 or min(parts.values()) < 0:
        raise ValueError("parts must be at least 0 and not all 0")
    return {name: part / total for name, part in parts.items()}
