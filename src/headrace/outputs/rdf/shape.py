"""Which class and properties each part of an answer's JSON has in RDF. A table; `build` reads it.

Every field of the JSON has one property that carries its value: `hr:` and the field's name in camel case, or what
FIELDS says where that name is taken by the facts. A field that names an entity carries its IRI (the slug is the IRI's
last part); where the JSON has a text instead, the text stands under the property and the IRI under `link`.
Parts and fields that are not listed (a plugin's, or newer ones) follow the same rules with the class `hr:Row`.
"""

from __future__ import annotations

from typing import NamedTuple

from headrace.graph.terms import HR, LABEL, SOURCE


class Field(NamedTuple):
    """property: IRI that carries the value. finds: what the value names, or "". link: property of the IRI when the value
    itself is text."""

    property: str
    finds: str = ""
    link: str = ""


class Part(NamedTuple):
    """kind: class IRI. name: what its nodes are called in IRIs. key: the field that tells one from another ("" = number)."""

    kind: str
    name: str
    key: str = ""


PARTS: dict[str, Part] = {
    "drains": Part(HR + "Drain", "drain"),
    "draws": Part(HR + "Draw", "draw"),
    "pools": Part(HR + "DrawnPool", "pool"),
    "rows": Part(HR + "LedgerRow", "row"),
    "compartments": Part(HR + "CompartmentLedger", "compartment", "compartment"),
    "ledger": Part(HR + "Ledger", "ledger"),
    "groups": Part(HR + "Group", "group", "group"),
    "refills": Part(HR + "Requirement", "refill", "refill"),
    "removals": Part(HR + "RemovalRate", "removal"),
    "feed": Part(HR + "FedSubstrate", "feed"),
    "crossings": Part(HR + "Crossing", "crossing", "compound"),
    "drawn": Part(HR + "DrawnCompound", "drawn", "compound"),
    "shortage": Part(HR + "Shortage", "shortage"),
    "repairs": Part(HR + "Repair", "repair"),
    "rates": Part(HR + "ReactionRate", "rate"),
    "findings": Part(HR + "Finding", "finding"),
    "closure": Part(HR + "Closure", "closure"),
    "energy": Part(HR + "EnergyUse", "energy"),
    "demands": Part(HR + "DemandRate", "demand-rate"),
    "needs": Part(HR + "Need", "need"),
}
OTHER = Part(HR + "Row", "row")

# Keys of the document that the run says by itself: its own title, host, versions, plugins and units of properties.
SAID_ELSEWHERE = ("scenario", "host", "units", "versions", "plugins")

FIELDS: dict[str, Field] = {
    "compound": Field(HR + "compound", "compound"),
    "substrate": Field(HR + "substrate", "compound"),
    "cofactors": Field(HR + "cofactor", "compound"),
    "compartment": Field(HR + "compartment", "place"),
    "reaction": Field(HR + "row", "row"),
    "refill": Field(HR + "refill", "row"),
    "routes": Field(HR + "route", "route"),
    "rules": Field(HR + "expression", "rule"),
    "reading": Field(HR + "reading", "reading"),
    "label": Field(LABEL),
    "steps": Field(HR + "stepName", "step", HR + "step"),
    "members": Field(HR + "memberName", "refill node", HR + "member"),
    "group": Field(HR + "groupName", "group node", HR + "group"),
    "outlet": Field(HR + "outletName", "outlet", HR + "outlet"),
    "about": Field(HR + "aboutName", "anything", HR + "about"),
    "ec": Field(HR + "ecNumber", "ec", HR + "ec"),
    "source": Field(HR + "citation", "source", SOURCE),
    "pool": Field(HR + "poolName"),
    "level": Field(HR + "findingLevel"),
    "side": Field(HR + "ledgerSide"),
    "kind": Field(HR + "rowKind"),
    "origin": Field(HR + "originNote"),
    "scale": Field(HR + "scaledBy"),
    "genes": Field(HR + "genes"),
    "supplied": Field(HR + "suppliedSkeletons"),
    "change": Field(HR + "change"),
}
