"""The third page: the body's own rule, in words and in its parts."""

from __future__ import annotations

from collections.abc import Callable

from msgspec import UNSET
from msgspec.structs import replace
from PySide6.QtCore import Signal
from PySide6.QtWidgets import QCheckBox, QHBoxLayout, QVBoxLayout, QWidget

from deliberate.rehearsal.words import shown_names
from deliberate.scenario import edits
from deliberate.scenario.rules import READY_RULES, SIDES, THRESHOLDS, ready_rule_of, rule_in_words
from deliberate.scenario.values import Ballot, BallotTest
from deliberate.window.session import Session
from deliberate.window.sidebar.fields import Choice, LineField
from deliberate.window.sidebar.numbers import share_text, typed_share
from deliberate.window.sidebar.page import Page, label_for, small_button
from deliberate.window.text import plain_label

OWN_RULE = "A rule of its own"
OF_WHAT = {  # as short as a narrow bar needs them; the rule in words says them in full
    ("ballots", "cast"): "of the votes cast",
    ("people", "cast"): "of those voting for or against",
    ("ballots", "present"): "of the votes of those present",
    ("people", "present"): "of those present with a vote",
    ("ballots", "eligible"): "of all votes, absent included",
    ("people", "eligible"): "of all voters, absent included",
}
NEW_TEST = BallotTest(side="against", at_most="1/4")
NO_MARK = "The question shown has no pass mark, so there is no vote on it: set one on the page Question."
NO_OBJECTIONS = "The question shown has no objection mark, so nobody objects to it: set one on the page Question."


class BallotPage(Page):
    """The rule holds for all questions and variants of the meeting."""

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(session, "Ballot", parent)
        self.words = plain_label(self.body)
        self.words.setAccessibleName("The rule in words")
        self.hint = plain_label(self.body, muted=True)
        self.column.addWidget(self.words)
        self.column.addWidget(self.hint)
        self._add_choice()
        self.add_heading("Conditions")
        self.conditions = QVBoxLayout()
        self.conditions.setSpacing(8)
        self.column.addLayout(self.conditions)
        self.rows: list[ConditionRow] = []
        self.add = small_button("Add a condition", "Add a condition that must hold as well", self.body)
        foot = QHBoxLayout()
        foot.addWidget(self.add)
        foot.addStretch(1)
        self.column.addLayout(foot)
        self._add_meeting_of_voters()
        self.column.addStretch(1)
        self.add.clicked.connect(self._append)

    def _add_choice(self) -> None:
        grid = self.add_grid()
        options = [(rule.name, rule.name) for rule in READY_RULES]
        self.ready = Choice("Rule", self.body, [*options, (OWN_RULE, None)])
        self.ready.setMaxVisibleItems(len(options) + 1)
        self.name = LineField("Name of the rule", self.body)
        self.wording = plain_label(self.body, muted=True)
        for row, (text, field) in enumerate((("&Rule", self.ready), ("&Name", self.name))):
            grid.addWidget(label_for(field, text, self.body), row, 0)
            grid.addWidget(field, row, 1)
        grid.setColumnStretch(1, 1)
        self.column.addWidget(self.wording)
        self.ready.chosen.connect(self._use_ready)
        self.name.given.connect(lambda text: self._change("Rename the rule", name=text))

    def _add_meeting_of_voters(self) -> None:
        self.add_heading("Quorum and ties")
        grid = self.add_grid()
        self.quorum_box = QCheckBox("Qu&orum", self.body)
        self.quorum = LineField(
            "Quorum", self.body, meaning="The share of those with a vote who must be present: 1/2, or 30 %"
        )
        self.casting = Choice("Whose vote decides a tie", self.body)
        grid.addWidget(self.quorum_box, 0, 0)
        grid.addWidget(self.quorum, 0, 1)
        grid.addWidget(label_for(self.casting, "T&ie decided by", self.body), 1, 0)
        grid.addWidget(self.casting, 1, 1)
        grid.setColumnStretch(1, 1)
        self.quorum_box.clicked.connect(self._switch_quorum)
        self.quorum.given.connect(self._set_quorum)
        self.casting.chosen.connect(self._set_casting)

    def read(self) -> None:
        scenario, question = self.session.scenario, self.session.question
        ballot = scenario.ballot
        names = {person.id: person.shown_name for variant in scenario.variants for person in variant.people}
        names |= shown_names(self.session.variant)
        self.words.setText(rule_in_words(ballot, names))
        objecting = any(test.side == "objecting" for test in ballot.tests)
        hints = [NO_MARK] if question.pass_mark is None else []
        hints += [NO_OBJECTIONS] if objecting and question.objection_mark is None else []
        self.hint.setText("\n".join(hints))
        self.hint.setVisible(bool(hints))
        ready = ready_rule_of(ballot)
        self.ready.show_value(None if ready is None else ready.name)
        self.wording.setText("" if ready is None else ready.wording)
        self.wording.setVisible(ready is not None)
        self.name.show_text(ballot.name)
        self._read_conditions(ballot)
        self.quorum_box.setChecked(ballot.quorum is not None)
        self.quorum.setEnabled(ballot.quorum is not None)
        self.quorum.show_text("" if ballot.quorum is None else share_text(ballot.quorum))
        self.casting.set_options([("nobody", None), *((name, one) for one, name in names.items())])
        self.casting.show_value(ballot.casting_vote)

    def _read_conditions(self, ballot: Ballot) -> None:
        while len(self.rows) > len(ballot.tests):
            row = self.rows.pop()
            row.hide()
            row.deleteLater()
        while len(self.rows) < len(ballot.tests):
            row = ConditionRow(len(self.rows), self.body)
            row.changed.connect(self._set)
            row.removal_wanted.connect(self._remove)
            self.conditions.addWidget(row)
            self.rows.append(row)
        for row, test in zip(self.rows, ballot.tests, strict=True):
            row.read(test, last=len(ballot.tests) == 1)

    # Edits

    def _change(self, step: str, **fields: object) -> None:
        self.session.edit(step, lambda scenario: edits.change_ballot(scenario, **fields))

    def _use_ready(self, name: str | None) -> None:
        rule = next((rule for rule in READY_RULES if rule.name == name), None)
        if rule is None:
            self.read()
            self.name.setFocus()
            return
        self.session.edit(f"Vote by “{name}”", lambda scenario: edits.use_rule(scenario, rule.ballot))

    def _set(self, place: int, change: Callable[[BallotTest], BallotTest]) -> None:
        """Change one condition; a rule called like a ready-made one goes on under that name until she renames it."""

        def edit(tests: tuple[BallotTest, ...]) -> tuple[BallotTest, ...]:
            return (*tests[:place], change(tests[place]), *tests[place + 1 :])

        self._change_tests("Change the rule", edit)

    def _append(self) -> None:
        self._change_tests("Add a condition", lambda tests: (*tests, NEW_TEST))
        self.rows[-1].threshold.setFocus()

    def _remove(self, place: int) -> None:
        self._change_tests("Remove a condition", lambda tests: (*tests[:place], *tests[place + 1 :]))
        self.add.setFocus()

    def _change_tests(self, step: str, change: Callable[[tuple[BallotTest, ...]], tuple[BallotTest, ...]]) -> None:
        self.session.edit(
            step,
            lambda scenario: edits.set_ballot(scenario, with_tests(scenario.ballot, change(scenario.ballot.tests))),
        )

    def _switch_quorum(self, wanted: bool) -> None:
        step = "Ask for a quorum" if wanted else "Ask for no quorum"
        self._change(step, quorum="1/2" if wanted else None)

    def _set_quorum(self, text: str) -> None:
        self.session.edit(
            "Change the quorum",
            lambda scenario: edits.change_ballot(
                scenario, quorum=typed_share(text, "the quorum") if text.strip() else None
            ),
        )

    def _set_casting(self, person: str | None) -> None:
        self.session.edit("Say who decides a tie", lambda scenario: edits.set_casting_vote(scenario, person))


