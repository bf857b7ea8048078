"""What surrounds the cells: feeds, oxygen, supplements, what may leave, and circumstances."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from msgspec import UNSET, Struct

from headrace import units
from headrace.case import model
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.names import Entity, Name, NameIndex
from headrace.values.case import Feed, Supplement
from headrace.values.changes import Change, LetOut, Supply, Uptake
from headrace.values.elements import neutral_mass
from headrace.values.facts import Compound


class Medium(Struct, frozen=True):
    """The resolved surroundings. uptakes: exact, as `feeds`; masses: g/mol of each feed as a neutral compound."""

    feeds: tuple[Feed, ...]
    uptakes: tuple[Fraction | None, ...]
    masses: tuple[Fraction, ...]
    oxygen: str
    oxygen_rate: float | None
    supplements: tuple[Supplement, ...]
    releases: tuple[str, ...]
    releases_stated: bool
    circumstances: tuple[str, ...]

    @property
    def oxygen_state(self) -> str:
        """present | absent, as facts speak of it; limited oxygen is present."""
        return "absent" if self.oxygen == "anaerobic" else "present"

    def feed_mass(self) -> Fraction:
        """Grams per mole of the total feed. Raises InputError when the shares of several feeds are open."""
        if len(set(self.masses)) == 1:
            return self.masses[0]
        known = [uptake for uptake in self.uptakes if uptake is not None]
        total = sum(known, Fraction(0))
        if len(known) < len(self.feeds) or not total:
            raise InputError(
                "a yield by mass needs the share of each feed",
                accepted='a yield by amount, such as "0.3 mol/mol" or "0.05 gDW/mmol", or an uptake for every feed',
            )
        return sum((uptake * mass for uptake, mass in zip(known, self.masses, strict=True)), Fraction(0)) / total


def medium(sheet: Sheet, changes: Sequence[Change] = ()) -> Medium:
    """Resolve feeds and conditions. Raises InputError with the key at fault."""
    feeds, uptakes, masses = _feeds(sheet, changes)
    oxygen, rate = _oxygen(sheet)
    supplements = _supplements(sheet, feeds, changes)
    circumstances = _circumstances(sheet)
    state = "absent" if oxygen == "anaerobic" else "present"
    releases, stated = _releases(sheet, state, circumstances, changes)
    _required(sheet, {feed.compound for feed in feeds} | {extra.compound for extra in supplements})
    return Medium(feeds, uptakes, masses, oxygen, rate, supplements, releases, stated, circumstances)


def _feeds(
    sheet: Sheet, changes: Sequence[Change]
) -> tuple[tuple[Feed, ...], tuple[Fraction | None, ...], tuple[Fraction, ...]]:
    feeds: list[Feed] = []
    uptakes: list[Fraction | None] = []
    masses: list[Fraction] = []
    if not sheet.document.feed:
        with sheet.at("feed"):
            raise InputError("no feed is stated", accepted="at least one [[feed]] with a substrate")
    for index, stated in enumerate(sheet.document.feed):
        key = f"feed[{index}]"
        with sheet.at(f"{key}.substrate"):
            compound = sheet.compound(stated.substrate)
            if not compound.formula.get("C"):
                raise InputError(f"{compound.label} holds no carbon", read=stated.substrate, accepted="a carbon source")
            if compound.slug in {feed.compound for feed in feeds}:
                raise InputError(f"{compound.label} is fed twice", read=stated.substrate, accepted="each feed once")
            mass = neutral_mass(compound.formula, compound.charge)
        with sheet.at(f"{key}.uptake"):
            uptake = None if stated.uptake is UNSET else _uptake(sheet, stated.uptake, compound, mass)
        feeds.append(Feed(compound.slug, None if uptake is None else float(uptake)))
        uptakes.append(uptake)
        masses.append(mass)
    for change in changes:
        if isinstance(change, Uptake):
            place = next((number for number, feed in enumerate(feeds) if feed.compound == change.compound), None)
            if place is None:
                raise InputError(f"{change.compound!r} is no feed of this case", read=change.compound)
            feeds[place] = Feed(change.compound, change.rate)
            uptakes[place] = None if change.rate is None else Fraction(repr(change.rate))
    return tuple(feeds), tuple(uptakes), tuple(masses)


def _uptake(sheet: Sheet, text: str, compound: Compound, mass: Fraction) -> Fraction:
    amount = units.read(text, units.RATE)
    if amount.unit == "mmol/gDW/h":
        return amount.value
    if compound.charge:
        words = f"{compound.label} is weighed as the uncharged compound, {float(mass):.3f} g/mol"
        sheet.say("note", "mass-to-moles", compound.slug, words)
    return units.mass_to_rate(amount.value, mass)


def _oxygen(sheet: Sheet) -> tuple[str, float | None]:
    stated = sheet.document.conditions
    limited = stated.oxygen == "limited"
    if stated.oxygen_rate is not UNSET and not limited:
        with sheet.at("conditions.oxygen-rate"):
            accepted = 'with oxygen = "limited" only'
            raise InputError("a rate goes with limited oxygen", read=stated.oxygen_rate, accepted=accepted)
    if stated.oxygen is UNSET:
        sheet.say("note", "assumed", "oxygen", "oxygen is not stated: aerobic is assumed")
        return "aerobic", None
    if not limited:
        return stated.oxygen, None
    with sheet.at("conditions.oxygen"):
        if stated.oxygen_rate is UNSET:
            accepted = 'oxygen-rate = "5 mmol/gDW/h" beside it: the largest oxygen uptake'
            raise InputError("limited oxygen needs its rate", read="limited", accepted=accepted)
    with sheet.at("conditions.oxygen-rate"):
        rate = float(units.read(stated.oxygen_rate, units.MOLAR_RATE).value)
    if not stated.circumstances:
        words = "genes are taken as with full oxygen; those made only at low oxygen need it as a stated circumstance"
        sheet.say("note", "limited-oxygen", "oxygen", words)
    return "limited", rate


def _supplements(sheet: Sheet, feeds: tuple[Feed, ...], changes: Sequence[Change]) -> tuple[Supplement, ...]:
    found: dict[str, Supplement] = {}
    fed = {feed.compound for feed in feeds}
    for index, stated in enumerate(sheet.document.conditions.supplements):
        key = f"conditions.supplements[{index}]"
        table = stated if isinstance(stated, model.Supplement) else model.Supplement(stated)
        with sheet.at(key):
            compound = sheet.compound(table.compound)
            if compound.slug in fed:
                raise InputError(f"{compound.label} is a feed already", read=table.compound, accepted="one of the two")
            if compound.slug in found:
                raise InputError(f"{compound.label} stands here twice", read=table.compound, accepted="each once")
        with sheet.at(f"{key}.rate"):
            rate = None if table.rate is UNSET else float(units.read(table.rate, units.MOLAR_RATE).value)
        found[compound.slug] = Supplement(compound.slug, rate)
    for change in changes:
        if isinstance(change, Supply):
            slug = sheet.compound(change.compound).slug
            found[slug] = Supplement(slug, change.rate)
    return tuple(found.values())


def _circumstances(sheet: Sheet) -> tuple[str, ...]:
    known = [Name(text, Entity("circumstance", slug)) for slug, text in sheet.facts.circumstances.items()]
    index = NameIndex("circumstance", known, "headrace facts show circumstances")
    found: list[str] = []
    for number, stated in enumerate(sheet.document.conditions.circumstances):
        with sheet.at(f"conditions.circumstances[{number}]"):
            found.append(index.find(stated).slug)
    return tuple(dict.fromkeys(found))


def _releases(
    sheet: Sheet, oxygen: str, circumstances: tuple[str, ...], changes: Sequence[Change]
) -> tuple[tuple[str, ...], bool]:
    found: list[str] = []
    stated = sheet.document.conditions.release
    if stated is UNSET:
        for usual in sheet.host.releases:
            fits = not usual.circumstances or not set(usual.circumstances).isdisjoint(circumstances)
            if usual.oxygen in ("", oxygen) and fits:
                found.append(usual.compound)
    else:
        for number, name in enumerate(stated):
            with sheet.at(f"conditions.release[{number}]"):
                found.append(sheet.compound(name).slug)
    found += [sheet.compound(change.compound).slug for change in changes if isinstance(change, LetOut)]
    return tuple(dict.fromkeys(found)), stated is not UNSET


def _required(sheet: Sheet, present: set[str]) -> None:
    for slug in sheet.host.required_supplements:
        if slug not in present:
            label = sheet.facts.compounds[slug].label
            words = f"{sheet.host.label} needs {label} in the medium, and the scenario supplies none"
            sheet.say("caution", "required-supplement", slug, words, sheet.host.basis)
