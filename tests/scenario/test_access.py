"""Looking things up, and being told what is not there."""

from __future__ import annotations

import pytest
from harbour import AS_IT_STANDS, HARBOUR, LEVY, MIXED, NOOR

from deliberate.errors import DeliberateError
from deliberate.scenario import access

VARIANT = HARBOUR.variants[0]


def test_things_are_found_by_name_and_id() -> None:
    assert access.variant_named(HARBOUR, MIXED) is HARBOUR.variants[1]
    assert access.question_with_id(HARBOUR, "levy") is LEVY
    assert access.person_with_id(VARIANT, "noor") is NOOR
    assert access.stage_at(HARBOUR.variants[1], 1).name == "Panel"
    assert access.people_anywhere(HARBOUR) == {"ines", "tomas", "noor", "wei"}


def test_arrows_are_found_by_listener() -> None:
    assert access.arrow_between(VARIANT, "ines", "tomas").weight == 20
    assert access.arrow_between(VARIANT, "wei", "ines") is None
    assert [arrow.source for arrow in access.arrows_of(VARIANT, "ines")] == ["tomas", "noor"]


@pytest.mark.parametrize(
    ("look", "said"),
    [
        (lambda: access.variant_named(HARBOUR, "Other"), 'there is no variant called "Other"'),
        (lambda: access.question_with_id(HARBOUR, "tax"), 'there is no question with the id "tax"'),
        (lambda: access.person_with_id(VARIANT, "jun"), f'there is nobody with the id "jun" in "{AS_IT_STANDS}"'),
        (lambda: access.stage_at(VARIANT, 1), "there is no stage 2: the plan has 1"),
        (lambda: access.stage_at(VARIANT, -1), "there is no stage 0"),
    ],
)
def test_what_is_not_there_is_said_in_words(look, said) -> None:
    with pytest.raises(DeliberateError, match=said):
        look()
