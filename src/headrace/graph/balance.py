"""Whether a reaction conserves every element and charge, exactly."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from fractions import Fraction

from headrace.values.facts import Compound, Term


def imbalance(terms: Iterable[Term], compounds: Mapping[str, Compound]) -> dict[str, tuple[Fraction, Fraction]]:
    """Element (or "charge") -> (taken, made) where the two differ; empty when the reaction balances.

    taken = sum of -count x atoms over terms with count < 0, made = sum of count x atoms over the others, per turn.
    Both sides of a membrane count together: carriers conserve what they move.
    """
    taken: dict[str, Fraction] = defaultdict(Fraction)
    made: dict[str, Fraction] = defaultdict(Fraction)
    for term in terms:
        compound = compounds[term.compound]
        side = made if term.count > 0 else taken
        for what, number in {**compound.formula, "charge": compound.charge}.items():
            side[what] += abs(term.count) * number
    return {what: (taken[what], made[what]) for what in sorted({*taken, *made}) if taken.get(what, 0) != made.get(what, 0)}


def described(differences: Mapping[str, tuple[Fraction, Fraction]]) -> str:
    """The differences in words: "O: 3 taken, 2 made; charge: -1 taken, 0 made"."""
    return "; ".join(f"{what}: {taken} taken, {made} made" for what, (taken, made) in differences.items())
