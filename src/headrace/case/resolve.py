"""A scenario against the facts: names to slugs, units to internal ones, edits to rows, conditions to levels."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import msgspec
from msgspec import UNSET

from headrace import units
from headrace.case.catalysts import Catalysts
from headrace.case.energy import energy
from headrace.case.levels import Conditions, is_removed, levels
from headrace.case.measured import readings
from headrace.case.medium import Medium, medium
from headrace.case.model import Document
from headrace.case.outlets import Growth, demands, growth
from headrace.case.parts import parent, phases
from headrace.case.sheet import Sheet
from headrace.case.strain import Addition, Removal, additions, limits, removal
from headrace.case.uncertain import inputs
from headrace.errors import InputError
from headrace.values.case import Case, Demand, Level, Limit, Scenario
from headrace.values.changes import Change, Close, Reopen, Unrule
from headrace.values.facts import Facts, HostReaction


def resolve(scenario: Scenario, facts: Facts, *, opened: bool = False, changes: Sequence[Change] = ()) -> Case:
    """All that the network and the plugins need of a scenario, in internal units (see `headrace.values.case`).

    opened: every row that the host has is on, whatever its expression; removed ones stay removed and foreign ones come
    only if added. The scenario's own `expression = "open"` does the same. changes are applied in order on top.
    Raises InputError with file, line and key for a name that the facts do not know, for amounts that contradict each
    other or need a form, for a scenario without any absolute rate, and for a change that does not fit.
    """
    sheet = Sheet(scenario, msgspec.convert(scenario.raw, Document), facts)
    document = sheet.document
    parent(scenario), phases(scenario)  # what is wrong with how they are stated is said whatever the question
    opened = opened or document.aim.expression == "open"
    around = medium(sheet, changes)
    in_force = energy(sheet, around.oxygen_state)
    catalysts = Catalysts(facts, sheet.host)
    gone, extra = removal(sheet, catalysts), additions(sheet, catalysts, changes)
    rows = {row.slug: row for row in (*sheet.host.reactions, *(row for each in extra for row in each.new))}
    bounds = limits(sheet, rows.values(), around.oxygen_state, changes)
    found = _levels(sheet, around, gone, extra, rows, opened, changes)
    bounds = _reopened(bounds, changes)
    _close(found, bounds)
    asked, grown = demands(sheet, around, rows.values(), changes), growth(sheet, around, changes)
    _absolute(sheet, around, asked, grown)
    _borrowed(sheet)
    case = Case(
        title=scenario.title,
        host=sheet.host.slug,
        feeds=around.feeds,
        demands=asked,
        growth=grown.rate,
        growth_yield=grown.per_feed,
        oxygen=around.oxygen,
        oxygen_rate=around.oxygen_rate,
        rows=rows,
        levels=found,
        supplements=around.supplements,
        releases=around.releases,
        releases_stated=around.releases_stated,
        circumstances=around.circumstances,
        removed_genes=tuple(sorted(gone.genes)),
        removed_rows=tuple(sorted(slug for slug, level in found.items() if level.kind == "removed")),
        added=tuple(slug for slug, level in found.items() if level.kind == "added"),
        limits=bounds,
        opened=opened,
        energy=in_force.values,
        quantities=in_force.quantities,
        slack=_slack(document),
        plugin_options=document.plugin,
        findings=tuple(dict.fromkeys(sheet.findings)),
        source_text=scenario.text,
        path=scenario.path,
        measured=() if document.parent is not UNSET else readings(sheet),
    )
    return msgspec.structs.replace(case, uncertain=inputs(sheet, case))


def _levels(
    sheet: Sheet,
    around: Medium,
    gone: Removal,
    extra: tuple[Addition, ...],
    rows: dict[str, HostReaction],
    opened: bool,
    changes: Sequence[Change],
) -> dict[str, Level]:
    """Levels as expressed, then opened, then added, then as the changes say."""
    fed = frozenset(feed.compound for feed in around.feeds)
    under = Conditions(
        fed=fed,
        supplied=fed | {extra.compound for extra in around.supplements},
        oxygen=around.oxygen_state,
        circumstances=frozenset(around.circumstances),
        implied=_implied(sheet, gone),
        removed=gone.genes,
        unruled=_unruled(sheet, changes),
    )
    found = levels(sheet.host, rows.values(), under, gone.rows)
    _fitted(sheet, found)
    if opened:
        for row in sheet.host.reactions:
            level = found[row.slug]
            if level.level != "on" and level.kind != "removed":
                found[row.slug] = Level("on", "open", f"every gene is open ({level.reason})", level.rules)
    for addition in extra:
        _add(sheet, addition, found, rows)
    for change in changes:
        if isinstance(change, Reopen | Close):
            if change.row not in found:
                raise InputError(f"no row {change.row!r} in this case", read=change.row)
            is_open = isinstance(change, Reopen)
            found[change.row] = (
                Level("on", "open", f"reopened ({found[change.row].reason})")
                if is_open
                else Level("off", "removed", "closed")
            )
    return found


def _implied(sheet: Sheet, gone: Removal) -> frozenset[str]:
    """Circumstances brought about by an enzyme of which the host keeps no row."""
    found = set()
    for circumstance, enzyme in sheet.facts.implied.items():
        own = [row for row in sheet.host.reactions if sheet.facts.reactions[row.reaction].enzyme == enzyme]
        if own and all(row.slug in gone.rows or is_removed(row, gone.genes) for row in own):
            found.add(circumstance)
    return frozenset(found)


def _unruled(sheet: Sheet, changes: Sequence[Change]) -> frozenset[str]:
    known = {rule.slug for rule in sheet.host.expressions}
    named = [change.rule for change in changes if isinstance(change, Unrule)]
    for rule in named:
        if rule not in known:
            raise InputError(f"{sheet.host.label} has no expression rule {rule!r}", read=rule)
    return frozenset(named)


def _add(sheet: Sheet, addition: Addition, found: dict[str, Level], rows: dict[str, HostReaction]) -> None:
    """Turn an addition's rows on; what runs already is said to be there."""
    changed = False
    for slug in addition.rows:
        before = found[slug]
        if before.level == "on":
            continue
        changed = True
        found[slug] = Level("on", "added", f"added: {addition.text} ({before.reason})")
        if before.kind == "removed":
            message = f"{rows[slug].label} is removed and added again: the addition counts"
            sheet.say("note", "removed-and-added", slug, message)
    for row in addition.new:
        changed = True
        found[row.slug] = Level("on", "added", f"added: {addition.text}")
    if not changed:
        label = ", ".join(sorted({rows[slug].label for slug in addition.rows}))
        sheet.say("note", "already-present", addition.rows[0], f"{addition.text}: {label} is present and on already")


