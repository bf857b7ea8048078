"""Every IRI that Headrace reads or writes, as plain text, in one file without logic."""

from __future__ import annotations

HR = "https://w3id.org/headrace/ns#"
ID = "https://w3id.org/headrace/id/"
RDF = "http://www.w3.org/1999/02/22-rdf-syntax-ns#"
RDFS = "http://www.w3.org/2000/01/rdf-schema#"
XSD = "http://www.w3.org/2001/XMLSchema#"
SKOS = "http://www.w3.org/2004/02/skos/core#"
DCTERMS = "http://purl.org/dc/terms/"
BIBO = "http://purl.org/ontology/bibo/"
QUDT = "http://qudt.org/schema/qudt/"
PROV = "http://www.w3.org/ns/prov#"
OBO = "http://purl.obolibrary.org/obo/"
UNIPROT_ENZYME = "http://purl.uniprot.org/enzyme/"
RHEA = "http://rdf.rhea-db.org/"

COMPOUND_BASE = ID + "compound/"
REACTION_BASE = ID + "reaction/"
ENZYME_BASE = ID + "enzyme/"
OUTLET_BASE = ID + "outlet/"
ROUTE_BASE = ID + "route/"
SOURCE_BASE = ID + "source/"
KIND_BASE = ID + "kind/"
UNIT_BASE = ID + "unit/"
CIRCUMSTANCE_BASE = ID + "circumstance/"
HOST_BASE = ID + "host/"
ROLE_BASE = ID + "role/"
EXCEPTION_BASE = ID + "exception/"
NUMBER_BASE = ID + "number/"
EFFECT_BASE = ID + "effect/"
VITAMIN_BASE = ID + "vitamin/"
SUPPLY_BASE = ID + "supply/"
DERIVED_GRAPH = ID + "graph/derived"
FACTS_GRAPH = ID + "graph/facts"

# Prefixes of the canonical files. A host's own prefix, ":", is chosen per file by the writer.
PREFIXES: dict[str, str] = {
    "bibo": BIBO,
    "bp": "http://www.biopax.org/release/biopax-level3.owl#",
    "c": COMPOUND_BASE,
    "circ": CIRCUMSTANCE_BASE,
    "dcterms": DCTERMS,
    "e": ENZYME_BASE,
    "ec": UNIPROT_ENZYME,
    "effect": EFFECT_BASE,
    "except": EXCEPTION_BASE,
    "h": HOST_BASE,
    "hr": HR,
    "k": KIND_BASE,
    "n": NUMBER_BASE,
    "o": OUTLET_BASE,
    "obo": OBO,
    "owl": "http://www.w3.org/2002/07/owl#",
    "prov": PROV,
    "qudt": QUDT,
    "r": REACTION_BASE,
    "rdf": RDF,
    "rdfs": RDFS,
    "rh": RHEA,
    "role": ROLE_BASE,
    "rt": ROUTE_BASE,
    "s": SOURCE_BASE,
    "sd": "http://www.w3.org/ns/sparql-service-description#",
    "sh": "http://www.w3.org/ns/shacl#",
    "skos": SKOS,
    "supply": SUPPLY_BASE,
    "unit": UNIT_BASE,
    "vitamin": VITAMIN_BASE,
    "void": "http://rdfs.org/ns/void#",
    "xsd": XSD,
}

TYPE = RDF + "type"
FIRST = RDF + "first"
REST = RDF + "rest"
NIL = RDF + "nil"
COMMENT = RDFS + "comment"
LABEL = SKOS + "prefLabel"
ALIAS = SKOS + "altLabel"
SOURCE = DCTERMS + "source"
CITATION = DCTERMS + "bibliographicCitation"
DOI = BIBO + "doi"
DEPRECATED = "http://www.w3.org/2002/07/owl#deprecated"

STRING = XSD + "string"
INTEGER = XSD + "integer"
DECIMAL = XSD + "decimal"
DOUBLE = XSD + "double"
BOOLEAN = XSD + "boolean"

# Classes
COMPOUND = HR + "Compound"
REACTION = HR + "Reaction"
TRANSPORT = HR + "Transport"
ENZYME = HR + "Enzyme"
HOST = HR + "Host"
COMPARTMENT = HR + "Compartment"
HOST_REACTION = HR + "HostReaction"
EXPRESSION = HR + "Expression"
CIRCUMSTANCE = HR + "Circumstance"
BIOMASS_PART = HR + "BiomassPart"
ABSENCE = HR + "Absence"
RELEASE = HR + "Release"
OUTLET = HR + "Outlet"
ROUTE = HR + "Route"
UNIT = HR + "Unit"
EXCEPTION = HR + "Exception"
QUANTITY = QUDT + "Quantity"
DOCUMENT = BIBO + "Document"
CONCEPT = SKOS + "Concept"
KINETIC_CONSTANT = HR + "KineticConstant"
FORMATION_ENERGY = HR + "FormationEnergy"
CONCENTRATION = HR + "Concentration"
EFFECT = HR + "Effect"
VITAMIN = HR + "Vitamin"
SUPPLY = HR + "Supply"

