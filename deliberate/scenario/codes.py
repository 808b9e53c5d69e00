"""Codes instead of names: a meeting as it may be shown to a room, and the way back from edits made on it.

`coded` gives everybody a short code and leaves out what is written about them; `decoded` takes an edited coded
meeting back to names. Codes hide names from onlookers. They do not make a meeting anonymous: who knows the group
will often recognise people by what they think.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

from msgspec.structs import replace

from deliberate.errors import DeliberateError
from deliberate.scenario.values import Person, Plan, Question, Scenario, Stage, Variant

SOMEBODY = "[name]"  # where a word is part of several people's names
NO_CODES: Mapping[str, str] = MappingProxyType({})
_MOST_LETTERS = 200


@dataclass(frozen=True, eq=False)
class Coding:
    """A meeting with names (`real`), the same with codes (`shown`), and each person id's code."""

    real: Scenario
    shown: Scenario
    codes: Mapping[str, str]
    names: NameWords

    def text(self, text: str) -> str:
        """`text` with the names of this meeting's people replaced by their codes."""
        return self.names.replaced(text)

    def message(self, text: str) -> str:
        """`text` with the ids in quotes, which are often made from names, replaced by codes."""
        return re.sub(r'"([^"]*)"', lambda found: f'"{self.codes.get(found[1], found[1])}"', text)


def coded(scenario: Scenario, known: Mapping[str, str] = NO_CODES) -> Coding:
    """The meeting with a code for everybody: P1, P2 and so on, in the order of the lists.

    Codes in `known` (by person id) are kept and never given to anybody else, so that a code stands for one person
    as long as the meeting is open, whoever leaves or returns. Roles and notes are left out, since they may say who
    somebody is. In the title, the questions and the names of variants, stages and the ballot rule, people's names
    and the capitalised words they are made of are replaced.
    """
    codes = _codes(scenario, known)
    names = NameWords.of(scenario, codes)
    text = names.replaced
    taken: set[str] = set()
    variants = tuple(_coded_variant(variant, codes, names, taken) for variant in scenario.variants)
    shown = replace(
        scenario,
        title=text(scenario.title),
        notes="",
        questions=tuple(_coded_question(question, names) for question in scenario.questions),
        ballot=replace(scenario.ballot, name=text(scenario.ballot.name)),
        variants=variants,
    )
    return Coding(scenario, shown, MappingProxyType(codes), names)


def decoded(coding: Coding, changed: Scenario) -> Scenario:
    """`changed`, which is an edited `coding.shown`, with names, roles and notes as they are in `coding.real`.

    What the edit left alone is the same object as before; codes in new texts become names. Raises DeliberateError
    where the edit would put a text in place of one that codes hide.
    """
    return coding.real if changed is coding.shown else _Decoder(coding).scenario(changed)


@dataclass(frozen=True)
class NameWords:
    """What stands for whom in running text: full names, and the capitalised words they are made of."""

    codes: Mapping[str, str]
    pattern: re.Pattern[str] | None

    @classmethod
    def of(cls, scenario: Scenario, codes: Mapping[str, str]) -> NameWords:
        """The words of everybody in any variant."""
        by_name: dict[str, str] = {}
        by_word: dict[str, str] = {}
        for name, code in {(person.shown_name, codes[person.id]) for person in _everybody(scenario)}:
            for form in {name, name.upper()}:
                by_name[form] = code if by_name.get(form, code) == code else SOMEBODY
            for word in _words(name):
                by_word[word] = code if by_word.get(word, code) == code else SOMEBODY
        free = set(codes.values())  # a name that reads like a code gives nobody away
        words = {word: code for word, code in {**by_word, **by_name}.items() if word not in free}
        longest_first = sorted(words, key=lambda word: (-len(word), word))
        pattern = re.compile("|".join(_alone(word) for word in longest_first)) if words else None
        return cls(MappingProxyType(words), pattern)

    def replaced(self, text: str) -> str:
        """`text` with these words replaced."""
        if self.pattern is None:
            return text
        return self.pattern.sub(lambda found: self.codes[found.group()], text)[:_MOST_LETTERS]


