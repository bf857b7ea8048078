"""Outlets as asked for: product, amount and form, in moles; growth as a rate or a yield of the total feed."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction

from msgspec import UNSET, Struct

from headrace import names, units
from headrace.case import model
from headrace.case.medium import Medium
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.names import nearest, slugify
from headrace.units import Amount
from headrace.values.case import Case, Demand
from headrace.values.changes import Change, Scale
from headrace.values.elements import molar_mass, neutral_mass
from headrace.values.facts import Facts, Form, HostReaction, Outlet

ONE_AMOUNT = 'exactly one of rate = "1.4 mmol/gDW/h", yield = "0.3 mol/mol", productivity = "2 g/L/h" with biomass'


class Growth(Struct, frozen=True):
    """rate in 1/h, or None with the yield in gDW per mmol of total feed."""

    rate: float | None
    per_feed: float | None


class _Weighed(Struct, frozen=True):
    """A form with its molar mass in g/mol; None where the outlet's facts give no mass."""

    label: str
    mass: Fraction | None


def growth(sheet: Sheet, medium: Medium, changes: Sequence[Change] = ()) -> Growth:
    """Growth rate or biomass yield. Left out means a resting phase, which a finding says."""
    factor = _factor(changes, "growth")
    if sheet.document.growth is UNSET:
        sheet.say("note", "assumed", "growth", "growth is not stated: a resting phase (0 /h) is assumed")
        return Growth(0.0, None)
    with sheet.at("growth"):
        amount = units.read(sheet.document.growth, units.GROWTH)
        if amount.unit == "1/h":
            return Growth(float(amount.value * factor), None)
        per_mmol = amount.value if amount.unit == "gDW/mmol" else amount.value * medium.feed_mass() / 1000
        return Growth(None, float(per_mmol * factor))


def demands(
    sheet: Sheet, medium: Medium, rows: Iterable[HostReaction], changes: Sequence[Change] = ()
) -> tuple[Demand, ...]:
    """All outlets of the scenario. Raises InputError with the key at fault."""
    index, found = names.outlets(sheet.facts), list[Demand]()
    rows = tuple(rows)
    for number, stated in enumerate(sheet.document.outlet):
        with sheet.at(f"outlet[{number}].product"):
            outlet = sheet.facts.outlets[index.find(stated.product).slug]
            if outlet.slug in {demand.outlet for demand in found}:
                raise InputError(f"{outlet.label} is asked for twice", read=stated.product, accepted="each outlet once")
        found.append(_demand(sheet, medium, f"outlet[{number}]", stated, outlet, rows, _factor(changes, outlet.slug)))
    for change in changes:
        if isinstance(change, Scale) and change.outlet not in {"growth", *(demand.outlet for demand in found)}:
            raise InputError(f"no outlet {change.outlet!r} in this case to scale", read=change.outlet)
    return tuple(found)


def outlet_number(case: Case, facts: Facts, name: str = "") -> int:
    """The place in `case.demands` of the outlet of this name; no name means the only outlet.

    Raises InputError for an outlet that is unknown or not in the scenario, and for no name with none or several.
    """
    asked = [demand.label for demand in case.demands]
    if not name:
        if len(asked) == 1:
            return 0
        accepted = ", ".join(asked) or "an outlet in the scenario: [[outlet]] with product and amount"
        raise InputError("name the outlet", file=case.path, key="--outlet", accepted=accepted)
    try:
        slug = names.outlets(facts).find(name).slug
    except InputError as error:
        raise error.at(key="--outlet") from None
    numbers = [number for number, demand in enumerate(case.demands) if demand.outlet == slug]
    if not numbers:
        raise InputError(
            f"the scenario has no outlet {name!r}",
            file=case.path,
            key="--outlet",
            read=name,
            accepted=", ".join(asked) or "[[outlet]] in the scenario",
            near=nearest(name, asked),
        )
    return numbers[0]


def biomass(case: Case) -> Demand:
    """Growth as an outlet, for drain plugins: one gram of dry cells, drawn by the host's composition."""
    return Demand("biomass", "biomass", "biomass", {}, "", rate=case.growth, yield_per_feed=case.growth_yield)


def _demand(
    sheet: Sheet,
    medium: Medium,
    key: str,
    stated: model.Outlet,
    outlet: Outlet,
    rows: Sequence[HostReaction],
    factor: Fraction,
) -> Demand:
    name, amount = _amount(sheet, key, stated)
    by_mass = amount.unit.startswith("g/")
    form = _form(sheet, key, stated, outlet, asked=by_mass)
    with sheet.at(f"{key}.{name}"):
        if by_mass and form.mass is None:
            accepted = 'an amount by moles, such as "1.4 mmol/gDW/h"'
            raise InputError(
                f"{outlet.label} has no molar mass of its own", read=getattr(stated, name), accepted=accepted
            )
        if by_mass and stated.options:
            words = f"{outlet.label} is weighed as {form.label}, {float(form.mass or 0):.2f} g/mol, whatever its options say"
            sheet.say("caution", "mass-to-moles", outlet.slug, words)
        moles = _moles(sheet, amount, form.mass or Fraction(1), medium, stated) * factor
    share = amount.unit in ("mol/mol", "g/g")
    return Demand(
        outlet=outlet.slug,
        label=outlet.label,
        family=outlet.family,
        draws=outlet.draws,
        place=_place(sheet, rows, outlet.draws),
        rate=None if share else float(moles),
        yield_per_feed=float(moles) if share else None,
        form=form.label,
        molar_mass=float(form.mass or 0),
        options=stated.options,
    )


