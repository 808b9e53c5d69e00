"""A variant as a networkx graph and back: edges run from listener to source, as arrows do.

This is the only module of the rehearsal that imports networkx; nothing imports it until it is asked for.
"""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Hashable, Mapping
from typing import Any

import networkx as nx
from msgspec.structs import fields

from deliberate.errors import DeliberateError
from deliberate.rehearsal.choosing import pick_variant
from deliberate.scenario import edits
from deliberate.scenario.checks import validate
from deliberate.scenario.ids import fresh_id
from deliberate.scenario.shape import conform, plain
from deliberate.scenario.values import Person, Question, Scenario

UNTITLED = "Untitled meeting"
LONGEST_NAME = 200
_PERSON_KEYS = tuple(field.name for field in fields(Person) if field.name != "id")
_WHOLE_KEYS = ("title", "notes", "questions", "ballot", "polls")


def to_networkx(scenario: Scenario, variant: str | None = None) -> nx.DiGraph:
    """The variant of that name (the first one by default) as a graph with everything that belongs to it.

    Nodes are person ids with the person's fields, edges ``listener -> source`` carry `weight` and `basis`. The
    graph's own attributes hold the rest of the meeting (`title`, `notes`, `questions`, `ballot`, `polls`) and of
    the variant (`variant`, `variant_notes`, `plan`) as plain dicts and lists, so that `from_networkx` gives back
    a scenario with this one variant. Raises DeliberateError for an unknown variant.
    """
    chosen = pick_variant(scenario, variant)
    for other in scenario.variants:
        if other is not chosen:
            scenario = edits.remove_variant(scenario, other.name)
    graph = nx.DiGraph(
        **{key: plain(getattr(scenario, key)) for key in _WHOLE_KEYS},
        variant=chosen.name,
        variant_notes=chosen.notes,
        plan=plain(chosen.plan),
    )
    for person in chosen.people:
        attributes = plain(person)
        graph.add_node(attributes.pop("id"), **attributes)
    for arrow in chosen.arrows:
        graph.add_edge(arrow.listener, arrow.source, weight=arrow.weight, basis=arrow.basis)
    return graph


def from_networkx(graph: nx.Graph, title: str | None = None, question: Question | str | None = None) -> Scenario:
    """A scenario with one variant out of any networkx graph; an edge ``a -> b`` says that a hears b.

    - A graph made by `to_networkx` comes back as it was; arrows are in the order of their listeners.
    - `title` and `question` (a Question, or a text asked on a scale from 0 to 1) replace what the graph says.
    - Edges without a `weight` weigh 1, those of weight 0 are dropped, parallel ones add up as everywhere in
      networkx, and undirected ones run both ways. A self-loop is the person's own weight; without one and without
      an `own_weight` it is 0, so that the shares are those of the graph.
    - A node's `belief`, a single number, is the starting belief on the only question. Nodes that are no valid ids
      become ids that are, with the node's text as name. Other attributes are ignored.

    Raises DeliberateError for what a scenario cannot hold, such as negative weights.
    """
    questions = _questions(graph, question)
    ids = _ids(graph)
    whole = {key: graph.graph[key] for key in _WHOLE_KEYS if key in graph.graph}
    scenario = conform(
        plain(whole)
        | {
            "format": "deliberate-scenario",
            "version": 1,
            "title": title or whole.get("title") or str(graph.graph.get("name") or UNTITLED),
            "questions": questions,
            "variants": [_variant(graph, ids, questions)],
        }
    )
    validate(scenario)
    return scenario


def _questions(graph: nx.Graph, question: Question | str | None) -> list[Any]:
    if isinstance(question, Question):
        return [plain(question)]
    if question is None and "questions" in graph.graph:
        return plain(graph.graph["questions"])
    return [{"id": "question", "text": question or "The question", "low": 0.0, "high": 1.0}]


def _ids(graph: nx.Graph) -> dict[Hashable, str]:
    """An id for every node: its own text where that is one."""
    ids: dict[Hashable, str] = {}
    taken: set[str] = set()
    for node in graph:
        text = str(node)
        usable = (
            text not in taken and len(text) <= 64 and all(c.isascii() and (c.isalnum() or c in "_.-") for c in text)
        )
        ids[node] = text if text and usable else fresh_id(text, "person", taken)
        taken.add(ids[node])
    return ids


def _variant(graph: nx.Graph, ids: Mapping[Hashable, str], questions: list[Any]) -> dict[str, Any]:
    people, arrows = [], []
    for node, neighbours in graph.adj.items():
        own = None
        for source, edge in neighbours.items():
            weight = _weight(graph, node, source, edge)
            if source == node:
                own = weight
            elif weight > 0:
                arrow = {"listener": ids[node], "source": ids[source], "weight": weight}
                basis = None if graph.is_multigraph() else edge.get("basis")
                arrows.append(arrow if basis is None else arrow | {"basis": basis})
        people.append(_person(node, ids[node], graph.nodes[node], own, questions))
    variant = {"name": graph.graph.get("variant", "As it stands"), "people": people, "arrows": arrows}
    more = {"notes": graph.graph.get("variant_notes"), "plan": graph.graph.get("plan")}
    return plain(variant | {key: value for key, value in more.items() if value is not None})


def _weight(graph: nx.Graph, listener: Hashable, source: Hashable, edge: Mapping[Any, Any]) -> float:
    """The weight of an edge, or of parallel ones together."""
    given = [one.get("weight", 1.0) for one in (edge.values() if graph.is_multigraph() else [edge])]
    try:
        weight = math.fsum(given)
    except (TypeError, ValueError, OverflowError):
        weight = math.nan
    if not 0 <= weight < math.inf:
        raise DeliberateError(
            f"a weight must be a finite number from 0, is {given[0]!r}", f"edge {listener} -> {source}"
        )
    return weight


def _person(
    node: Hashable, id: str, attributes: Mapping[str, Any], own: float | None, questions: list[Any]
) -> dict[str, Any]:
    person: dict[str, Any] = {"own_weight": 0.0}
    name = _name(node)
    if name not in ("", id):
        person["name"] = name
    if "belief" in attributes and len(questions) == 1:
        person["beliefs"] = {questions[0]["id"]: attributes["belief"]}
    person |= {key: attributes[key] for key in _PERSON_KEYS if key in attributes}
    if own is not None:
        person["own_weight"] = own
    return {"id": id} | person


def _name(node: Hashable) -> str:
    """A node's text as one line without control characters, as long as a name may be."""
    words = " ".join(str(node).split())
    return "".join(letter for letter in words if unicodedata.category(letter) != "Cc")[:LONGEST_NAME]
