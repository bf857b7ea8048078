"""A scenario file to start from, made from the facts of a host and checked before it is given out."""

from __future__ import annotations

import json
from collections.abc import Iterable

from headrace import names
from headrace.errors import InputError
from headrace.run import Desk
from headrace.values.facts import Facts, Host, Outlet

_WIDTH = 40


def checked(desk: Desk, host: str, feed: str, outlet: str) -> str:
    """The text of a scenario that resolves. Raises InputError for a missing or unknown name, or a feed that can't enter."""
    facts = desk.facts
    given = {"--host": host, "--feed": feed, "--outlet": outlet}
    known = {
        "--host": sorted(facts.hosts),
        "--feed": ["a carbon source, such as the host's facts list (headrace facts show compounds)"],
        "--outlet": sorted(facts.outlets),
    }
    for option, value in given.items():
        if not value:
            raise InputError(f"{option} is missing", accepted=", ".join(known[option]))
    organism = facts.hosts[names.hosts(facts).find(host).slug]
    product = facts.outlets[names.outlets(facts).find(outlet).slug]
    substrate = facts.compounds[names.compounds(facts).find(feed).slug].label
    text = written(facts, organism, substrate, product)
    desk.case(text)
    return text


def written(facts: Facts, host: Host, substrate: str, outlet: Outlet) -> str:
    """The text, without a check."""
    lines = [
        f"title = {_text(f'{outlet.label} from {substrate}')}",
        _line(f"host = {_text(host.slug)}"),
        _line('growth = "0.1 /h"', 'or 0 for a resting phase; or a biomass yield such as "0.05 g/mmol"'),
        "",
        "[[feed]]",
        f"substrate = {_text(substrate)}",
        _line('# uptake = "6.0 mmol/gDW/h"', "left out: the least feed that serves"),
        "",
        "[conditions]",
        _line('oxygen = "aerobic"', "aerobic, limited (with oxygen-rate), anaerobic"),
        *_supplements(facts, host),
        *_releases(facts, host),
        "",
        "[strain]",
        _line("# remove = []", "gene symbols, enzymes or EC numbers"),
        _line("# add = []", "enzymes or reactions that the host lacks or does not express"),
        _line('# limit = { ENZYME = "2.0 mmol/gDW/h" }', 'or an activity such as "0.12 U/mg"'),
        "",
        "[[outlet]]",
        f"product = {_text(outlet.label)}",
        _line('rate = "1.0 mmol/gDW/h"', 'or yield = "0.3 mol/mol"; or productivity = "2 g/L/h" with biomass = "20 g/L"'),
        *_form(outlet),
    ]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def _supplements(facts: Facts, host: Host) -> Iterable[str]:
    needed = [facts.compounds[slug].label for slug in host.required_supplements]
    value = ", ".join(_text(label) for label in needed)
    note = "what it does not grow without" if needed else "vitamins, amino acids, acids of the cycle, besides the feed"
    yield _line(f"{'' if needed else '# '}supplements = [{value}]", note)


def _releases(facts: Facts, host: Host) -> Iterable[str]:
    usual = dict.fromkeys(facts.compounds[each.compound].label for each in host.releases)
    value = ", ".join(_text(label) for label in usual)
    yield _line(f"# release = [{value}]", "what may leave besides outlets; left out: the host's usual overflow")


def _form(outlet: Outlet) -> Iterable[str]:
    if len(outlet.forms) > 1:
        labels = [form.label for form in outlet.forms]
        yield _line(f"form = {_text(labels[0])}", f"one of: {', '.join(labels)}")


def _line(key: str, note: str = "") -> str:
    return f"{key:<{_WIDTH}} # {note}" if note else key


def _text(value: str) -> str:
    """A TOML basic string (JSON's escapes are a part of TOML's)."""
    return json.dumps(value, ensure_ascii=False)
