"""Gibbs energies of reactions at a pH and an ionic strength I (mol/L), at 25 C, from formation energies of species.

    dG'(species) = dG0 + NH RT ln(10) pH - 2.91482 (z^2 - NH) sqrt(I) / (1 + 1.6 sqrt(I))
    dG'(compound) = -RT ln sum exp(-dG'(species) / RT)          over the species that it is at equilibrium
    dG'(reaction) = sum counts * dG'(compound)                  without protons, which the pH stands for

NH: hydrogens of a species, z: its charge; all in kJ/mol. Method: Alberty RA (2003), Thermodynamics of Biochemical
Reactions, with the extended Debye-Hueckel equation (B = 1.6 L^1/2 mol^-1/2). No magnesium.

Inorganic carbon has one convention throughout: the concentration is that of all dissolved inorganic carbon, and the
energy is that of its hydrated form. A member of that group with less oxygen (carbon dioxide) counts as the hydrated
form less water, so that reactions that give carbon dioxide take up water here.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import exp, log, sqrt

from headrace.values.depth import FormationEnergy
from headrace.values.facts import Facts

R = 8.31451e-3  # kJ/mol/K, as in the tables of formation energies
KELVIN = 298.15
RT = R * KELVIN
DEBYE = 2.91482  # kJ/mol (L/mol)^1/2 at 25 C
B = 1.6  # (L/mol)^1/2
SAME = 0.15  # kJ/mol within which species give a transformed energy again that was read elsewhere


@dataclass(frozen=True)
class Condition:
    """pH and ionic strength (mol/L) of a compartment."""

    ph: float
    ionic_strength: float


@dataclass(frozen=True)
class ReactionEnergy:
    """Standard transformed energy (kJ/mol), None when formation energies of `missing` compounds are not known.

    recalled: compounds whose formation energies no source confirms.
    """

    value: float | None
    recalled: tuple[str, ...] = ()
    missing: tuple[str, ...] = ()


class Energies:
    """Formation energies of the facts, transformed to any condition."""

    def __init__(self, facts: Facts) -> None:
        self.facts = facts
        self._species: dict[str, list[FormationEnergy]] = {}
        self._read: dict[str, list[FormationEnergy]] = {}
        for energy in facts.formation:
            table = self._species if energy.hydrogens is not None else self._read
            table.setdefault(energy.compound, []).append(energy)
        self._zero = {energy.compound: energy.counted_from for energy in facts.formation if energy.counted_from}
        self._carbon = frozenset(facts.roles.get("inorganic-carbon", ()))
        self._protons = frozenset(facts.roles.get("proton", ()))
        self._water = next(iter(facts.roles.get("water", ())), "")

    def formation(self, compound: str, at: Condition) -> float | None:
        """Transformed formation energy of a compound (kJ/mol), None when no species of it is known."""
        if compound in self._species:
            return _together([_transformed(species, at) for species in self._species[compound]])
        group, waters = self.hydrated(compound)
        carbon, water = (self.formation(name, at) if name in self._species else None for name in (group, self._water))
        return None if carbon is None or water is None else carbon - waters * water

    def hydrated(self, compound: str) -> tuple[str, int]:
        """(member of the inorganic-carbon group whose energies are known, waters that the compound lacks to it)."""
        if compound not in self._carbon:
            return "", 0
        group = next((name for name in sorted(self._carbon) if name in self._species), "")
        if not group:
            return "", 0
        oxygens = (self.facts.compounds[name].formula.get("O", 0) for name in (group, compound))
        return group, next(oxygens) - next(oxygens)

    def share(self, compound: str, at: Condition) -> float:
        """Share of a compound in the group that it is at equilibrium with: 1 unless it is one form of inorganic carbon."""
        group, waters = self.hydrated(compound)
        if not group:
            return 1.0
        about = self.facts.compounds[compound]
        hydrogens = about.formula.get("H", 0) + 2 * waters
        energies = [(_transformed(s, at), s.hydrogens == hydrogens and s.charge == about.charge) for s in self._species[group]]
        total = _together([value for value, _ in energies])
        return sum(exp((total - value) / RT) for value, own in energies if own)

    def recalled(self, compound: str) -> bool:
        """Whether no source confirms a compound's energies.

        Species are confirmed when they give a transformed energy again that was read, within 0.15 kJ/mol.
        """
        group, _ = self.hydrated(compound)
        if group and compound not in self._species:
            return self.recalled(group) or self.recalled(self._water)
        species = self._species.get(compound, [])
        if all(energy.basis.reading != "recalled" for energy in species):
            return False
        return not any(self._gives(compound, energy) for energy in self._read.get(compound, []))

    def reaction(self, reaction: str, sign: int, at: Condition) -> ReactionEnergy:
        """Energy of one turn of a reaction in direction `sign`. Motive protons have none: they depend on the membrane."""
        total, recalled, missing = 0.0, [], self._unbalanced(reaction)
        for term in self.facts.reactions[reaction].terms:
            if term.compound in self._protons:
                continue
            energy = self.formation(term.compound, at)
            if energy is None:
                missing.append(term.compound)
                continue
            total += sign * float(term.count) * energy
            if self.recalled(term.compound):
                recalled.append(term.compound)
        return ReactionEnergy(None if missing else total, tuple(dict.fromkeys(recalled)), tuple(dict.fromkeys(missing)))

    def _unbalanced(self, reaction: str) -> list[str]:
        """Compounds whose energies are counted from a zero that does not cancel in the reaction."""
        counts: dict[str, Fraction] = {}
        zeros = {term.compound: self._zero.get(term.compound, "") for term in self.facts.reactions[reaction].terms}
        for term in self.facts.reactions[reaction].terms:
            counts[zeros[term.compound]] = counts.get(zeros[term.compound], Fraction(0)) + term.count
        return [compound for compound, zero in zeros.items() if zero and counts[zero]]

    def _gives(self, compound: str, read: FormationEnergy) -> bool:
        assert read.ph is not None and read.ionic_strength is not None
        if read.basis.reading == "recalled":
            return False
        again = self.formation(compound, Condition(float(read.ph), float(read.ionic_strength)))
        return again is not None and abs(again - float(read.value)) <= SAME


def _transformed(species: FormationEnergy, at: Condition) -> float:
    assert species.hydrogens is not None and species.charge is not None
    root = sqrt(at.ionic_strength)
    screening = DEBYE * (species.charge**2 - species.hydrogens) * root / (1 + B * root)
    return float(species.value) + species.hydrogens * RT * log(10) * at.ph - screening


def _together(energies: list[float]) -> float:
    """-RT ln sum exp(-G/RT), from the lowest on so that nothing overflows."""
    least = min(energies)
    return least - RT * log(sum(exp((least - energy) / RT) for energy in energies))
