"""What the graph says, as frozen values: compounds, reactions, hosts, outlets, routes, sources.

Counts are exact (`fractions.Fraction`); formulas and charges are integers. Slugs are the last part of
an entity's IRI. Everything here is built from Turtle by `headrace.graph` and cached as it stands.
"""

from __future__ import annotations

from fractions import Fraction

from msgspec import Struct

from headrace.values.basis import Basis as Basis
from headrace.values.basis import Source as Source
from headrace.values.depth import Concentration, Constant, Effect, FormationEnergy, RuleRow, Vitamin


class Compound(Struct, frozen=True):
    """A chemical species at pH 7.3. formula: element -> atoms; charge in elementary charges.

    anchor: carries one skeleton by definition. carrier: a conserved coenzyme (content 0).
    precursor: a boundary pool of route vectors with content 0. membrane: lives in the host's
    energy-coupling membrane, whatever compartment a reaction works in. aliases: other names.
    """

    slug: str
    label: str
    formula: dict[str, int]
    charge: int
    basis: Basis
    aliases: tuple[str, ...] = ()
    chebi: str = ""
    inchikey: str = ""
    anchor: bool = False
    carrier: bool = False
    precursor: bool = False
    membrane: bool = False


class Term(Struct, frozen=True):
    """One participant of a reaction. count < 0: taken, > 0: made. side: "" | "outer" | "inner" (carriers)."""

    compound: str
    count: Fraction
    side: str = ""


class Reaction(Struct, frozen=True):
    """A balanced conversion, without a host. ec and rhea as bare numbers ("6.4.1.1", "20844")."""

    slug: str
    label: str
    terms: tuple[Term, ...]
    basis: Basis
    ec: tuple[str, ...] = ()
    rhea: tuple[str, ...] = ()
    enzyme: str = ""
    cofactors: tuple[str, ...] = ()
    lumped: bool = False
    transport: bool = False
    aliases: tuple[str, ...] = ()


class Isozyme(Struct, frozen=True):
    """Genes that are needed together. Several isozymes of a row stand in for one another."""

    genes: tuple[str, ...]


class Expression(Struct, frozen=True):
    """One sufficient set of conditions for a level. Empty fields do not matter; filled ones must all hold.

    level: on | basal. oxygen: present | absent. feed_any: at least one fed substrate is among these.
    feed_only: every fed substrate is among these. feed_without: no fed substrate is among these.
    feed_outside: at least one fed substrate is not among these.
    supplied_any / supplied_without: over supplements and feeds together. removed_regulators: at least one
    of these genes is removed. removed_enzymes: the same for enzymes' genes; such a rule is *fitted*.
    circumstances: at least one was stated in the scenario (`conditions.circumstances`).
    """

    slug: str
    label: str
    level: str
    basis: Basis
    oxygen: str = ""
    feed_any: tuple[str, ...] = ()
    feed_only: tuple[str, ...] = ()
    feed_without: tuple[str, ...] = ()
    feed_outside: tuple[str, ...] = ()
    supplied_any: tuple[str, ...] = ()
    supplied_without: tuple[str, ...] = ()
    removed_regulators: tuple[str, ...] = ()
    removed_enzymes: tuple[str, ...] = ()
    circumstances: tuple[str, ...] = ()

    @property
    def fitted(self) -> bool:
        """Whether the rule needs an enzyme's deletion, so that what it explains is no prediction."""
        return bool(self.removed_enzymes)


class HostReaction(Struct, frozen=True):
    """A reaction as a host has it. direction: forward | reverse | both, of the reaction as written.

    place: compartment slug (for transport "" with outer and inner set). isozymes: empty = needs no gene.
    expression: slugs of rules, any one of which suffices (the highest level wins); empty = never by itself,
    only when the scenario adds it.
    """

    slug: str
    label: str
    reaction: str
    direction: str
    basis: Basis
    place: str = ""
    outer: str = ""
    inner: str = ""
    isozymes: tuple[Isozyme, ...] = ()
    expression: tuple[str, ...] = ()


class Compartment(Struct, frozen=True):
    """role: cytosol | organelle | membrane | medium. inside: whether it counts as part of the cell."""

    slug: str
    label: str
    role: str


class Quantity(Struct, frozen=True):
    """A measured or assumed number. value is read exactly from `text`; unit is a slug such as "mmol-per-gdw-h"."""

    slug: str
    about: str
    kind: str
    value: Fraction
    text: str
    unit: str
    origin: str
    basis: Basis
    low: Fraction | None = None
    high: Fraction | None = None
    condition: str = ""


