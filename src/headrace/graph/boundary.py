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