def _words(name: str) -> Iterable[str]:
    """The words of a name that may stand for it: of two letters or more, not in lower case ("van", "the")."""
    for word in re.findall(r"[^\W\d_]+(?:['’-][^\W\d_]+)*", name):
        if len(word) > 1 and not word[0].islower():
            yield word


def _alone(word: str) -> str:
    """A pattern for `word` as a whole word. Scripts without capitals often write words without gaps: anywhere."""
    before = r"(?<!\w)" if word[0].lower() != word[0].upper() or word[0].isdigit() else ""
    after = r"(?!\w)" if word[-1].lower() != word[-1].upper() or word[-1].isdigit() else ""
    return f"{before}{re.escape(word)}{after}"


def _everybody(scenario: Scenario) -> Iterable[Person]:
    return (person for variant in scenario.variants for person in variant.people)


def _codes(scenario: Scenario, known: Mapping[str, str]) -> dict[str, str]:
    codes = dict(known)
    for person in _everybody(scenario):
        if person.id not in codes:
            codes[person.id] = f"P{len(codes) + 1}"
    return codes


def _coded_question(question: Question, names: NameWords) -> Question:
    text = names.replaced
    return replace(
        question,
        text=text(question.text),
        low_label=text(question.low_label),
        high_label=text(question.high_label),
    )


def _coded_variant(variant: Variant, codes: Mapping[str, str], names: NameWords, taken: set[str]) -> Variant:
    name = _fresh(names.replaced(variant.name), taken)
    taken.add(name)
    return replace(
        variant,
        name=name,
        notes="",
        people=tuple(replace(person, name=codes[person.id], role="") for person in variant.people),
        plan=replace(
            variant.plan,
            stages=tuple(replace(stage, name=names.replaced(stage.name)) for stage in variant.plan.stages),
        ),
    )


def _fresh(name: str, taken: set[str]) -> str:
    """`name`, with a number where another variant reads the same once names are gone."""
    fresh, number = name, 2
    while fresh in taken:
        fresh, number = f"{name[: _MOST_LETTERS - 6]} ({number})", number + 1
    return fresh


