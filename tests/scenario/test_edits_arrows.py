"""Edits on arrows."""

from __future__ import annotations

import pytest
from harbour import ARROWS, AS_IT_STANDS, HARBOUR, MIXED

from deliberate.errors import DeliberateError
from deliberate.scenario import edits
from deliberate.scenario.access import arrow_between
from deliberate.scenario.values import Arrow, Scenario


def arrows(scenario: Scenario) -> tuple[Arrow, ...]:
    return scenario.variants[0].arrows


def test_a_new_arrow_comes_last() -> None:
    after = edits.add_arrow(HARBOUR, "wei", "ines", 7, variant=AS_IT_STANDS, basis="stated")
    assert arrows(after) == (*ARROWS, Arrow("wei", "ines", 7.0, "stated"))
    assert arrows(after)[0] is ARROWS[0]
    assert after.variants[1] is HARBOUR.variants[1]


def test_adding_an_arrow_that_is_there_sets_its_weight() -> None:
    after = edits.add_arrow(HARBOUR, "ines", "tomas", 5, variant=AS_IT_STANDS)
    assert arrows(after) == (Arrow("ines", "tomas", 5.0, "stated"), *ARROWS[1:])
    assert edits.add_arrow(HARBOUR, "ines", "tomas", variant=AS_IT_STANDS) is HARBOUR


def test_without_a_weight_an_arrow_fits_the_listeners_points() -> None:
    variant = HARBOUR.variants[0]
    assert edits.usual_weight(variant, "ines") == 30  # the average of 20 and 40
    assert edits.usual_weight(HARBOUR.variants[1], "noor") == 1  # no sources, own weight 0
    assert edits.usual_weight(variant, "wei") == 1  # no sources, own weight 1
    after = edits.add_arrow(HARBOUR, "ines", "wei", variant=AS_IT_STANDS)
    assert arrow_between(after.variants[0], "ines", "wei") == Arrow("ines", "wei", 30.0, "guess")
    loud = edits.set_weight(HARBOUR, [("ines", "tomas"), ("ines", "noor")], 1.5e308, variant=AS_IT_STANDS)
    assert edits.usual_weight(loud.variants[0], "ines") == 1.5e308


def test_weights_and_bases_of_several_arrows() -> None:
    pairs = [("ines", "tomas"), ("noor", "wei")]
    after = edits.set_weight(HARBOUR, pairs, 8, variant=AS_IT_STANDS)
    assert [arrow.weight for arrow in arrows(after)] == [8, 40, 30, 10, 3, 8]
    assert [a is b for a, b in zip(arrows(after), ARROWS, strict=True)] == [False, True, True, True, True, False]
    after = edits.scale_weights(HARBOUR, pairs, 1.5, variant=AS_IT_STANDS)
    assert [arrow.weight for arrow in arrows(after)] == [30, 40, 30, 10, 3, 1.5]
    after = edits.set_basis(HARBOUR, pairs, "observed", variant=AS_IT_STANDS)
    assert [arrow.basis for arrow in arrows(after)] == ["observed", "guess", "observed", "guess", "guess", "observed"]


def test_arrows_turn_round_with_their_weight() -> None:
    after = edits.turn_arrows(HARBOUR, [("noor", "wei")], variant=AS_IT_STANDS)
    assert arrows(after) == (*ARROWS[:5], Arrow("wei", "noor", 1.0))


def test_two_arrows_between_the_same_two_trade_places() -> None:
    after = edits.turn_arrows(HARBOUR, [("ines", "tomas"), ("tomas", "ines")], variant=AS_IT_STANDS)
    assert arrow_between(after.variants[0], "tomas", "ines") == Arrow("tomas", "ines", 20.0, "stated")
    assert arrow_between(after.variants[0], "ines", "tomas") == Arrow("ines", "tomas", 30.0, "observed")


def test_an_arrow_does_not_turn_onto_another() -> None:
    with pytest.raises(DeliberateError, match="Tomás listens to Ines already: turn both arrows round, or remove one"):
        edits.turn_arrows(HARBOUR, [("ines", "tomas")], variant=AS_IT_STANDS)


def test_removing_arrows() -> None:
    after = edits.remove_arrows(HARBOUR, [("ines", "tomas"), ("tomas", "wei")], variant=AS_IT_STANDS)
    assert arrows(after) == (ARROWS[1], ARROWS[2], *ARROWS[4:])
    assert edits.remove_arrows(HARBOUR, [], variant=AS_IT_STANDS) is HARBOUR


@pytest.mark.parametrize(
    ("edit", "said"),
    [
        (lambda: edits.add_arrow(HARBOUR, "ines", "ines", variant=MIXED), "the own view counts by its own points"),
        (lambda: edits.add_arrow(HARBOUR, "ines", "wei", variant=MIXED), 'nobody with the id "wei"'),
        (lambda: edits.add_arrow(HARBOUR, "ines", "noor", 0, variant=MIXED), "must be more than 0, is 0; remove"),
        (lambda: edits.set_weight(HARBOUR, [("ines", "tomas")], -2, variant=MIXED), "must be at least 0, is -2"),
        (
            lambda: edits.scale_weights(HARBOUR, [("ines", "tomas")], 1e308, variant=MIXED),
            "must be a finite number, is Infinity",
        ),
        (lambda: edits.set_weight(HARBOUR, [("noor", "ines")], 2, variant=MIXED), "Noor does not listen to Ines"),
        (lambda: edits.remove_arrows(HARBOUR, [("noor", "ines")], variant=MIXED), "Noor does not listen to Ines"),
        (lambda: edits.turn_arrows(HARBOUR, [("noor", "ines")], variant=MIXED), "Noor does not listen to Ines"),
    ],
)
def test_what_cannot_be_done_is_said_in_words(edit, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        edit()
