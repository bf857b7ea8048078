"""Products that are put together from interchangeable parts: what they are drawn as when the parts are chosen.

The facts hold one example of each (a lipid of three like chains, a nucleic acid of four residues) with the reaction
that puts it together. The parts of that reaction are swapped for others of their kind; kinds are told by formula, so
that no compound is known by name here.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from headrace.api import Compound, PluginError, Reaction, RouteBook

Formula = Mapping[str, int]


def assemblies(routes: RouteBook, compound: str) -> list[Reaction]:
    """The reactions of a compound's route that make it."""
    return [
        routes.facts.reactions[name]
        for route in routes.routes(compound)[:1]
        for name in route.uses
        if any(term.compound == compound and term.count > 0 for term in routes.facts.reactions[name].terms)
    ]


def parts(routes: RouteBook, compound: str) -> dict[str, Fraction]:
    """What one mole of a compound is put together from: compound -> mole, negative for what is given back.

    Raises PluginError unless exactly one reaction of its route makes it.
    """
    found = assemblies(routes, compound)
    if len(found) != 1:
        raise PluginError("drains", f"{len(found)} reactions put {compound} together; one is needed to take it apart")
    made = next(term.count for term in found[0].terms if term.compound == compound)
    return {term.compound: -term.count / made for term in found[0].terms if term.compound != compound}


def less(one: Formula, other: Formula) -> dict[str, int]:
    """The atoms of one formula without those of another; zero counts left out."""
    atoms = {element: one.get(element, 0) - other.get(element, 0) for element in {*one, *other}}
    return {element: count for element, count in atoms.items() if count}


def chain_of(atoms: Formula) -> tuple[int, int] | None:
    """(carbons, double bonds) of an acyl group, from C_n H_(2n-2-2d) O; None for anything else.

    >>> chain_of({"C": 18, "H": 32, "O": 1})
    (18, 1)
    """
    n, hydrogens = atoms.get("C", 0), atoms.get("H", 0)
    double = (2 * n - 2 - hydrogens) / 2
    plain = set(atoms) == {"C", "H", "O"} and atoms["O"] == 1 and n >= 2 and double >= 0 and double == int(double)
    return (n, int(double)) if plain else None


def acyl_chain(routes: RouteBook, compound: Compound) -> tuple[tuple[int, int], str] | None:
    """((carbons, double bonds), carrier) of a compound that is an acyl group on one of the facts' acyl carriers."""
    for carrier in routes.facts.roles.get("acyl-carrier", ()):
        chain = chain_of(less(compound.formula, routes.facts.compounds[carrier].formula))
        if chain:
            return chain, carrier
    return None


def acid_chain(compound: Compound) -> tuple[int, int] | None:
    """(carbons, double bonds) of an ionised fatty acid, C_n H_(2n-1-2d) O2 with charge -1."""
    if compound.charge != -1 or compound.formula.get("O") != 2:
        return None
    return chain_of({**compound.formula, "O": 1, "H": compound.formula.get("H", 0) - 1})


def core(compound: Compound) -> dict[str, int]:
    """The formula of a nucleotide without its phosphoryl groups (PO3 each)."""
    phosphorus = compound.formula.get("P", 0)
    return less(compound.formula, {"P": phosphorus, "O": 3 * phosphorus})