class Part(Struct, frozen=True):
    """A biomass building block. amount in mmol/gDW, > 0 drawn, < 0 given back; oxygen: "" | present | absent."""

    slug: str
    compound: str
    place: str
    amount: Fraction
    fraction: str
    origin: str
    basis: Basis
    oxygen: str = ""


class Absence(Struct, frozen=True):
    """A reaction that the host is known to lack, with the reason."""

    reaction: str
    reason: str
    basis: Basis


class Release(Struct, frozen=True):
    """What leaves a host besides outlets under a condition ("usual overflow"). oxygen as in Expression."""

    compound: str
    basis: Basis
    oxygen: str = ""
    circumstances: tuple[str, ...] = ()


class Host(Struct, frozen=True):
    """An organism. proton_convention: motive-balanced | inside-balanced (see `headrace.network`)."""

    slug: str
    label: str
    taxon: str
    compartments: tuple[Compartment, ...]
    reactions: tuple[HostReaction, ...]
    expressions: tuple[Expression, ...]
    quantities: tuple[Quantity, ...]
    composition: tuple[Part, ...]
    absences: tuple[Absence, ...]
    releases: tuple[Release, ...]
    proton_convention: str
    basis: Basis
    aliases: tuple[str, ...] = ()
    nutrients: tuple[str, ...] = ()
    required_supplements: tuple[str, ...] = ()
    composition_borrowed_from: str = ""
    composition_note: str = ""


class Form(Struct, frozen=True):
    """A salt, ester or acid form in which a product is weighed. mass in g/mol is computed from formula."""

    label: str
    formula: dict[str, int]
    default: bool = False


class Outlet(Struct, frozen=True):
    """Where carbon leaves for a product. family names the drain plugin's dispatch attribute.

    draws: compound -> mole per mole of outlet (usually {product: 1}); option_schema belongs to the plugin.
    """

    slug: str
    label: str
    family: str
    draws: dict[str, Fraction]
    aliases: tuple[str, ...] = ()
    forms: tuple[Form, ...] = ()
    basis: Basis | None = None


class Route(Struct, frozen=True):
    """The steps that make one compound from boundary pools and from compounds with routes of their own.

    hosts empty = any host. rows: rows ("host/row") that say where a reaction of `uses` runs, for hosts that have it in
    several compartments (default: the cytosol). preferred: goes before other routes that the case expresses as well.
    """

    slug: str
    label: str
    makes: str
    uses: tuple[str, ...]
    basis: Basis
    hosts: tuple[str, ...] = ()
    rows: tuple[str, ...] = ()
    preferred: bool = False


class Enzyme(Struct, frozen=True):
    """A catalyst as the trade names it; all reactions and rows that share it are limited and removed together."""

    slug: str
    label: str
    ec: tuple[str, ...] = ()
    cofactors: tuple[str, ...] = ()
    aliases: tuple[str, ...] = ()


class Facts(Struct, frozen=True):
    """All facts of one build, by slug. version: hash of the fact files' relative paths and bytes.

    contents: skeletons per mole of each compound (derived). roles: what the core asks for without knowing its name
    (graph_data/ontology/roles.ttl), role slug -> entity slugs: energy-release (reaction), oxygen, carbon-dioxide,
    inorganic-carbon, water, proton, motive-proton, ammonium; for route vectors also mineral, peroxide, one-carbon,
    one-carbon-carrier, adenylate, acyl-carrier, by-product. electron_pairs: reduced carrier -> oxidised carrier.
    kinds: the label of each kind of quantity. implied: circumstance -> enzyme whose removal brings it about.
    rule_rows: what the finding rules say of these facts (derived); a case is held against their triggers.
    """

    version: str
    compounds: dict[str, Compound]
    reactions: dict[str, Reaction]
    enzymes: dict[str, Enzyme]
    hosts: dict[str, Host]
    outlets: dict[str, Outlet]
    routes: dict[str, Route]
    sources: dict[str, Source]
    circumstances: dict[str, str]
    units: dict[str, str]
    kinds: dict[str, str] = {}
    implied: dict[str, str] = {}
    contents: dict[str, Fraction] = {}
    roles: dict[str, tuple[str, ...]] = {}
    electron_pairs: dict[str, str] = {}
    kinetics: tuple[Constant, ...] = ()
    formation: tuple[FormationEnergy, ...] = ()
    concentrations: tuple[Concentration, ...] = ()
    effects: tuple[Effect, ...] = ()
    vitamins: tuple[Vitamin, ...] = ()
    rule_rows: tuple[RuleRow, ...] = ()