# Properties of compounds and reactions
FORMULA = HR + "formula"
CHARGE = HR + "charge"
CHEBI = HR + "chebi"
INCHIKEY = HR + "inchikey"
ANCHOR = HR + "anchor"
CONSERVED = HR + "conserved"
PRECURSOR = HR + "precursor"
MEMBRANE_BOUND = HR + "membraneBound"
EC = HR + "ec"
EC_CLASS = HR + "ecClass"
RHEA_ID = HR + "rhea"
HAS_ENZYME = HR + "enzyme"
COFACTOR = HR + "cofactor"
TAKES = HR + "takes"
MAKES = HR + "makes"
HAS_COMPOUND = HR + "compound"
COUNT = HR + "count"
SIDE = HR + "side"
LUMPED = HR + "lumped"
READING = HR + "reading"

# Properties of hosts and their rows
TAXON = HR + "taxon"
PROTON_CONVENTION = HR + "protonConvention"
NUTRIENT = HR + "nutrient"
REQUIRES = HR + "requires"
COMPOSITION_FROM = HR + "compositionFrom"
COMPOSITION_NOTE = HR + "compositionNote"
ROLE = HR + "role"
HAS_REACTION = HR + "reaction"
PLACE = HR + "place"
OUTER = HR + "outer"
INNER = HR + "inner"
DIRECTION = HR + "direction"
ISOZYME = HR + "isozyme"
GENE = HR + "gene"
HAS_EXPRESSION = HR + "expression"
HAS_HOST = HR + "host"
REASON = HR + "reason"

# Properties of expression rules
LEVEL = HR + "level"
OXYGEN = HR + "oxygen"
FEED_ANY = HR + "feedAny"
FEED_ONLY = HR + "feedOnly"
FEED_WITHOUT = HR + "feedWithout"
FEED_OUTSIDE = HR + "feedOutside"
SUPPLIED_ANY = HR + "suppliedAny"
SUPPLIED_WITHOUT = HR + "suppliedWithout"
REMOVED_REGULATOR = HR + "removedRegulator"
REMOVED_ENZYME = HR + "removedEnzyme"
HAS_CIRCUMSTANCE = HR + "circumstance"
IMPLIED_BY = HR + "impliedBy"

# Properties of numbers
ABOUT = HR + "about"
QUANTITY_KIND = HR + "quantityKind"
VALUE = QUDT + "numericValue"
HAS_UNIT = QUDT + "hasUnit"
LOW = HR + "low"
HIGH = HR + "high"
ORIGIN = HR + "origin"
CONDITION = HR + "condition"
FRACTION = HR + "fraction"
DISPLAY = HR + "display"
UCUM = QUDT + "ucumCode"

# Properties of kinetic constants, energies, effects and vitamins
HYDROGENS = HR + "hydrogens"
PH = HR + "ph"
IONIC_STRENGTH = HR + "ionicStrength"
COUNTED_FROM = HR + "countedFrom"
EFFECTOR = HR + "effector"
SENSE = HR + "sense"
GIVES = HR + "gives"
HAS_VITAMIN = HR + "vitamin"
SUPPLIED = HR + "supplied"

# Properties of outlets and routes
FAMILY = HR + "family"
DRAWS = HR + "draws"
FORM = HR + "form"
DEFAULT = HR + "default"
USES = HR + "uses"
USES_ROW = HR + "usesRow"
PREFERRED = HR + "preferred"

# What the core asks for without knowing its name
ROLE_CLASS = HR + "Role"
MEMBER = HR + "member"
PAIR = HR + "pair"
REDUCED = HR + "reduced"
OXIDISED = HR + "oxidised"

# Properties of exceptions to the checks
EXCEPTION_RULE = HR + "rule"
EXCUSES = HR + "excuses"

# Derived properties (never in hand-written files)
CONTENT = HR + "content"
POOL = HR + "Pool"
IN_COMPARTMENT = HR + "compartment"
CONSUMES = HR + "consumes"
PRODUCES = HR + "produces"
SKELETONS_PER_TURN = HR + "skeletonsPerTurn"
REFILL = HR + "Refill"
REMOVAL = HR + "Removal"
DERIVED_FROM = PROV + "wasDerivedFrom"
GENERATED_BY = PROV + "wasGeneratedBy"
ENTITY = PROV + "Entity"
ACTIVITY = PROV + "Activity"
USED = PROV + "used"
ASSOCIATED_WITH = PROV + "wasAssociatedWith"
VERSION = DCTERMS + "hasVersion"

# Closed vocabularies: local names below HR
READINGS = ("seen", "second-hand", "recalled")
ORIGINS = ("measured", "calculated", "assumed")
DIRECTIONS = ("forward", "reverse", "both")
ROLES = ("cytosol", "organelle", "membrane", "medium")
SIDES = ("outer", "inner")
OXYGEN_STATES = ("present", "absent")
LEVELS = ("on", "basal")
CONVENTIONS = ("motive-balanced", "inside-balanced")
SENSES = ("activator", "inhibitor")
VITAMIN_SUPPLIES = ("made-inside", "from-the-medium")
