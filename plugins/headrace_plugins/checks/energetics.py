"""Whether the refills of a case can run with the steps that they serve, and which concentrations would help."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from typing import Literal

from msgspec import Struct

from headrace.api import (
    AddedTable,
    Case,
    DrainRow,
    Drive,
    DriveSettings,
    DriveStep,
    Facts,
    Finding,
    InputError,
    RefillAnswer,
    TableColumn,
    driving_forces,
    options,
    quantity,
)
from headrace_plugins.refills.whole_network import EXAMPLE

ENERGY = "kJ/mol"
CONVENTION = (
    "25 C; transformed energies at the pH and ionic strength of each compartment (extended Debye-Hueckel, B 1.6); inorganic"
    " carbon counts as all its forms in water together, carbon dioxide as that less one water"
)


class Options(Struct, frozen=True, forbid_unknown_fields=True, rename="kebab"):
    """ph, ionic-strength: instead of the host's facts. lowest, highest: the range of what was not measured.

    concentrations: "measured" where there are any, or "assumed" for the range alone. target: driving force below which a
    caution is given.
    """

    ph: float | None = None
    ionic_strength: str = ""
    lowest: str = "1 umol/L"
    highest: str = "10 mmol/L"
    concentrations: Literal["measured", "assumed"] = "measured"
    target: str = "1 kJ/mol"


class Energetics:
    """Reaction energies and the max-min driving force over each refill and the steps it serves."""

    name = "energetics"
    summary = "Reaction energies of each refill and the steps it serves, their max-min driving force, and what would help."
    options = Options
    example = EXAMPLE

    def checks(
        self, case: Case, answers: Sequence[RefillAnswer], rows: Sequence[DrainRow], facts: Facts
    ) -> Iterable[Finding | AddedTable]:
        if not answers or answers[0].answer != "feasible":
            return
        chosen = options(self, case)
        found = driving_forces(facts, case, answers[0], rows, settings(chosen))
        yield _forces(facts, case, found)
        yield _steps(facts, case, found)
        yield from _findings(facts, case, found, float(quantity(chosen.target, "energy", "plugin.energetics.target")))


def settings(chosen: Options) -> DriveSettings:
    """The options as numbers. Raises InputError for a text that is no such quantity."""
    strength = chosen.ionic_strength and quantity(chosen.ionic_strength, "concentration", "plugin.energetics.ionic-strength")
    lowest = quantity(chosen.lowest, "concentration", "plugin.energetics.lowest")
    highest = quantity(chosen.highest, "concentration", "plugin.energetics.highest")
    if lowest > highest:
        raise InputError("the lowest concentration lies above the highest", key="plugin.energetics.lowest", read=chosen.lowest)
    if chosen.ph is not None and not 0 <= chosen.ph <= 14:
        raise InputError("no pH that can be computed with", key="plugin.energetics.ph", read=chosen.ph, accepted="0 to 14")
    usual = (float(lowest), float(highest))
    return DriveSettings(chosen.ph, float(strength) if strength else None, usual, chosen.concentrations == "measured")


def _forces(facts: Facts, case: Case, drives: Sequence[Drive]) -> AddedTable:
    columns = (
        TableColumn("refill", "slug", detail=True),
        TableColumn("label", "refill and the steps it serves"),
        TableColumn("force", "driving force", ENERGY, number=True),
        TableColumn("worst", "worst step"),
        TableColumn("ratio", "ratio that would help"),
        TableColumn("gain", "gain per tenfold", ENERGY, number=True),
        TableColumn("left_out", "left out", detail=True),
        TableColumn("recalled", "recalled energies of", detail=True),
        TableColumn("assumed", "assumed concentrations of", detail=True),
    )
    rows = tuple(_force(facts, case, drive) for drive in drives)
    note = f"The least -dG' that all steps can have at once (max-min driving force); above 0 all run forward. {CONVENTION}."
    return AddedTable("energetics", "Driving force", columns, rows, note=note, empty="No refill runs.")


def _force(facts: Facts, case: Case, drive: Drive) -> tuple[str | float | None, ...]:
    ratio, gain = _ratio(facts, drive)
    left_out = "; ".join(f"{case.rows[step.row].label} ({step.why})" for step in drive.steps if not step.counted)
    assumed = sorted({facts.compounds[name].label for (name, _), each in drive.ranges.items() if each.origin == "assumed"})
    recalled = ", ".join(facts.compounds[name].label for name in drive.recalled)
    worst = case.rows[drive.worst].label if drive.worst else ""
    return (drive.refill, case.rows[drive.row].label, drive.force, worst, ratio, gain, left_out, recalled, ", ".join(assumed))


def _ratio(facts: Facts, drive: Drive) -> tuple[str, float | None]:
    """The best concentration to raise over the best to lower, with the larger gain of the two."""
    up, down = drive.ratio
    if up is None and down is None:
        return "", None
    if up is not None and down is not None:
        return f"{facts.compounds[up.compound].label} over {facts.compounds[down.compound].label}", max(up.gain, down.gain)
    lever = up or down
    assert lever is not None
    return f"{'more' if lever.up else 'less'} {facts.compounds[lever.compound].label}", lever.gain


def _steps(facts: Facts, case: Case, drives: Sequence[Drive]) -> AddedTable:
    columns = (
        TableColumn("refill", "for", detail=True),
        TableColumn("row", "slug", detail=True),
        TableColumn("label", "step"),
        TableColumn("compartment", "in"),
        TableColumn("energy", "dG'0", ENERGY, number=True),
        TableColumn("force", "-dG' at best", ENERGY, number=True),
        TableColumn("weight", "limits", number=True),
        TableColumn("counted", "counted", detail=True),
        TableColumn("why", "why not", detail=True),
        TableColumn("recalled", "recalled energies of", detail=True),
        TableColumn("ph", "pH", number=True, detail=True),
        TableColumn("ionic_strength", "ionic strength", "mol/L", number=True, detail=True),
    )
    seen: set[tuple[str, str]] = set()
    rows = []
    for drive in drives:
        for step in drive.steps:
            if (drive.refill, step.row) not in seen:
                seen.add((drive.refill, step.row))
                rows.append(_step(facts, case, drive, step))
    note = "dG'0 in the direction in which the step runs. A weight above 0 marks the steps that hold the driving force down."
    return AddedTable(
        "reaction_energies", "Energies of the steps", columns, tuple(rows), note=note, empty="No refill runs.", detail=True
    )


def _step(facts: Facts, case: Case, drive: Drive, step: DriveStep) -> tuple[str | float | bool | None, ...]:
    at = drive.conditions.get(step.place)
    place = next((space.label for space in facts.hosts[case.host].compartments if space.slug == step.place), step.place)
    recalled = ", ".join(facts.compounds[name].label for name in step.energy.recalled)
    weight = step.weight if step.counted else None
    shown = (step.energy.value, step.force, weight, step.counted, step.why, recalled)
    conditions = (at.ph, at.ionic_strength) if at else (None, None)
    return (drive.refill, step.row, case.rows[step.row].label, place, *shown, *conditions)


def _findings(facts: Facts, case: Case, drives: Sequence[Drive], target: float) -> Iterator[Finding]:
    for drive in drives:
        label = case.rows[drive.row].label
        if drive.force is None:
            yield Finding("note", "energetics", drive.refill, f"no energy of {label} or of what it serves is known")
            continue
        names = ", ".join(facts.compounds[name].label for name in drive.recalled)
        recalled = f"; energies of {names} are recalled" if names else ""
        if drive.force < target:
            ratio, gain = _ratio(facts, drive)
            helps = f"; a higher ratio of {ratio} would help ({gain:.2g} {ENERGY} per tenfold)" if ratio and gain else ""
            words = f"{label} and the steps it serves share a driving force of only {drive.force:.2g} {ENERGY}"
            worst = f"; the worst is {case.rows[drive.worst].label}"
            yield Finding("caution", "energetics", drive.refill, words + worst + helps + recalled)
