"""Where route vectors begin and end, by the facts' flags and roles; the core knows no compound by name."""

from __future__ import annotations

from headrace.values.facts import Facts

FREE_ROLES = (
    "acyl-carrier",
    "ammonium",
    "by-product",
    "inorganic-carbon",
    "mineral",
    "motive-proton",
    "one-carbon",
    "oxygen",
    "peroxide",
    "proton",
    "water",
)
FORM_ROLES = ("adenylate", "one-carbon-carrier")


class Boundary:
    """Which compounds a route takes and gives freely, and which only change form.

    free: anchors, precursors and what the facts' roles name as free. form: compound -> the
    name of the moiety that it is a form of.
    """

    def __init__(self, facts: Facts) -> None:
        self.form: dict[str, str] = {}
        for role in FORM_ROLES:
            self.form.update(dict.fromkeys(facts.roles.get(role, ()), f"{role} forms"))
        for reduced, oxidised in facts.electron_pairs.items():
            self.form |= {reduced: f"{oxidised} forms", oxidised: f"{oxidised} forms"}
        named = {slug for role in FREE_ROLES for slug in facts.roles.get(role, ())}
        pools = {c.slug for c in facts.compounds.values() if c.anchor or c.precursor}
        self.free = frozenset((named | pools) - set(self.form))


def own_carbon(facts: Facts, compound: str) -> int:
    """Carbon atoms of a compound without those of the acyl carrier that it may sit on: 2 for acetyl-CoA, not 23.

    A compound sits on a carrier when it has the carrier's nitrogen, phosphorus and sulfur, sulfur among them, and more
    carbon than the carrier.
    """
    atoms = facts.compounds[compound].formula
    for name in facts.roles.get("acyl-carrier", ()):
        carrier = facts.compounds[name].formula
        alike = all(atoms.get(element, 0) == carrier.get(element, 0) for element in ("N", "P", "S"))
        if carrier.get("S") and alike and atoms.get("C", 0) > carrier["C"]:
            return atoms["C"] - carrier["C"]
    return atoms.get("C", 0)