def _amount(sheet: Sheet, key: str, stated: model.Outlet) -> tuple[str, Amount]:
    """The one amount that is stated, with its key."""
    kinds = {"rate": units.RATE, "yield": units.YIELD, "productivity": units.PRODUCTIVITY}
    given = {
        name: text for name in kinds if (text := getattr(stated, "yield_" if name == "yield" else name)) is not UNSET
    }
    if not given:
        with sheet.at(key):
            raise InputError(f"no amount is stated for {stated.product}", accepted=ONE_AMOUNT)
    name = max(given, key=lambda each: sheet.scenario.places.get(f"{key}.{each}", 0))
    with sheet.at(f"{key}.{name}"):
        if len(given) > 1:
            raise InputError(f"{' and '.join(given)} are stated together", read=given[name], accepted=ONE_AMOUNT)
        amount = units.read(given[name], kinds[name])
    if name == "productivity" and stated.biomass is UNSET:
        with sheet.at(f"{key}.productivity"):
            accepted = 'biomass = "20 g/L" beside it: the dry cells per litre'
            raise InputError("a productivity needs the cell density", read=given[name], accepted=accepted)
    if name != "productivity" and stated.biomass is not UNSET:
        with sheet.at(f"{key}.biomass"):
            raise InputError("a cell density goes with productivity only", read=stated.biomass, accepted=ONE_AMOUNT)
    return name, amount


def _moles(sheet: Sheet, amount: Amount, mass: Fraction, medium: Medium, stated: model.Outlet) -> Fraction:
    """Rate in mmol/gDW/h, or yield in mol per mol of total feed. mass in g/mol."""
    value = amount.value
    if amount.unit == "g/g":
        return value * medium.feed_mass() / mass
    if amount.unit in ("g/gDW/h", "g/L/h"):
        value = units.mass_to_rate(value, mass)
    if amount.unit.endswith("/L/h"):
        value /= units.read(stated.biomass, units.CELL_DENSITY).value
    return value


def _form(sheet: Sheet, key: str, stated: model.Outlet, outlet: Outlet, asked: bool) -> _Weighed:
    """The form that a product is weighed in. asked: whether the amount depends on it."""
    forms = {slugify(form.label): form for form in outlet.forms}
    listed = ", ".join(f'"{form.label}" ({float(molar_mass(form.formula)):.2f} g/mol)' for form in outlet.forms)
    if stated.form is not UNSET:
        with sheet.at(f"{key}.form"):
            if slugify(stated.form) not in forms:
                labels = [form.label for form in outlet.forms]
                accepted = listed or f"no form: {outlet.label} has none of its own"
                raise InputError("unknown form", read=stated.form, accepted=accepted, near=nearest(stated.form, labels))
            return _weighed(forms[slugify(stated.form)])
    if asked and len({molar_mass(form.formula) for form in outlet.forms}) > 1:
        with sheet.at(key):
            raise InputError(f"{outlet.label} by mass needs its form", accepted=f"form = one of {listed}")
    if outlet.forms:
        return _weighed(next((form for form in outlet.forms if form.default), outlet.forms[0]))
    return _own_form(sheet, outlet, asked)


def _weighed(form: Form) -> _Weighed:
    return _Weighed(form.label, molar_mass(form.formula))


def _own_form(sheet: Sheet, outlet: Outlet, asked: bool) -> _Weighed:
    """Without listed forms, a product that is one compound is weighed as that compound without charge."""
    if len(outlet.draws) != 1 or set(outlet.draws.values()) != {Fraction(1)}:
        return _Weighed("", None)
    compound = sheet.facts.compounds[next(iter(outlet.draws))]
    mass = neutral_mass(compound.formula, compound.charge)
    if asked:
        words = f"{outlet.label} is weighed as the uncharged compound, {float(mass):.3f} g/mol"
        sheet.say("note", "mass-to-moles", outlet.slug, words)
    return _Weighed("uncharged", mass)


def _place(sheet: Sheet, rows: Sequence[HostReaction], draws: Mapping[str, Fraction]) -> str:
    """Where a product is drawn: the cytosol, unless it occurs in one other compartment only."""
    if any(sheet.facts.compounds[compound].membrane for compound in draws):
        return sheet.cytosol
    places = {place for compound in draws for place in _places(sheet, rows, compound)} - {sheet.medium}
    return places.pop() if len(places) == 1 else sheet.cytosol


def _places(sheet: Sheet, rows: Sequence[HostReaction], compound: str) -> set[str]:
    found: set[str] = set()
    for row in rows:
        for term in sheet.facts.reactions[row.reaction].terms:
            if term.compound == compound:
                found.add({"outer": row.outer, "inner": row.inner}.get(term.side) or row.place or row.inner)
    return found


def _factor(changes: Sequence[Change], outlet: str) -> Fraction:
    factor = Fraction(1)
    for change in changes:
        if isinstance(change, Scale) and change.outlet == outlet:
            factor *= change.factor
    return factor
