"""What stated activities cover, how much enzyme a design takes, and the fold change in expression that it needs."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from msgspec import Struct

from headrace.api import (
    AddedTable,
    Case,
    Facts,
    Finding,
    InputError,
    RefillAnswer,
    Sized,
    TableColumn,
    options,
    quantity,
    sized,
    sized_groups,
)
from headrace_plugins.refills.whole_network import EXAMPLE

RATE = "mmol/gDW/h"


class Options(Struct, frozen=True, forbid_unknown_fields=True, rename="kebab"):
    """saturation: share of its largest rate at which an enzyme works, instead of affinities and concentrations.

    target: cover below which a caution is given. protein-share: share of the cell's protein above which one is.
    """

    saturation: str = ""
    target: str = "1.2 fold"
    protein_share: str = "5 %"


class Capacity:
    """Capacity, cover, fold change and enzyme mass of the refills that a case uses."""

    name = "capacity"
    summary = "What stated activities cover, and the enzyme that a design takes from kinetics, with what is not known."
    options = Options
    example = EXAMPLE + '[strain]\nlimit = { pep-carboxylase = "0.12 U/mg" }\n'

    def checks(self, case: Case, answers: Sequence[RefillAnswer], facts: Facts) -> Iterable[Finding | AddedTable]:
        if not answers or answers[0].answer != "feasible":
            return
        chosen = options(self, case)
        saturation = _saturation(chosen)
        groups = sized_groups(answers[0], case)
        enzymes = sized(facts, case, answers[0], saturation)
        yield _table(groups, enzymes)
        yield from _short(groups, float(quantity(chosen.target, "factor", "plugin.capacity.target")))
        yield from _heavy(facts, enzymes, float(quantity(chosen.protein_share, "share", "plugin.capacity.protein-share")) / 100)
        yield from _missing(enzymes)


def _saturation(chosen: Options) -> float | None:
    key = "plugin.capacity.saturation"
    share = float(quantity(chosen.saturation, "share", key)) / 100 if chosen.saturation else None
    if share == 0:
        raise InputError("an enzyme at no saturation carries nothing", key=key, read=chosen.saturation)
    return share


def _table(groups: Sequence[Sized], enzymes: Sequence[Sized]) -> AddedTable:
    columns = (
        TableColumn("about", "slug", detail=True),
        TableColumn("label", "group or enzyme"),
        TableColumn("needed", "needed", RATE, number=True),
        TableColumn("capacity", "capacity", RATE, number=True),
        TableColumn("capacity_low", "capacity, low", RATE, number=True, detail=True),
        TableColumn("capacity_high", "capacity, high", RATE, number=True, detail=True),
        TableColumn("cover", "cover", number=True),
        TableColumn("fold", "fold change", number=True),
        TableColumn("enzyme_low", "enzyme, low", "mg/gDW", number=True),
        TableColumn("enzyme_high", "enzyme, high", "mg/gDW", number=True),
        TableColumn("protein_share_low", "of the protein, low", "%", number=True, detail=True),
        TableColumn("protein_share_high", "of the protein, high", "%", number=True, detail=True),
        TableColumn("saturation_low", "saturation, low", number=True, detail=True),
        TableColumn("saturation_high", "saturation, high", number=True, detail=True),
        TableColumn("bound", "enzyme is", detail=True),
        TableColumn("origin", "capacity from", detail=True),
        TableColumn("basis", "enzyme from", detail=True),
        TableColumn("missing", "not known"),
        TableColumn("recalled", "recalled", detail=True),
    )
    note = (
        "Fold change is what is needed over the capacity stated; enzyme goes from the best to the worst corner of what sources"
        " give. What is not known is not guessed."
    )
    rows = tuple(_row(each) for each in (*groups, *enzymes))
    return AddedTable("capacity", "Capacity and enzyme", columns, rows, note=note, empty="No refill runs.")


def _row(each: Sized) -> tuple[str | float | bool | None, ...]:
    mass, share, saturation = (span or (None, None) for span in (each.mass, each.share, each.saturation))
    percent = tuple(None if value is None else 100 * value for value in share)
    sizes = (each.needed, each.capacity, *each.capacity_span, each.cover, each.fold, *mass, *percent, *saturation)
    unknown = ", ".join(each.missing) or ("affinity: at least so much enzyme" if each.bound else "")
    return (each.about, each.label, *sizes, each.bound, each.origin, each.basis, unknown, each.recalled)


def _short(groups: Sequence[Sized], target: float) -> Iterator[Finding]:
    for group in groups:
        if group.cover is not None and group.cover < target:
            fold = target * group.needed / group.capacity if group.capacity else None
            change = f"; {fold:.3g}-fold as much would cover {target:g} times the need" if fold else ""
            words = f"{group.label} has a capacity of {group.capacity:.3g} for {group.needed:.3g} {RATE}{change}"
            yield Finding("stop" if group.cover < 1 else "caution", "capacity", group.about, words)


def _heavy(facts: Facts, enzymes: Sequence[Sized], limit: float) -> Iterator[Finding]:
    for each in enzymes:
        if each.share is not None and each.share[1] > limit:
            words = f"{each.label} takes {100 * each.share[0]:.2g} to {100 * each.share[1]:.2g} % of the cell's protein"
            doubt = " (from constants that are partly recalled)" if each.recalled else ""
            yield Finding("caution", "enzyme-mass", each.about, words + doubt, _cited(facts, each))


def _missing(enzymes: Sequence[Sized]) -> Iterator[Finding]:
    for each in enzymes:
        if each.missing and each.capacity is None:
            what = " and no ".join(each.missing)
            words = f"no capacity is stated, and of {each.label} no {what} is known in this host, so its cover is not known"
            yield Finding("note", "kinetics", each.about, f"{words}; measure its activity and state it under [strain] limit")


def _cited(facts: Facts, each: Sized) -> str:
    return "; ".join(facts.sources[slug].text for slug in each.sources if slug in facts.sources)
