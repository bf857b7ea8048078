"""Who made a run, when, from which facts and with which software (PROV-O)."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import UTC, datetime

from msgspec import Struct
from pyoxigraph import Literal, NamedNode

from headrace.graph import terms as facts_terms
from headrace.outputs.rdf import terms
from headrace.outputs.rdf.build import Graph
from headrace.values.answers import Result


class Occasion(Struct, frozen=True):
    """started, ended: when the question was worked on (UTC). software: version of Headrace. agent: an IRI or a name, as
    given by the user; "" leaves it out."""

    started: datetime
    ended: datetime
    software: str
    agent: str = ""


def describe(graph: Graph, result: Result, occasion: Occasion, scenario: str, used: Sequence[str]) -> None:
    """The run as an entity, the activity that made it, and what that used."""
    run, activity = graph.run, graph.node("activity", facts_terms.ACTIVITY, f"headrace {result.kind}")
    graph.add(run, facts_terms.TYPE, facts_terms.ENTITY)
    graph.add(run, facts_terms.GENERATED_BY, activity)
    graph.add(run, facts_terms.DERIVED_FROM, scenario)
    graph.add(run, terms.CREATED, _time(occasion.ended))
    graph.add(activity, terms.STARTED, _time(occasion.started))
    graph.add(activity, terms.ENDED, _time(occasion.ended))
    graph.add(activity, terms.USED, scenario)
    graph.add(run, terms.FACTS_VERSION, Literal(result.facts_version))
    graph.add(activity, terms.USED, terms.FACTS_VERSION_BASE + result.facts_version)
    for iri in used:
        graph.add(activity, terms.USED, iri)
    _software(graph, activity, result, occasion)


def _software(graph: Graph, activity: str, result: Result, occasion: Occasion) -> None:
    program = graph.node("software", terms.SOFTWARE_AGENT, f"headrace {occasion.software}")
    graph.add(program, facts_terms.VERSION, Literal(occasion.software))
    graph.add(activity, facts_terms.ASSOCIATED_WITH, program)
    for name in result.plugins:
        plugin = graph.node(f"plugin/{name}", terms.PLUGIN, name)
        graph.add(plugin, facts_terms.TYPE, terms.SOFTWARE_AGENT)
        graph.add(plugin, terms.NAME, Literal(name))
        graph.add(activity, facts_terms.ASSOCIATED_WITH, plugin)
    if occasion.agent:
        agent = occasion.agent if _is_iri(occasion.agent) else graph.node("agent", terms.AGENT, occasion.agent)
        graph.add(activity, facts_terms.ASSOCIATED_WITH, agent)
        graph.add(graph.run, terms.ATTRIBUTED_TO, agent)


def _is_iri(text: str) -> bool:
    if not text.startswith(("http://", "https://", "urn:", "mailto:")):
        return False
    try:
        NamedNode(text)
    except ValueError:
        return False
    return True


def _time(moment: datetime) -> Literal:
    text = moment.astimezone(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")
    return Literal(text, datatype=NamedNode(terms.DATE_TIME))
