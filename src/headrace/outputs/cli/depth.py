"""Options of `headrace refills` that ask a check plugin for more: each sets an option of `[plugin.NAME]` for this run."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import msgspec
import typer

from headrace.outputs import files

if TYPE_CHECKING:
    from headrace.run import Desk
    from headrace.values.answers import Result
    from headrace.values.case import Scenario

SHOWN = 20

AlternativesOption = Annotated[
    int,
    typer.Option(
        "--alternatives", metavar="[N]", min=0, help="All smallest sets of refills, the best N shown (20).", show_default=False
    ),
]
ChangesOption = Annotated[bool, typer.Option("--changes", help="Closed refills take part in the sets, by what opens them.")]
PricesOption = Annotated[bool, typer.Option("--prices", help="Shared pools, price of one more, need against yield, budgets.")]
DensityOption = Annotated[
    str, typer.Option("--density", metavar="TEXT", help='Oxygen and heat per litre, at "20 g/L" say.', show_default=False)
]
FiguresOption = Annotated[
    Path | None,
    typer.Option("--figures", metavar="DIR", help="Write the figures of --prices into this folder.", show_default=False),
]
CertifyOption = Annotated[bool, typer.Option("--certify", help="Prove the answer in exact fractions.")]


def asked(desk: Desk, scenario: Path, **wanted: dict[str, Any]) -> Path | Scenario:
    """The scenario with the options that were given for each plugin, over those that it states itself."""
    if not any(wanted.values()):
        return scenario
    found = desk.scenario(scenario)
    stated = found.raw.get("plugin", {})
    given = {name: {**stated.get(name, {}), **options} for name, options in wanted.items() if options}
    return msgspec.structs.replace(found, raw={**found.raw, "plugin": {**stated, **given}})


def wishes(
    alternatives: int, changes: bool, prices: bool, density: str, figures: Path | None, certify: bool
) -> dict[str, dict[str, Any]]:
    """Options per plugin; what was not asked for is left to the scenario."""
    sets = {"most": alternatives or SHOWN, **({"changes": True} if changes else {})} if alternatives or changes else {}
    competing = {"prices": True} if prices or figures else {}
    return {
        "alternatives": sets,
        "competition": {**competing, **({"density": density} if density else {})},
        "certificate": {"prove": True} if certify else {},
    }


def draw(desk: Desk, result: Result, folder: Path | None) -> None:
    """Write the figures of a result, where a folder is named."""
    if folder is not None:
        files.write(folder, desk.plugins.report(result, only=["competition"]))