class _Decoder:
    """Takes one edited meeting back to names."""

    def __init__(self, coding: Coding) -> None:
        real, shown = coding.real, coding.shown
        self._coding = coding
        self._same: dict[int, Any] = {}  # by identity: what stands behind a value that the edit left alone
        self._texts: dict[str, str] = {}  # what stands behind a text with codes in it
        self._people: dict[str, Person] = {}
        self._names: dict[str, str] = {}
        self._note(real.title, shown.title)
        self._note(real.ballot.name, shown.ballot.name)
        self._same[id(shown.ballot)] = real.ballot
        for question, coded_one in zip(real.questions, shown.questions, strict=True):
            self._same[id(coded_one)] = question
            for before, after in zip(_texts_of(question), _texts_of(coded_one), strict=True):
                self._note(before, after)
        for variant, coded_variant in zip(real.variants, shown.variants, strict=True):
            self._note(variant.name, coded_variant.name)
            self._same[id(coded_variant)] = variant
            for stage, coded_stage in zip(variant.plan.stages, coded_variant.plan.stages, strict=True):
                self._same[id(coded_stage)] = stage
                self._note(stage.name, coded_stage.name)
            self._people |= {person.id: person for person in variant.people if person.id not in self._people}
        self._names = {coding.codes[one]: person.shown_name for one, person in self._people.items()}

    def scenario(self, changed: Scenario) -> Scenario:
        """All of it."""
        real = self._coding.real
        variants = changed.variants
        ballot = self._same.get(id(changed.ballot)) or replace(changed.ballot, name=self._text(changed.ballot.name))
        return replace(
            changed,
            title=self._text(changed.title),
            notes=_hidden(real.notes, changed.notes),
            questions=tuple(self._question(question) for question in changed.questions),
            ballot=ballot,
            variants=tuple(
                self._variant(variant, left) for variant, left in zip(variants, (None, *variants), strict=False)
            ),
        )

    def _note(self, real: str, shown: str) -> None:
        if real != shown:
            self._texts.setdefault(shown, real)

    def _text(self, text: str) -> str:
        """What stands behind a text; in a new one, codes stand for people."""
        named = self._texts.get(text) or self._named(text)
        return named if len(named) <= _MOST_LETTERS else text

    def _named(self, text: str) -> str:
        return re.sub(r"(?<!\w)P[0-9]+(?!\w)", lambda found: self._names.get(found.group(), found.group()), text)

    def _question(self, question: Question) -> Question:
        same: Question | None = self._same.get(id(question))
        if same is not None:
            return same
        return replace(
            question,
            text=self._text(question.text),
            low_label=self._text(question.low_label),
            high_label=self._text(question.high_label),
        )

    def _variant(self, variant: Variant, left: Variant | None) -> Variant:
        same: Variant | None = self._same.get(id(variant))
        if same is not None:
            return same
        before, shown = self._counterpart(variant, left)
        people = before.people if variant.people is shown.people else self._everybody(variant, before, shown)
        plan = before.plan if variant.plan is shown.plan else self._plan(variant.plan)
        known = shown.name == variant.name
        notes = _hidden(before.notes, variant.notes) if known or not variant.notes else self._named(variant.notes)
        return replace(variant, name=self._text(variant.name), notes=notes, people=people, plan=plan)

    def _counterpart(self, variant: Variant, left: Variant | None) -> tuple[Variant, Variant]:
        """The variant that this one was, or is a copy of, with names and with codes. A renamed one still has its
        parts; a copy stands right of its original (`left`)."""
        pairs = list(zip(self._coding.real.variants, self._coding.shown.variants, strict=True))
        for before, shown in pairs:
            if shown.name == variant.name:
                return before, shown
        for before, shown in pairs:
            if shown.people is variant.people or shown.plan is variant.plan:
                return before, shown
        for before, shown in pairs:
            if left is not None and shown.name == left.name:
                return before, shown
        empty = Variant(name=variant.name, people=())
        return empty, empty

    def _everybody(self, variant: Variant, before: Variant, shown: Variant) -> tuple[Person, ...]:
        same = {id(coded_one): person for coded_one, person in zip(shown.people, before.people, strict=True)}
        here = {person.id: person for person in before.people}
        return tuple(same.get(id(one)) or self._person(one, here) for one in variant.people)

    def _person(self, person: Person, here: Mapping[str, Person]) -> Person:
        known = here.get(person.id) or self._people.get(person.id)
        if known is None:
            return replace(person, name=self._text(person.shown_name))  # somebody new, with the name that was typed
        if person.name != self._coding.codes[person.id]:
            raise DeliberateError("names are hidden while codes are shown: show names to change one")
        return replace(person, name=known.name, role=_hidden(known.role, person.role))

    def _plan(self, plan: Plan) -> Plan:
        return replace(plan, stages=tuple(self._stage(stage) for stage in plan.stages))

    def _stage(self, stage: Stage) -> Stage:
        same: Stage | None = self._same.get(id(stage))
        return replace(stage, name=self._text(stage.name)) if same is None else same


def _texts_of(question: Question) -> tuple[str, str, str]:
    return question.text, question.low_label, question.high_label


def _hidden(real: str, shown: str) -> str:
    """A text that codes leave out stays; another one cannot be put in its place unseen."""
    if not shown:
        return real
    raise DeliberateError("roles and notes are hidden while codes are shown: show names to change them")
