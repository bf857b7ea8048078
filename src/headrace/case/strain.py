"""Edits of the host: what is removed, added and limited, as rows."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import msgspec
from msgspec import Struct

from headrace.case.assay import capacity_of
from headrace.case.catalysts import Catalysts, Phrase
from headrace.case.sheet import Sheet
from headrace.errors import InputError
from headrace.names import slugify
from headrace.values.case import Limit
from headrace.values.changes import Add, Change, Raise
from headrace.values.facts import HostReaction


class Removal(Struct, frozen=True):
    """genes: gene symbols that are gone, those of removed rows included where no other row has them."""

    genes: frozenset[str]
    rows: frozenset[str]


class Addition(Struct, frozen=True):
    """One line of `add`. rows: rows of the host to turn on; new: rows that the host lacks. text: as written."""

    text: str
    rows: tuple[str, ...]
    new: tuple[HostReaction, ...]


def removal(sheet: Sheet, catalysts: Catalysts) -> Removal:
    """Genes and rows that the scenario removes. Raises InputError for what the host has not."""
    genes: set[str] = set()
    rows: set[str] = set()
    for number, text in enumerate(sheet.document.strain.remove):
        with sheet.at(f"strain.remove[{number}]"):
            if several := catalysts.genes(text):
                genes.update(several)
                continue
            phrase = catalysts.phrase(text, describing=False)
            if phrase.entity is None or phrase.direction:
                raise catalysts.unknown(text)
            if phrase.entity.kind in ("gene", "regulator") and not phrase.place:
                genes.add(phrase.entity.slug)
                continue
            found = catalysts.rows(phrase.entity, phrase.place)
            if not found:
                raise _not_here(sheet, catalysts, phrase)
            rows.update(row.slug for row in found)
    return Removal(frozenset(genes | _only_in(sheet.host.reactions, rows)), frozenset(rows))


def additions(sheet: Sheet, catalysts: Catalysts, changes: Sequence[Change] = ()) -> tuple[Addition, ...]:
    """Rows that the scenario and the changes bring in or turn on. Raises InputError for unknown names."""
    found: list[Addition] = []
    for number, text in enumerate(sheet.document.strain.add):
        with sheet.at(f"strain.add[{number}]"):
            found.append(_addition(sheet, catalysts, text))
    for change in changes:
        if isinstance(change, Add):
            if change.reaction not in sheet.facts.reactions:
                raise InputError(f"no reaction {change.reaction!r} to add", read=change.reaction)
            new = _new_row(sheet, change.reaction, change.place, change.direction)
            found.append(Addition(change.reaction, (), (new,)))
    return tuple(found)


def limits(
    sheet: Sheet, rows: Iterable[HostReaction], oxygen: str, changes: Sequence[Change] = ()
) -> tuple[Limit, ...]:
    """Largest rates of enzymes, shared by all their rows. Raises InputError for names without a row."""
    catalysts = Catalysts(sheet.facts, sheet.host).over(rows)
    found: dict[str, Limit] = {}
    for name, text in sheet.document.strain.limit.items():
        with sheet.at(f"strain.limit.{name}"):
            phrase = catalysts.phrase(name, describing=False)
            if phrase.entity is None or phrase.direction:
                raise catalysts.unknown(name)
            meant = catalysts.rows(phrase.entity, phrase.place)
            if not meant:
                raise _not_here(sheet, catalysts, phrase)
            _sole_gene(phrase, meant)
            label = catalysts.label(phrase.entity) + (f" in the {_space(sheet, phrase.place)}" if phrase.place else "")
            capacity = capacity_of(sheet, text, oxygen)
            if label in found:
                raise InputError(f"{label} is limited twice", read=text, accepted="each enzyme once")
            found[label] = Limit(label, tuple(row.slug for row in meant), *capacity)
    for change in changes:
        if isinstance(change, Raise):
            if change.limit not in found:
                raise InputError(f"no limit {change.limit!r} in this case to raise", read=change.limit)
            old = found.pop(change.limit)
            if change.rate is not None:
                found[change.limit] = msgspec.structs.replace(old, rate=change.rate, origin="raised", low=None, high=None)
    return tuple(found.values())


def _addition(sheet: Sheet, catalysts: Catalysts, text: str) -> Addition:
    phrase = catalysts.phrase(text, describing=True)
    if phrase.entity is None:
        raise catalysts.unknown(text)
    if phrase.entity.kind == "regulator":
        raise InputError(f"{phrase.entity.slug} is a regulator", read=text, accepted="the enzyme or gene it acts on")
    label = catalysts.label(phrase.entity)
    if phrase.words:
        words = f"read as {label}; {phrase.words!r} changes no balance, only what limits the enzyme"
        sheet.say("note", "described", phrase.entity.slug, words)
    present = catalysts.rows(phrase.entity, phrase.place) if phrase.own else []
    if not present:
        return Addition(text, (), _brought_in(sheet, catalysts, phrase, label))
    turned = [row for row in present if phrase.direction == "reverse" and row.direction != "both"]
    both = [row for row in present if phrase.direction == "both" and row.direction != "both"]
    new = tuple(_turned(row) for row in (*turned, *both))
    return Addition(text, tuple(row.slug for row in present if row not in turned), new)


def _brought_in(sheet: Sheet, catalysts: Catalysts, phrase: Phrase, label: str) -> tuple[HostReaction, ...]:
    """Rows of reactions that the host lacks (there), with a finding that says so."""
    assert phrase.entity is not None
    direction = phrase.direction or "forward"
    new = tuple(_new_row(sheet, slug, phrase.place, direction) for slug in catalysts.reactions(phrase.entity))
    if not new:
        raise InputError(f"no reaction is known for {label}", read=phrase.text, accepted="an enzyme with a reaction")
    reasons = {absence.reaction: absence for absence in sheet.host.absences}
    absence = next((reasons[row.reaction] for row in new if row.reaction in reasons), None)
    where = _space(sheet, phrase.place or sheet.cytosol)
    why = f": {absence.reason}" if absence else ""
    words = f"{label} is brought into the {where}; {sheet.host.label} has none there{why}"
    sheet.say("note", "brought-in", phrase.entity.slug, words, absence.basis if absence else None)
    return new


def _new_row(sheet: Sheet, slug: str, place: str, direction: str) -> HostReaction:
    """A row of a reaction that the host lacks: in the cytosol, or a carrier between it and the medium, unless said."""
    reaction = sheet.facts.reactions[slug]
    spaces = {space.slug: space for space in sheet.host.compartments if space.role != "membrane"}
    place = place or (sheet.medium if reaction.transport else sheet.cytosol)
    if place not in spaces or (reaction.transport and place == sheet.cytosol):
        accepted = ", ".join(space for space in spaces if not (reaction.transport and space == sheet.cytosol))
        raise InputError(f"{reaction.label} can't stand in {place!r}", read=place, accepted=accepted)
    outer, inner = (place, sheet.cytosol) if place == sheet.medium else (sheet.cytosol, place)
    where = "" if place in (sheet.cytosol, sheet.medium) else f", {spaces[place].label}"
    return HostReaction(
        slug=f"{slug}-brought-into-{place}" + ("" if direction == "forward" else f"-{direction}"),
        label=reaction.label + where + _direction_words(direction),
        reaction=slug,
        direction=direction,
        basis=reaction.basis,
        place="" if reaction.transport else place,
        outer=outer if reaction.transport else "",
        inner=inner if reaction.transport else "",
    )


def _turned(row: HostReaction) -> HostReaction:
    """The same row running the other way than the host uses it, as a row of its own."""
    direction = "forward" if row.direction == "reverse" else "reverse"
    label = row.label + _direction_words("reverse")
    return msgspec.structs.replace(row, slug=f"{row.slug}-turned", label=label, direction=direction, expression=())


def _direction_words(direction: str) -> str:
    return {"reverse": ", running in reverse", "both": ", running both ways"}.get(direction, "")


def _only_in(rows: Iterable[HostReaction], chosen: set[str]) -> set[str]:
    """Genes that occur in chosen rows and in no others: they are gone with them."""
    inside: set[str] = set()
    outside: set[str] = set()
    for row in rows:
        (inside if row.slug in chosen else outside).update(gene for iso in row.isozymes for gene in iso.genes)
    return inside - outside


def _sole_gene(phrase: Phrase, rows: Sequence[HostReaction]) -> None:
    """A limit on a gene must not bind what other isozymes of the same row carry."""
    assert phrase.entity is not None
    if phrase.entity.kind == "gene" and any(len(row.isozymes) > 1 for row in rows):
        labels = ", ".join(sorted({row.label for row in rows}))
        words = f"{phrase.entity.slug} is one of several isozymes"
        raise InputError(words, read=phrase.text, accepted=f"the enzyme as a whole: {labels}")


def _not_here(sheet: Sheet, catalysts: Catalysts, phrase: Phrase) -> InputError:
    assert phrase.entity is not None
    label = catalysts.label(phrase.entity)
    where = f" in the {_space(sheet, phrase.place)}" if phrase.place else ""
    reactions = set(catalysts.reactions(phrase.entity))
    reason = next((absence.reason for absence in sheet.host.absences if absence.reaction in reactions), "")
    hint = f"{reason}; {catalysts.own.command} lists what it has" if reason else f"{catalysts.own.command} lists all"
    return InputError(f"{sheet.host.label} has no {label}{where}", read=phrase.text, hint=hint)


def _space(sheet: Sheet, slug: str) -> str:
    return next((space.label for space in sheet.host.compartments if space.slug == slug), slugify(slug))
