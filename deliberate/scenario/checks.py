"""What must hold between the parts of a meeting: the rules of the file that types alone cannot say."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from fractions import Fraction
from operator import attrgetter, eq

import msgspec
from msgspec import UNSET

from deliberate.errors import DeliberateError
from deliberate.scenario.shape import conform, key_path, listed, plain, refuse, shown
from deliberate.scenario.values import AgreementTest, Arrow, Ballot, Person, Poll, Question, Scenario, Stage, Variant

THRESHOLDS = ("more_than", "at_least", "at_most", "less_than")
AGREEMENT_KEYS = {
    "rand-ucla": (),
    "share-within": ("low", "high", "at_least"),
    "quartile-range": ("at_most",),
    "spread": ("at_most",),
}
RAND_UCLA_SCALE = (1, 9)
LEAST_WIDTH = 1e-290  # of a scale: what counts as equal on it, parts in 1e12, is then a full double still

_decoder = msgspec.json.Decoder(Scenario)
_encoder = msgspec.json.Encoder()


def validate(scenario: Scenario) -> Scenario:
    """Return `scenario` if it may stand in a file, else raise a DeliberateError with the place and the reason.

    The very same value comes back, so that histories share what an edit left alone; only what Python lets pass and
    a file would not tell apart (lists for tuples, numpy's numbers) comes back as a cleaned copy.
    """
    try:
        same = _decoder.decode(_encoder.encode(scenario)) == scenario
    except (msgspec.MsgspecError, TypeError, ValueError, RecursionError):
        same = False
    if not same:
        scenario = _rebuilt(scenario)
    check_references(scenario)
    return scenario


def _rebuilt(scenario: Scenario) -> Scenario:
    try:
        return conform(plain(scenario))
    except RecursionError:
        raise DeliberateError("holds itself") from None


def check_references(scenario: Scenario) -> None:
    """Raise a DeliberateError where parts that each have the right shape do not fit together."""
    _check_unique([question.id for question in scenario.questions], "questions[{}].id")
    for index, question in enumerate(scenario.questions):
        _check_question(question, f"questions[{index}]")
    questions = {question.id: question for question in scenario.questions}
    _check_unique([variant.name for variant in scenario.variants], "variants[{}].name")
    everybody: set[str] = set()
    for index, variant in enumerate(scenario.variants):
        everybody |= _check_variant(variant, questions, f"variants[{index}]")
    _check_ballot(scenario.ballot, everybody)
    for index, poll in enumerate(scenario.polls):
        _check_poll(poll, questions, everybody, f"polls[{index}]")


def _check_unique(names: list[str], where: str) -> None:
    if len(set(names)) == len(names):
        return
    first: dict[str, int] = {}
    for index, name in enumerate(names):
        if name in first:
            refuse(f"{shown(name)} is taken by {where.format(first[name])}", where.format(index))
        first[name] = index


def _check_question(question: Question, where: str) -> None:
    if not question.low < question.high:
        refuse(f"must be more than low ({shown(question.low)}), is {shown(question.high)}", f"{where}.high")
    if not math.isfinite(question.width):
        refuse("must lie closer to low: the width of the scale is outside double range", f"{where}.high")
    if question.width < LEAST_WIDTH:
        refuse("must lie further from low: parts of the scale are outside double range", f"{where}.high")
    if question.pass_mark is not None:
        _check_on_scale(question.pass_mark, question, f"{where}.pass_mark")
    for index, test in enumerate(question.agreement):
        _check_agreement(test, question, f"{where}.agreement[{index}]")


def _check_on_scale(value: float, question: Question, where: str) -> None:
    if not question.low <= value <= question.high:
        scale = f"from {shown(question.low)} to {shown(question.high)}"
        refuse(f"must lie on the scale of {shown(question.id)}, {scale}, is {shown(value)}", where)


def _check_agreement(test: AgreementTest, question: Question, where: str) -> None:
    takes = AGREEMENT_KEYS[test.test]
    for key in ("low", "high", "at_least", "at_most"):
        given = getattr(test, key) is not UNSET
        if given and key not in takes:
            refuse(
                f"does not belong to a {test.test} test, which takes {listed(takes or ['no figures'])}",
                f"{where}.{key}",
            )
        if key in takes and not given:
            refuse(f"is missing, a {test.test} test takes {listed(takes)}", f"{where}.{key}")
    if test.test == "rand-ucla" and (question.low, question.high) != RAND_UCLA_SCALE:
        scale = f"from {shown(question.low)} to {shown(question.high)}"
        refuse(f"a rand-ucla test needs a scale from 1 to 9, this one goes {scale}", f"{where}.test")
    if test.test == "share-within":
        _check_share(test.at_least, f"{where}.at_least")
        if test.low > test.high:
            refuse(f"must not be less than low ({shown(test.low)}), is {shown(test.high)}", f"{where}.high")


def _check_share(share: float | str, where: str) -> None:
    if isinstance(share, str) and Fraction(share) > 1:
        refuse(f"must be between 0 and 1, is {shown(share)}", where)


def _check_ballot(ballot: Ballot, everybody: set[str]) -> None:
    if ballot.quorum is not None:
        _check_share(ballot.quorum, "ballot.quorum")
    if ballot.casting_vote is not None and ballot.casting_vote not in everybody:
        refuse(f"{shown(ballot.casting_vote)} is not the id of a person in any variant", "ballot.casting_vote")
    for index, test in enumerate(ballot.tests):
        where = f"ballot.tests[{index}]"
        given = [key for key in THRESHOLDS if getattr(test, key) is not UNSET]
        if len(given) != 1:
            found = f"has {listed(given)}" if given else "has none"
            refuse(f"must have exactly one of {listed(THRESHOLDS, 'or')}, {found}", where)
        _check_share(getattr(test, given[0]), f"{where}.{given[0]}")


def _check_variant(variant: Variant, questions: Mapping[str, Question], where: str) -> set[str]:
    """Check a variant and return the ids of its people."""
    _check_unique([person.id for person in variant.people], f"{where}.people[{{}}].id")
    _check_people(variant.people, questions, f"{where}.people")
    ids = {person.id for person in variant.people}
    _check_arrows(variant.arrows, ids, f"{where}.arrows")
    for index, stage in enumerate(variant.plan.stages):
        _check_stage(stage, ids, f"{where}.plan.stages[{index}]")
    return ids


def _check_people(people: Iterable[Person], questions: Mapping[str, Question], where: str) -> None:
    for index, person in enumerate(people):
        for key, belief in person.beliefs.items():
            question = questions.get(key)
            if question is None or not question.low <= belief <= question.high:
                _check_belief(key, belief, questions, f"{where}[{index}].beliefs")
        for key in person.margins:
            if key not in questions:
                _refuse_question(key, questions, key_path(f"{where}[{index}].margins", key))


def _check_belief(key: str, belief: float, questions: Mapping[str, Question], where: str) -> None:
    if key not in questions:
        _refuse_question(key, questions, key_path(where, key))
    _check_on_scale(belief, questions[key], key_path(where, key))


def _refuse_question(key: str, questions: Mapping[str, Question], where: str) -> None:
    known = [shown(question) for question in list(questions)[:5]]
    known += ["…"] if len(questions) > len(known) else []
    refuse(f"{shown(key)} is not the id of a question; known: {', '.join(known)}", where)


def _check_arrows(arrows: tuple[Arrow, ...], ids: set[str], where: str) -> None:
    """Look at all arrows at once, and one by one only when something is wrong: there may be a million."""
    pairs = set(map(attrgetter("listener", "source"), arrows))
    listeners = set(map(attrgetter("listener"), arrows))
    sources = set(map(attrgetter("source"), arrows))
    self_heard = any(map(eq, map(attrgetter("listener"), arrows), map(attrgetter("source"), arrows)))
    if len(pairs) == len(arrows) and listeners <= ids and sources <= ids and not self_heard:
        return
    first: dict[tuple[str, str], int] = {}
    for index, arrow in enumerate(arrows):
        place = f"{where}[{index}]"
        _check_known(arrow.listener, ids, f"{place}.listener")
        _check_known(arrow.source, ids, f"{place}.source")
        if arrow.listener == arrow.source:
            refuse("must be somebody else than the listener; the own view counts by own_weight", f"{place}.source")
        if (arrow.listener, arrow.source) in first:
            earlier = f"{where}[{first[arrow.listener, arrow.source]}]"
            refuse(f"{shown(arrow.listener)} already listens to {shown(arrow.source)} in {earlier}", place)
        first[arrow.listener, arrow.source] = index


def _check_known(person: str, ids: set[str], where: str) -> None:
    if person not in ids:
        refuse(f"{shown(person)} is not the id of a person in this variant", where)


def _check_stage(stage: Stage, ids: set[str], where: str) -> None:
    seats = (
        (person, f"{where}.tables[{t}][{s}]")
        for t, table in enumerate(stage.tables)
        for s, person in enumerate(table)
    )
    _check_once(seats, ids, "already sits at {}")
    _check_once(((person, f"{where}.speakers[{i}]") for i, person in enumerate(stage.speakers)), ids, "is already {}")
    met: dict[frozenset[str], str] = {}
    for index, pair in enumerate(stage.pairs):
        place = f"{where}.pairs[{index}]"
        for seat, person in enumerate(pair):
            _check_known(person, ids, f"{place}[{seat}]")
        if pair[0] == pair[1]:
            refuse(f"must be two people, is {shown(pair[0])} twice", place)
        if frozenset(pair) in met:
            refuse(f"{shown(pair[0])} and {shown(pair[1])} are already {met[frozenset(pair)]}", place)
        met[frozenset(pair)] = place


def _check_once(named: Iterable[tuple[str, str]], ids: set[str], taken: str) -> None:
    """Check (person, place) pairs: everybody known, and nobody named twice."""
    first: dict[str, str] = {}
    for person, place in named:
        _check_known(person, ids, place)
        if person in first:
            refuse(f"{shown(person)} {taken.format(first[person])}", place)
        first[person] = place


def _check_poll(poll: Poll, questions: Mapping[str, Question], everybody: set[str], where: str) -> None:
    if poll.question not in questions:
        _refuse_question(poll.question, questions, f"{where}.question")
    for person, belief in poll.beliefs.items():
        place = key_path(f"{where}.beliefs", person)
        if person not in everybody:
            refuse(f"{shown(person)} is not the id of a person in any variant", place)
        _check_on_scale(belief, questions[poll.question], place)
