"""The largest yields of one outlet side by side, and what binds."""

from __future__ import annotations

from headrace.pages.context import Context, versions
from headrace.pages.model import Cell, Column, Notes, Page, Table
from headrace.pages.notes import findings
from headrace.pages.numbers import show
from headrace.pages.verdicts import ceiling as verdict
from headrace.values.answers import CeilingAnswer, Result

_UNITS = ("mol/mol", "g/g", "Cmol/Cmol")


def page(result: Result, headrace: str) -> Page:
    """The page of `headrace ceiling`."""
    context = Context(result)
    answer = answer_of(result)
    table = side_by_side(answer)
    binding = (Notes("What binds", answer.binding),) if answer.binding else ()
    return Page(
        title=f"{result.case.title or context.host.label}: largest yield of {context.name(answer.outlet)}",
        subject=context.subject(),
        verdict=verdict(context, answer),
        blocks=(table, *binding, *findings(context)),
        main=table,
        footnotes=context.footnotes(),
        cautions=context.cautions(),
        sources=tuple(context.used),
        versions=versions(result, headrace),
    )


def answer_of(result: Result) -> CeilingAnswer:
    """The result's answer, which must be a ceiling."""
    if not isinstance(result.answer, CeilingAnswer):
        raise TypeError(f"a result on {result.kind} has no ceiling to show")
    return result.answer


def side_by_side(answer: CeilingAnswer) -> Table:
    """Each ceiling in three units, lowest freedom first."""
    columns = (Column("ceiling"), *(Column(unit, number=True) for unit in _UNITS), Column("what it assumes"))
    given = (
        ("network, as expressed", answer.mol_per_mol, f"{_growing(answer)}; genes as the conditions express them"),
        ("network, open", answer.open_mol_per_mol, "every gene of the host in use"),
        ("electron balance", answer.electron_ceiling_mol_per_mol, "degree of reduction of feed over product"),
        ("carbon alone", answer.carbon_ceiling_mol_per_mol, "ATP and electrons free, no CO2 enters"),
        ("carbon alone, with CO2", answer.carbon_ceiling_with_co2_mol_per_mol, "ATP and electrons free, CO2 may enter"),
    )
    rows = tuple((name, *_in_units(answer, value), assumes) for name, value, assumes in given)
    return Table("ceilings", f"Largest yields of {answer.outlet} side by side", columns, rows, note=answer.co2_rule)


def _growing(answer: CeilingAnswer) -> str:
    return f"growth {show(answer.growth)} /h" if answer.growth else "no growth"


def _in_units(answer: CeilingAnswer, value: float | None) -> tuple[Cell, ...]:
    """A yield in mol/mol, g/g and Cmol/Cmol; the factors are those of the first row."""
    base = answer.mol_per_mol
    if value is None or not base:
        return (value, None, None)
    return (value, *(None if other is None else value * other / base for other in (answer.g_per_g, answer.cmol_per_cmol)))
