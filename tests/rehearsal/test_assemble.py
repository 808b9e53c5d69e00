import numpy as np
from meetings import meeting

from deliberate.rehearsal.assemble import assemble
from deliberate.scenario.values import Plan, Question, Stage

POINTS = [[2, 1, 0, 1], [0, 1, 3, 0], [5, 0, 0, 0], [1, 1, 1, 1]]


def assembled(plan=None, beliefs=(10, 20, None, 40), **kwargs):
    scenario = meeting(POINTS, beliefs, plan=plan, **kwargs)
    return assemble(scenario.variants[0], scenario.questions[0])


def heard_pairs(assembly, block):
    network = assembly.process.network
    heard = assembly.process.blocks[block].heard
    kept = slice(None) if heard is None else heard
    names = np.array(assembly.people)
    return set(zip(names[network.listener[kept]], names[network.source[kept]], strict=True))


ALL = {("a", "b"), ("a", "d"), ("b", "c"), ("c", "a"), ("d", "a"), ("d", "b"), ("d", "c")}


def test_people_arrows_and_own_weights_keep_their_order():
    assembly = assembled()
    assert assembly.people == ("a", "b", "c", "d")
    assert assembly.place == {"a": 0, "b": 1, "c": 2, "d": 3}
    network = assembly.process.network
    matrix = np.diag(network.own)
    matrix[network.listener, network.source] = network.weight
    assert matrix.tolist() == POINTS


def test_unknown_starts_are_the_middle_of_the_scale_and_are_listed():
    assembly = assembled(question=Question("q", "t", -10, 50))
    assert assembly.starts.tolist() == [10, 20, 20, 40]
    assert assembly.unknown_starts == ("c",)


def test_settings_let_the_right_arrows_count():
    stages = (
        Stage("All", 2),
        Stage("Tables", 3, "tables", "rescale", tables=(("a", "b"), ("c",))),
        Stage("Panel", 1, "panel", speakers=("c",)),
        Stage("Pairs", 1, "pairs", pairs=(("c", "a"), ("b", "d"))),
        Stage("Silence", 1, "silence"),
    )
    assembly = assembled(Plan(stages, "repeat"))
    assert assembly.process.repeat
    assert [block.rounds for block in assembly.process.blocks] == [2, 3, 1, 1, 1]
    assert [block.unheard for block in assembly.process.blocks] == ["own", "rescale", "own", "own", "own"]
    assert heard_pairs(assembly, 0) == ALL
    assert heard_pairs(assembly, 1) == {("a", "b")}
    assert heard_pairs(assembly, 2) == {("b", "c"), ("d", "c")}
    assert heard_pairs(assembly, 3) == {("c", "a"), ("d", "b")}
    assert heard_pairs(assembly, 4) == set()


def test_settings_without_anybody_let_nothing_count():
    assembly = assembled(Plan((Stage("T", 1, "tables"), Stage("P", 1, "panel"), Stage("2", 1, "pairs"))))
    assert [heard_pairs(assembly, block) for block in range(3)] == [set()] * 3


def test_stages_set_up_alike_share_their_mask():
    tables = (("a", "b"), ("c", "d"))
    stages = (Stage("One", 1, "tables", tables=tables), Stage("All", 1), Stage("Two", 2, "tables", tables=tables))
    blocks = assembled(Plan(stages)).process.blocks
    assert blocks[0].heard is blocks[2].heard


def test_presence_and_firmness_follow_the_people():
    assembly = assembled(people={"b": {"present": False}, "d": {"firmness": 0.25}})
    assert assembly.process.network.present.tolist() == [True, False, True, True]
    assert assembly.process.firmness.tolist() == [0, 0, 0, 0.25]


def test_nobody_at_all():
    assembly = assemble(meeting([], []).variants[0], Question("q", "t", 0, 1))
    assert assembly.people == ()
    assert assembly.starts.shape == (0,)
