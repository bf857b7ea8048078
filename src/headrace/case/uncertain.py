"""What a case does not know exactly: [uncertainty] against the scenario, and the ranges that facts bring.

A stated range is read as the quantity itself would be: its text takes the quantity's place in the scenario, and the same
code turns it into the case's unit.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from typing import Any

import msgspec
from msgspec import UNSET

from headrace import names, units
from headrace.case.catalysts import Catalysts
from headrace.case.energy import energy
from headrace.case.medium import medium
from headrace.case.model import Document, Spread
from headrace.case.outlets import demands, growth
from headrace.case.ranges import ENERGY_UNITS, RATE, WORDS, of_facts, ranged
from headrace.case.sheet import Sheet
from headrace.case.strain import limits
from headrace.errors import InputError
from headrace.names import nearest, slugify
from headrace.values.case import Case
from headrace.values.uncertainty import Input

Reader = Callable[[Sheet], float | None]
Path = tuple[str | int, ...]


def inputs(sheet: Sheet, case: Case) -> tuple[Input, ...]:
    """All uncertain quantities of a case: the stated ones, then those of the facts it uses.

    Raises InputError, at the key in [uncertainty], for a name that the scenario does not have, a quantity that it does not
    state, and a range that is none.
    """
    stated = tuple(_Stated(sheet, case).all())
    if sheet.document.uncertainty.facts == "values":
        return stated
    taken = {(each.target, each.index) for each in stated}
    return stated + tuple(each for each in of_facts(sheet, case) if (each.target, each.index) not in taken)


class _Stated:
    """Reads [uncertainty] against the scenario that it belongs to."""

    def __init__(self, sheet: Sheet, case: Case) -> None:
        self.sheet, self.case, self.stated = sheet, case, sheet.document.uncertainty
        self.oxygen = "absent" if case.oxygen == "anaerobic" else "present"
        self.rows = tuple(case.rows.values())

    def all(self) -> Iterator[Input]:
        """The stated inputs, in the order of the keys."""
        if self.stated.growth is not UNSET:
            yield self._growth(self.stated.growth)
        if self.stated.oxygen_rate is not UNSET:
            yield self._oxygen(self.stated.oxygen_rate)
        for kind in ENERGY_UNITS:
            spread = getattr(self.stated, kind.replace("-", "_"))
            if spread is not UNSET:
                yield self._energy(kind, spread)
        if self.stated.p_o_nadh is not UNSET:
            yield self._p_o(self.stated.p_o_nadh)
        tables = ("feed", "outlet", "supplement", "limit", "split", "composition")
        for table in tables:
            for name, spread in getattr(self.stated, table).items():
                yield getattr(self, f"_{table}")(f"uncertainty.{table}.{name}", name, spread)

    def _growth(self, spread: Spread) -> Input:
        absolute = self.case.growth is not None
        nominal = self.case.growth if self.case.growth is not None else self.case.growth_yield
        about = Input("growth", "growth", "", nominal or 0.0, 0, 0, "1/h" if absolute else "gDW/mmol")

        def read(sheet: Sheet) -> float | None:
            found = growth(sheet, medium(sheet))
            return found.rate if absolute else found.per_feed

        return self._in_place("uncertainty.growth", spread, ("growth",), read, about)

    def _oxygen(self, spread: Spread) -> Input:
        key = "uncertainty.oxygen-rate"
        about = Input("oxygen uptake", "oxygen-rate", "", self._needed(self.case.oxygen_rate, key), 0, 0, RATE)
        return self._in_place(key, spread, ("conditions", "oxygen-rate"), lambda sheet: medium(sheet).oxygen_rate, about)

    def _energy(self, kind: str, spread: Spread) -> Input:
        about = Input(WORDS.get(kind, kind), "energy", kind, self.case.energy.get(kind, 0.0), 0, 0, ENERGY_UNITS[kind])
        path = ("energy", kind)
        return self._in_place(f"uncertainty.{kind}", spread, path, lambda sheet: energy(sheet, self.oxygen).values[kind], about)

    def _p_o(self, spread: Spread) -> Input:
        """A P/O keeps its own scale: motive protons per ATP = factor / (P/O) - offset, found from two values."""
        key, path = "uncertainty.p-o-nadh", ("energy", "p-o-nadh")
        own = self.sheet.document.energy.p_o_nadh
        nominal = self._needed(None if own is UNSET else float(units.read(own, units.RATIO).value), key)
        about = Input("P/O for NADH", "p-o", "", nominal, 0, 0, "mol/mol")
        found = ranged(self.sheet, key, spread, lambda text: float(units.read(text, units.RATIO).value), about)
        with self.sheet.at(key):
            low, high = (self._protons(path, value) for value in (found.low, found.high))
        factor = (low - high) / (1 / found.low - 1 / found.high)
        return msgspec.structs.replace(found, factor=factor, offset=factor / found.low - low)

    def _protons(self, path: Path, ratio: float) -> float:
        """Motive protons per ATP at a P/O."""
        try:
            return energy(self._with(path, f"{max(ratio, 0.0):.12f} mol/mol"), self.oxygen).values["protons-per-atp"]
        except InputError as error:  # its place is the quantity's; the ratio stands in the range
            raise InputError(error.message, read=f"{ratio:g} mol/mol", accepted=error.accepted, hint=error.hint) from None

    def _feed(self, key: str, name: str, spread: Spread) -> Input:
        number = self._which(key, name, [feed.compound for feed in self.case.feeds], self._compound(key, name))
        nominal = self._needed(self.case.feeds[number].uptake, key)
        about = Input(f"uptake of {self._label(name)}", "feed", str(number), nominal, 0, 0, RATE)
        return self._in_place(key, spread, ("feed", number, "uptake"), lambda sheet: medium(sheet).feeds[number].uptake, about)

    def _outlet(self, key: str, name: str, spread: Spread) -> Input:
        with self.sheet.at(key):
            wanted = names.outlets(self.sheet.facts).find(name).slug
        number = self._which(key, name, [demand.outlet for demand in self.case.demands], wanted)
        raw, demand = self.sheet.scenario.raw["outlet"][number], self.case.demands[number]
        amount = next(each for each in ("rate", "yield", "productivity") if each in raw)
        absolute = demand.rate is not None

        def read(sheet: Sheet) -> float | None:
            found = demands(sheet, medium(sheet), self.rows)[number]
            return found.rate if absolute else found.yield_per_feed

        nominal = (demand.rate if demand.rate is not None else demand.yield_per_feed) or 0.0
        about = Input(demand.label, "outlet", str(number), nominal, 0, 0, RATE if absolute else "mol/mol")
        return self._in_place(key, spread, ("outlet", number, amount), read, about)

    def _supplement(self, key: str, name: str, spread: Spread) -> Input:
        slug = self._compound(key, name)
        number = self._which(key, name, [each.compound for each in self.case.supplements], slug)
        nominal = self._needed(self.case.supplements[number].rate, key)
        listed = self.sheet.scenario.raw["conditions"]["supplements"]
        own = (i for i, each in enumerate(listed) if isinstance(each, dict) and self._compound(key, each["compound"]) == slug)
        at = next(own)
        about = Input(f"supply of {self._label(name)}", "supplement", slug, nominal, 0, 0, RATE)
        path = ("conditions", "supplements", at, "rate")
        return self._in_place(key, spread, path, lambda sheet: medium(sheet).supplements[number].rate, about)

    def _limit(self, key: str, name: str, spread: Spread) -> Input:
        keys = list(self.sheet.document.strain.limit)
        number = self._which(key, name, [slugify(each) for each in keys], slugify(name), keys)
        about = Input(f"limit of {self.case.limits[number].label}", "limit", self.case.limits[number].label,
                      self.case.limits[number].rate, 0, 0, RATE)
        path = ("strain", "limit", keys[number])
        return self._in_place(key, spread, path, lambda sheet: limits(sheet, self.rows, self.oxygen)[number].rate, about)

    def _split(self, key: str, name: str, spread: Spread) -> Input:
        with self.sheet.at(key):
            catalysts = Catalysts(self.sheet.facts, self.sheet.host)
            entity = catalysts.phrase(name, describing=False).entity
            if entity is None:
                raise catalysts.unknown(name)
            rows = {row.slug for row in catalysts.rows(entity)}
            shares = [q for q in self.sheet.host.quantities if q.kind == "split-share"]
            own = next((q for q in shares if q.about in rows), None)
            if own is None:
                accepted = ", ".join(q.about for q in shares) or f"nothing: no share is known for {self.sheet.host.label}"
                raise InputError(f"no measured share of {name} in its group is known", read=name, accepted=accepted)
        about = Input(f"share of {catalysts.label(entity)}", "split", own.about, float(own.value), 0, 0, "mol/mol")
        return ranged(self.sheet, key, spread, lambda text: float(units.read(text, units.RATIO).value), about)

    def _composition(self, key: str, name: str, spread: Spread) -> Input:
        fractions = sorted({part.fraction for part in self.sheet.host.composition})
        number = self._which(key, name, [slugify(each) for each in fractions], slugify(name), fractions)
        about = Input(f"{fractions[number]} in biomass", "composition", fractions[number], 1.0, 0, 0, "of the known amount")
        return ranged(self.sheet, key, spread, lambda text: float(units.read(text, units.OF_KNOWN).value / 100), about)

    def _which(self, key: str, name: str, slugs: Sequence[str], wanted: str, labels: Sequence[str] = ()) -> int:
        """Which of the scenario's own entries a name means."""
        if wanted not in slugs:
            with self.sheet.at(key):
                listed = list(labels or slugs)
                accepted = ", ".join(listed) or "nothing: the scenario states none"
                words, near = f"the scenario states no {name!r} here", nearest(name, listed)
                raise InputError(words, read=name, accepted=accepted, near=near)
        return list(slugs).index(wanted)

    def _compound(self, key: str, name: str) -> str:
        with self.sheet.at(key):
            return self.sheet.compound(name).slug

    def _label(self, name: str) -> str:
        return self.sheet.compound(name).label

    def _needed(self, value: float | None, key: str) -> float:
        if value is None:
            with self.sheet.at(key):
                words = "there is nothing to vary: the scenario states no value here"
                raise InputError(words, accepted="a stated value, then its range")
        return value

    def _with(self, path: Path, text: str) -> Sheet:
        """The sheet of the scenario with one text in another's place."""
        raw = _put({key: value for key, value in self.sheet.scenario.raw.items() if key != "uncertainty"}, path, text)
        return Sheet(msgspec.structs.replace(self.sheet.scenario, raw=raw), msgspec.convert(raw, Document), self.sheet.facts)

    def _in_place(self, key: str, spread: Spread, path: Path, read: Reader, about: Input) -> Input:
        """The input, its ends read as if they stood at `path`."""

        def value(text: str) -> float:
            try:
                found = read(self._with(path, text))
            except InputError as error:  # its place is the quantity's; the text stands in the range
                raise InputError(error.message, read=text, accepted=error.accepted, hint=error.hint) from None
            if found is None:
                raise InputError("the scenario states this in another way", read=text, accepted=f"a value in {about.unit}")
            return found

        return ranged(self.sheet, key, spread, value, about)


def _put(data: Any, path: Path, text: str) -> Any:
    """A copy of plain data with a text at a path; tables that are missing on the way are made."""
    if not path:
        return text
    first, rest = path[0], path[1:]
    if isinstance(first, int):
        return [_put(each, rest, text) if i == first else each for i, each in enumerate(data)]
    return {**data, first: _put(data.get(first, {}), rest, text)}
