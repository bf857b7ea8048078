"""Answers in Python: results that become tables, RDF and notebook output, and the data as an rdflib dataset."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any

import msgspec

import headrace
from headrace import run
from headrace.errors import InputError
from headrace.values.answers import Result

if TYPE_CHECKING:
    import pandas
    import rdflib

_MAIN = {"drains": "drains", "refills": "refills"}


class Answered(Result, frozen=True):
    """A result with ways out: `to_frame`, `to_rdf`, `save`; a notebook shows it as tables."""

    def document(self, rates: bool = False) -> dict[str, Any]:
        """The answer as the plain data of its JSON, with exact fractions as text."""
        from headrace.outputs import jsonout  # importing headrace costs nothing until an answer is used

        found: dict[str, Any] = msgspec.json.decode(jsonout.text(jsonout.document(self, headrace.__version__, rates)))
        return found

    def to_frame(self, table: str = "") -> pandas.DataFrame:
        """One table of the answer; the columns are the JSON's keys, and `attrs["units"]` says their units.

        table: a JSON key that holds rows ("drains", "refills", "groups", "crossings", "feed", "findings" ..., also
        "rates"), by default the main one; a ceiling or a verdict on growth is a single row. Raises InputError for
        another key.
        """
        import pandas  # 400 ms that only tables should pay

        document = self.document(rates=table == "rates")
        rows = _rows(document, table or _MAIN.get(self.kind, ""))
        frame = pandas.DataFrame(rows)
        frame.attrs["units"] = document.get("units", {})
        return frame

    def to_rdf(self, rates: bool = False, agent: str = "") -> rdflib.Dataset:
        """The answer as a named graph in an rdflib dataset with bound prefixes, as `--save` writes it."""
        from headrace.graph.export import as_rdflib  # as above
        from headrace.outputs.rdf import provenance  # as above
        from headrace.outputs.rdf import run as runs  # as above

        now = datetime.now(UTC)
        occasion = provenance.Occasion(now, now, headrace.__version__, agent)
        return as_rdflib(runs.quads(self, runs.name_of(self, now), occasion, rates), union=True)

    def save(self, results: str | Path = ".headrace", rates: bool = False, agent: str = "") -> Path:
        """Save the answer as a run in a results folder and give its file."""
        from headrace.outputs.rdf import folder  # as above
        from headrace.outputs.rdf import run as runs  # as above

        return folder.save(Path(results), runs.make(self, datetime.now(UTC), rates, agent))

    def _repr_html_(self) -> str:
        """What a notebook shows: the same tables as the command."""
        from headrace.pages import answers, html  # as above

        return html.page(answers.page(self, headrace.__version__))


def answered(result: Result) -> Answered:
    """A result with ways out."""
    return Answered(**{name: getattr(result, name) for name in result.__struct_fields__})


def drains(question: run.Question) -> Answered:
    """What each outlet and growth take, per pool and in skeletons. question: a path, TOML or JSON text, a dict."""
    return answered(run.drains(question))


def refills(question: run.Question) -> Answered:
    """The ledger, the requirement of each refill, and why closed ones are closed."""
    return answered(run.refills(question))


def ceiling(question: run.Question, outlet: str = "", growth: float = 0.0) -> Answered:
    """Largest yields of one outlet of the scenario. growth in 1/h."""
    return answered(run.ceiling(question, outlet, growth))


def grows(question: run.Question) -> Answered:
    """Whether the strain grows on the medium, and if not, what is missing."""
    return answered(run.grows(question))


def graph(results: str | Path | None = None) -> rdflib.Dataset:
    """Facts, what follows from them and the saved answers of a folder (default: `.headrace` here, if there is one).

    An rdflib dataset with bound prefixes, whose default graph is the union of all graphs. Raises InputError for a folder
    that is not there or a file that is no run. Let rdflib evaluate queries of your own only: it fetches what a query names.
    """
    from headrace.graph.export import as_rdflib  # importing headrace costs nothing until it is used
    from headrace.outputs.rdf import facts, folder  # as above

    where = Path(results) if results is not None else Path(".headrace")
    if results is not None and not where.is_dir():
        raise InputError("no such folder of saved answers", file=where)
    saved = (quad for _, quads in folder.each(where) for quad in quads)
    return as_rdflib([*facts.quads(), *saved], union=True)


def _rows(document: dict[str, Any], table: str) -> list[dict[str, Any]]:
    if not table:
        return [{key: value for key, value in document.items() if not isinstance(value, dict) and key != "findings"}]
    known = [key for key, value in document.items() if isinstance(value, list) and (not value or isinstance(value[0], dict))]
    if table == "ledger":
        return list((document.get("ledger") or {}).get("rows", []))
    if table not in known:
        raise InputError(f"this answer has no table {table!r}", read=table, accepted=", ".join([*known, "ledger", "rates"]))
    return list(document[table])