def _fitted(sheet: Sheet, found: dict[str, Level]) -> None:
    for slug in sorted(slug for slug, level in found.items() if level.fitted):
        message = f"{slug} is {found[slug].level} by a rule that was fitted to a deletion ({found[slug].reason})"
        sheet.say("note", "fitted-rule", slug, f"{message}: what rests on it is no prediction")


def _reopened(bounds: Iterable[Limit], changes: Sequence[Change]) -> tuple[Limit, ...]:
    """A limit of zero does not bind a reopened row."""
    rows = {change.row for change in changes if isinstance(change, Reopen)}
    return tuple(limit for limit in bounds if limit.rate or rows.isdisjoint(limit.rows))


def _close(found: dict[str, Level], bounds: Iterable[Limit]) -> None:
    for limit in bounds:
        for slug in limit.rows:
            if not limit.rate and found[slug].level != "off":
                found[slug] = Level("off", "no-capacity", f"the limit of {limit.label} is 0")


def _absolute(sheet: Sheet, around: Medium, asked: tuple[Demand, ...], grown: Growth) -> None:
    """At least one rate must be absolute, or every answer could be scaled at will."""
    rates = [feed.uptake for feed in around.feeds] + [demand.rate for demand in asked] + [grown.rate]
    if not any(rates):
        with sheet.at("feed"):
            raise InputError(
                "no absolute rate is stated, so that nothing has a size",
                accepted="an uptake, an outlet's rate or a growth rate above 0",
            )


def _borrowed(sheet: Sheet) -> None:
    """Say whose composition growth uses, and how much of it is only recalled."""
    host = sheet.host
    if host.composition_borrowed_from:
        lender = sheet.facts.hosts.get(host.composition_borrowed_from)
        words = f"the biomass composition of {host.label} is borrowed from {lender.label if lender else 'another host'}"
        note = f": {host.composition_note}" if host.composition_note else ""
        sheet.say("caution", "borrowed-composition", host.slug, words + note, host.basis)
    recalled = [part for part in host.composition if part.basis.reading == "recalled"]
    if recalled:
        message = f"{len(recalled)} of {len(host.composition)} entries of the biomass composition are recalled"
        sources = {slug for part in recalled for slug in part.basis.sources}
        basis = msgspec.structs.replace(recalled[0].basis, sources=tuple(sorted(sources)))
        sheet.say("note", "recalled-input", host.slug, message, basis)


def _slack(document: Document) -> float:
    stated = document.aim.slack
    return 0.0 if stated is UNSET else float(units.read(stated, units.SHARE).value / 100)
