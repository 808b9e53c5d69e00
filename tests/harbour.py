"""An invented meeting with something of everything in it, for tests: ``from harbour import HARBOUR``."""

from __future__ import annotations

from deliberate.scenario.values import (
    AgreementTest,
    Arrow,
    Ballot,
    BallotTest,
    FrozenDict,
    Person,
    Plan,
    Poll,
    Question,
    Scenario,
    Stage,
    Variant,
)

AS_IT_STANDS = "As it stands"
MIXED = "Mixed tables"

LEVY = Question(id="levy", text="Raise the harbour levy?", low=0.0, high=1.0, pass_mark=0.5, objection_mark=0.1)
DAYS = Question(
    id="days",
    text="How many market days?",
    low=1.0,
    high=9.0,
    unit="days",
    undecided=0.5,
    hearing_range=4.0,
    truth=6.0,
    agreement=(
        AgreementTest(test="rand-ucla"),
        AgreementTest(test="share-within", low=5.0, high=9.0, at_least="3/4"),
        AgreementTest(test="spread", at_most=2.0),
    ),
)

INES = Person(id="ines", name="Ines", role="chair", x=0.0, y=0.0, own_weight=40.0, beliefs=FrozenDict(levy=0.7))
TOMAS = Person(
    id="tomas",
    name="Tomás",
    x=100.0,
    y=0.0,
    own_weight=60.0,
    ballots=2.5,
    beliefs=FrozenDict(levy=0.2, days=3.0),
    margins=FrozenDict(levy=0.1, days=1.0),
)
NOOR = Person(id="noor", name="Noor", own_weight=0.0, firmness=0.25, beliefs=FrozenDict(days=9.0))
WEI = Person(id="wei", present=False, ballots=0.0)

ARROWS = (
    Arrow("ines", "tomas", 20.0, "stated"),
    Arrow("ines", "noor", 40.0),
    Arrow("tomas", "ines", 30.0, "observed"),
    Arrow("tomas", "wei", 10.0),
    Arrow("noor", "tomas", 3.0),
    Arrow("noor", "wei", 1.0),
)

HARBOUR = Scenario(
    title="Harbour levy",
    notes="Room 3",
    questions=(LEVY, DAYS),
    ballot=Ballot(casting_vote="ines", tests=(BallotTest(side="for", more_than="1/2"),)),
    variants=(
        Variant(name=AS_IT_STANDS, people=(INES, TOMAS, NOOR, WEI), arrows=ARROWS),
        Variant(
            name=MIXED,
            people=(INES, TOMAS, NOOR),
            arrows=(ARROWS[0], ARROWS[2]),
            plan=Plan(
                stages=(
                    Stage(name="Tables", rounds=3, setting="tables", tables=(("ines", "tomas"), ("noor",))),
                    Stage(name="Panel", rounds=2, setting="panel", speakers=("tomas", "ines")),
                    Stage(name="In twos", rounds=1, setting="pairs", pairs=(("ines", "noor"), ("tomas", "noor"))),
                ),
                afterwards="repeat",
            ),
        ),
    ),
    polls=(
        Poll(question="levy", after_round=2, beliefs=FrozenDict(ines=0.6, wei=0.4)),
        Poll(question="days", after_round=4, beliefs=FrozenDict(wei=5.0)),
    ),
)
