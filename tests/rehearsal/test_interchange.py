import math

import networkx as nx
import numpy as np
import pytest
from hypothesis import given
from meetings import meeting, meetings
from msgspec.structs import replace

import deliberate
from deliberate.errors import DeliberateError
from deliberate.rehearsal.interchange import from_networkx, to_networkx
from deliberate.scenario.values import Arrow, Ballot, Person, Poll, Question, Scenario, Variant


def only_arrows_sorted(scenario):
    (variant,) = scenario.variants
    place = {person.id: at for at, person in enumerate(variant.people)}
    arrows = sorted(variant.arrows, key=lambda arrow: place[arrow.listener])
    return replace(scenario, variants=(replace(variant, arrows=tuple(arrows)),))


@given(meetings())
def test_there_and_back_is_exact(scenario):
    assert from_networkx(to_networkx(scenario)) == only_arrows_sorted(scenario)


def test_edges_run_from_listener_to_source_with_everything_on_them():
    question = Question("levy", "Raise it?", 0, 10, unit="euros", pass_mark=5)
    people = (
        Person(
            "ines", name="Inês", role="chair", x=1.0, y=2.0, own_weight=3, beliefs={"levy": 7}, margins={"levy": 1}
        ),
        Person("tomas"),
    )
    variant = Variant("v", people, "some notes", (Arrow("ines", "tomas", 2, "stated"),))
    scenario = Scenario("Harbour", (question,), (variant,), notes="more", polls=(Poll("levy", 1, {"ines": 6}),))
    graph = to_networkx(scenario)
    assert list(graph.edges(data=True)) == [("ines", "tomas", {"weight": 2, "basis": "stated"})]
    assert graph.nodes["ines"]["name"] == "Inês"
    assert graph.nodes["ines"]["beliefs"] == {"levy": 7}
    assert "name" not in graph.nodes["tomas"]
    assert graph.graph["title"] == "Harbour"
    assert from_networkx(graph) == scenario


def test_one_variant_is_taken_and_who_is_only_in_others_is_forgotten():
    first, second = Variant("one", (Person("a"),)), Variant("two", (Person("b"),))
    question = Question("q", "t", 0, 1)
    scenario = Scenario(
        "T", (question,), (first, second), ballot=Ballot(casting_vote="a"), polls=(Poll("q", 1, {"a": 1}),)
    )
    back = from_networkx(to_networkx(scenario, "two"))
    assert back.variants == (second,)
    assert back.ballot.casting_vote is None
    assert back.polls == ()
    assert from_networkx(to_networkx(scenario)).polls == scenario.polls
    with pytest.raises(DeliberateError, match='there is no "three"; the variants are "one" and "two"'):
        to_networkx(scenario, "three")


def test_a_random_walk_on_an_undirected_graph_visits_by_degree():
    """With equal points to every neighbour influence is degree / total (exact theorem). Zachary's karate club has 78
    edges: 17/156 for member 33, 16/156 for member 0."""
    club = nx.karate_club_graph()
    nx.set_edge_attributes(club, 1.0, "weight")
    rehearsal = deliberate.rehearse(from_networkx(club))
    influence = dict(zip(rehearsal.people, rehearsal.influence, strict=True))
    assert influence["33"] == pytest.approx(17 / 156, rel=1e-12)
    assert influence["0"] == pytest.approx(16 / 156, rel=1e-12)


def test_florentine_families():
    """Random walk on an undirected graph: Medici 6/40 (data set inside networkx)."""
    rehearsal = deliberate.rehearse(from_networkx(nx.florentine_families_graph()))
    influence = dict(zip(rehearsal.people, rehearsal.influence, strict=True))
    assert influence["Medici"] == pytest.approx(6 / 40, rel=1e-12)


def test_zero_weights_are_dropped_and_loops_become_own_weight():
    graph = nx.DiGraph()
    graph.add_edge("a", "b", weight=0)
    graph.add_edge("b", "a")
    graph.add_edge("a", "a", weight=4)
    (variant,) = from_networkx(graph).variants
    assert [(arrow.listener, arrow.source, arrow.weight) for arrow in variant.arrows] == [("b", "a", 1)]
    assert [person.own_weight for person in variant.people] == [4, 0]


def test_parallel_edges_add_up_as_in_networkx_matrices():
    graph = nx.MultiDiGraph([("a", "b", {"weight": 2}), ("a", "b", {"weight": 0.5}), ("b", "b", {}), ("b", "b", {})])
    (variant,) = from_networkx(graph).variants
    (arrow,) = variant.arrows
    matrix = nx.to_numpy_array(graph)
    assert arrow.weight == matrix[0, 1] == 2.5
    assert variant.people[1].own_weight == matrix[1, 1] == 2


def test_nodes_of_any_kind_get_ids_and_keep_their_text_as_name():
    graph = nx.DiGraph([(1, "1"), ("Zoë Łuk", (2, 3)), ("x" * 300, ""), ("fine-id.2", "two\n\x07lines")])
    people = from_networkx(graph).variants[0].people
    assert len({person.id for person in people}) == 8
    by_id = {person.id: person for person in people}
    assert by_id["1"].shown_name == "1"
    assert by_id["zoe-luk"].name == "Zoë Łuk"
    assert by_id["fine-id.2"].shown_name == "fine-id.2"
    assert by_id["two-lines"].name == "two lines"


def test_a_belief_on_the_only_question():
    graph = nx.DiGraph()
    graph.add_node("a", belief=np.float64(30))
    graph.add_node("b", club="irrelevant")
    scenario = from_networkx(graph, "Title", Question("q", "How many?", 0, 100))
    assert scenario.title == "Title"
    assert dict(scenario.variants[0].people[0].beliefs) == {"q": 30}
    assert scenario.questions[0].text == "How many?"
    assert from_networkx(graph.subgraph(["b"]), question="Really?").questions[0].text == "Really?"


@pytest.mark.parametrize("weight", [-1, math.nan, math.inf, "heavy", None, 1j])
def test_impossible_weights_are_refused_with_their_place(weight):
    graph = nx.DiGraph([("a", "b", {"weight": weight})])
    with pytest.raises(DeliberateError, match="finite number from 0") as caught:
        from_networkx(graph)
    assert caught.value.where == "edge a -> b"


def test_what_a_scenario_cannot_hold_is_refused_with_its_place():
    graph = nx.DiGraph()
    graph.add_node("a", belief=3)
    with pytest.raises(DeliberateError) as caught:
        from_networkx(graph)
    assert caught.value.where == "variants[0].people[0].beliefs.question"


def test_rehearsing_a_graph_is_rehearsing_the_meeting():
    scenario = meeting([[1, 1, 0], [0, 1, 3], [2, 2, 1]], [0, 50, 100])
    back = from_networkx(to_networkx(scenario))
    assert np.array_equal(deliberate.rehearse(back).limit, deliberate.rehearse(scenario).limit)
