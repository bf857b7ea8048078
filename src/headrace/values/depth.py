"""Facts about enzymes and energies: kinetic constants, formation energies, concentrations, effects, vitamins, rule rows."""

from __future__ import annotations

from fractions import Fraction

from msgspec import Struct

from headrace.values.basis import Basis


class Constant(Struct, frozen=True):
    """A number about an enzyme of one host. kind: turnover-number (1/s) | michaelis-constant (mmol/L) |

    specificity-constant (1/(mmol/L s)) | enzyme-mass (kDa per active site) | specific-activity (U/mg of pure enzyme).
    compound: the substrate of an affinity. genes: those of the enzyme studied; empty = not recorded.
    """

    slug: str
    host: str
    enzyme: str
    kind: str
    value: Fraction
    unit: str
    origin: str
    basis: Basis
    compound: str = ""
    genes: tuple[str, ...] = ()
    low: Fraction | None = None
    high: Fraction | None = None
    condition: str = ""


class FormationEnergy(Struct, frozen=True):
    """kJ/mol at 25 C, of one species at ionic strength 0 (hydrogens, charge) or of a compound at ph and ionic_strength.

    ionic_strength in mol/L; hydrogens and charge are those of the species. counted_from: the compound whose unloaded form
    is the zero of the energy ("" = the elements).
    """

    slug: str
    compound: str
    value: Fraction
    origin: str
    basis: Basis
    hydrogens: int | None = None
    charge: int | None = None
    ph: Fraction | None = None
    ionic_strength: Fraction | None = None
    counted_from: str = ""


class Concentration(Struct, frozen=True):
    """mmol/L of a compound in a host's compartment; place "" = the whole cell.

    feed: the substrate it was measured on; oxygen: present | absent, "" where that is not recorded.
    """

    slug: str
    host: str
    compound: str
    value: Fraction
    origin: str
    basis: Basis
    place: str = ""
    low: Fraction | None = None
    high: Fraction | None = None
    feed: str = ""
    oxygen: str = ""
    condition: str = ""


class Effect(Struct, frozen=True):
    """A compound that acts on an enzyme. sense: activator | inhibitor. host "" = most organisms."""

    slug: str
    enzyme: str
    effector: str
    sense: str
    basis: Basis
    host: str = ""


class Vitamin(Struct, frozen=True):
    """What coenzymes are made from. gives: cofactors (compounds); compound: the vitamin itself, where the facts have it.

    supplied: host -> made-inside | from-the-medium, with the basis of each; hosts without a fact are left out.
    """

    slug: str
    label: str
    gives: tuple[str, ...]
    basis: Basis
    compound: str = ""
    supplied: dict[str, str] = {}
    supplied_basis: dict[str, Basis] = {}


class RuleRow(Struct, frozen=True):
    """One row of a finding rule (graph_data/rules/findings), run once over the facts. It holds for a case of `host` when

    every trigger that is filled in does: refill, runs (an "enzyme/…", "reaction/…" or "host/…/row" that carries a rate, as
    a refill or one of its steps, or anywhere), opened (a row that runs although the host does not express it), drained
    and made (a compound that a product outlet takes, or makes on its way), feed, oxygen (present | absent), missing (a
    compound that is neither fed nor in the medium).
    """

    rule: str
    level: str
    about: str
    message: str
    sources: tuple[str, ...]
    host: str = ""
    refill: str = ""
    runs: str = ""
    opened: str = ""
    drained: str = ""
    made: str = ""
    feed: str = ""
    oxygen: str = ""
    missing: str = ""