def with_tests(ballot: Ballot, tests: tuple[BallotTest, ...]) -> Ballot:
    """`ballot` with other tests, called by what it then is where it went by the name of a ready-made rule."""
    after = replace(ballot, tests=tests)
    if ballot.name not in {OWN_RULE, *(rule.name for rule in READY_RULES)}:
        return after
    ready = ready_rule_of(after)
    return replace(after, name=OWN_RULE if ready is None else ready.name)


class ConditionRow(QWidget):
    """One condition as a sentence: at least [2/3] of [the votes cast] [are for]."""

    changed = Signal(int, object)  # place, BallotTest -> BallotTest
    removal_wanted = Signal(int)

    def __init__(self, place: int, parent: QWidget) -> None:
        super().__init__(parent)
        self.place = place
        which = f"condition {place + 1}"
        self.link = plain_label(self, muted=True, text="and")
        self.threshold = Choice(f"How it compares, {which}", self, [(text, key) for key, text in THRESHOLDS.items()])
        self.share = LineField(f"Share, {which}", self, meaning="A fraction such as 2/3, or a share such as 75 %")
        self.whole = Choice(f"Of what, {which}", self, [(text, key) for key, text in OF_WHAT.items()])
        self.side = Choice(f"Which side, {which}", self)
        self.remove = small_button("Remove", f"Remove {which}", self)
        first, last = QHBoxLayout(), QHBoxLayout()
        first.addWidget(self.threshold, 3)
        first.addWidget(self.share, 2)
        last.addWidget(self.side, 1)
        last.addWidget(self.remove)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        column.addWidget(self.link)
        column.addLayout(first)
        column.addWidget(self.whole)
        column.addLayout(last)
        self.link.setVisible(place > 0)
        self.threshold.chosen.connect(lambda kind: self._give(lambda test: _compared(test, str(kind))))
        self.share.given.connect(lambda text: self._give(lambda test: _against(test, text)))
        self.whole.chosen.connect(lambda whole: self._give(lambda test: replace(test, count=whole[0], of=whole[1])))
        self.side.chosen.connect(lambda side: self._give(lambda test: replace(test, side=side)))
        self.remove.clicked.connect(lambda: self.removal_wanted.emit(self.place))

    def read(self, test: BallotTest, *, last: bool) -> None:
        """Show `test`; the last condition cannot be removed."""
        kind = threshold_kind(test)
        self.threshold.show_value(kind)
        self.share.show_text(share_text(getattr(test, kind)))
        self.whole.show_value((test.count, test.of))
        self.side.set_options([(SIDES[test.count, side], side) for side in ("for", "against", "objecting")])
        self.side.show_value(test.side)
        self.remove.setVisible(not last)

    def _give(self, change: Callable[[BallotTest], BallotTest]) -> None:
        self.changed.emit(self.place, change)


def threshold_kind(test: BallotTest) -> str:
    """The one comparison that `test` has."""
    return next(kind for kind in THRESHOLDS if getattr(test, kind) is not UNSET)


def _compared(test: BallotTest, kind: str) -> BallotTest:
    share = getattr(test, threshold_kind(test))
    return replace(test, **{one: share if one == kind else UNSET for one in THRESHOLDS})


def _against(test: BallotTest, text: str) -> BallotTest:
    return replace(test, **{threshold_kind(test): typed_share(text, "the share")})
