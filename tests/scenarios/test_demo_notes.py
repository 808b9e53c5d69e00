"""The notes of the demo meetings tell the truth.

Every figure in a demo's notes is held by the program and by `plain_rounds`; `Demo.says` records which words of
the notes a test has held, and a figure that no test has held is a failure.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from itertools import pairwise

import numpy as np
import pytest
from demo import DEMOS, NOW, Demo
from plain_rounds import plain_rounds


@pytest.fixture
def demo(request: pytest.FixtureRequest) -> Iterator[Demo]:
    """The demo named after the test; every figure of its notes must have been held by the end."""
    told = Demo(_slug(request.function.__name__))
    yield told
    words = " ".join(told.scenario.notes.split())
    for phrase in sorted(told.held, key=len, reverse=True):
        words = words.replace(phrase, "...")
    assert re.findall(r"\S*\d\S*", words) == [], "figures in the notes that no test holds"


def _slug(test: str) -> str:
    return test.removeprefix("test_").replace("_", "-")


def test_every_demo_has_its_notes_held() -> None:
    assert set(DEMOS) <= {_slug(name) for name in globals() if name.startswith("test_")}


def test_air_sensor_label(demo: Demo) -> None:
    demo.says("the makers settle on 81 and the test houses on 28")
    assert list(demo.ends().values()) == pytest.approx([81] * 4 + [28] * 4)
    assert [group.people[0] for group in demo.run().closed_groups] == ["amina", "emeka"]
    assert all(demo.count(NOW, after) == (4, 4) for after in range(9))
    meet, tables = "Amina and Emeka meet", "Mixed tables"
    demo.says("leads all eight to 54.5 in the end", "54.5 lies in the undecided band")
    assert demo.end(meet) == pytest.approx(54.5)
    assert demo.end(tables) == pytest.approx(54.5)
    assert demo.count(tables, 8) == (0, 0)
    demo.says("after eight rounds the furthest two are still 39 points apart", "it takes 95 rounds until")
    assert demo.run(meet).spread[8] == pytest.approx(39, abs=0.5)
    assert demo.run(meet).rounds_to_agree == demo.within_a_point(meet) == 95
    demo.says("all eight are within one point after six rounds")
    assert demo.run(tables).rounds_to_agree == demo.within_a_point(tables) == 6
    assert demo.variant(tables).plan.stages[0].rounds == 3
    assert "closed-groups" in demo.kinds()
    assert "bridge" in demo.kinds(meet)
    assert not {"closed-groups", "lasting-gap"} & (demo.kinds(meet) | demo.kinds(tables))
    assert not {"bridge", "knife-edge"} & demo.kinds(tables)


def test_reservoir_board(demo: Demo) -> None:
    demo.says("Six members start between 25 and 45 and Ngozi at 80")
    chair, *members = demo.starts()
    assert (chair, min(members), max(members)) == (80, 25, 45)
    assert [demo.count(NOW, after) for after in (0, 1)] == [(1, 6), (7, 0)]
    demo.says("All end at 71.5, and 81 % of that view is Ngozi's start", "gives the six members only 2 points each")
    assert demo.end() == pytest.approx(71.5, abs=0.05)
    assert demo.run().influence[0] == pytest.approx(demo.plain_influence(NOW)[0])
    assert demo.run().influence[0] == pytest.approx(0.81, abs=0.005)
    assert demo.points("ngozi", "suda") == 2
    assert demo.points("suda", "ngozi") == 50
    last, around = "Chair speaks last", "Go-round"
    demo.says("the board then ends at 60.1, and the chair's start still makes up 55 %")
    assert demo.end(last) == pytest.approx(60.1, abs=0.05)
    assert demo.run(last).influence[0] == pytest.approx(0.55, abs=0.005)
    demo.says("the board ends at 42.1, with one seventh from each start", "from round 2 on all seven are against")
    assert demo.end(around) == pytest.approx(42.1, abs=0.05)
    assert demo.run(around).influence == pytest.approx([1 / 7] * 7)
    assert [demo.count(around, after)[1] for after in range(7)] == [6, 6, 7, 7, 7, 7, 7]
    assert demo.finding("carries").people == ("ngozi",)
    assert "carries" not in demo.kinds(around)


def test_ferry_timetable(demo: Demo) -> None:
    demo.says("The crews start around 6 evening departures a week, the passengers around 16")
    assert np.mean(demo.starts()[:3]) == 6
    assert np.mean(demo.starts()[3:]) == 16
    demo.says("swings between 6 and 16 with period 2", "The average over all rounds is 11 for everybody")
    result = demo.run()
    assert result.cycle is not None
    assert result.cycle.period == 2
    assert result.cycle.beliefs == pytest.approx(np.array([[6.0] * 3 + [16] * 3, [16.0] * 3 + [6] * 3]))
    assert plain_rounds(demo.scenario, NOW, result.question, 400)[-2:] == pytest.approx(result.cycle.beliefs[[1, 0]])
    assert result.long_run_average == pytest.approx([11] * 6)
    own = "Own paper on the table"
    demo.says("keeps 20 of 100 points", "all six settle on 11, less than 0.2 apart after eight rounds")
    assert {person.own_weight for person in demo.variant(own).people} == {20}
    assert demo.end(own) == pytest.approx(11)
    assert demo.run(own).spread[8] < 0.2
    assert "swing" in demo.kinds()
    assert "swing" not in demo.kinds(own)


def test_choir_handbook(demo: Demo) -> None:
    demo.says("the desks hold 80, 30 and 58 % in turn, for ever, with period 3")
    result = demo.run()
    assert result.cycle is not None
    assert result.cycle.period == 3
    assert result.cycle.beliefs[0] == pytest.approx([80, 80, 30, 30, 58, 58])
    far = plain_rounds(demo.scenario, NOW, result.question, 302)[-3:]
    assert far == pytest.approx(result.cycle.beliefs)
    assert all(demo.count(NOW, after) == (4, 2) for after in range(10))
    against = [frozenset(np.flatnonzero(beliefs < 50).tolist()) for beliefs in result.rounds]
    assert all(now.isdisjoint(before) for before, now in pairwise(against))
    leads, own = "Lead writers meet", "Own draft kept in view"
    demo.says("all settle on 56.1, within one point after 21 rounds")
    assert demo.end(leads) == pytest.approx(56.1, abs=0.05)
    assert demo.run(leads).rounds_to_agree == demo.within_a_point(leads) == 21
    demo.says("25 of 100 points, all settle on 56, within one point after 10 rounds")
    assert {person.own_weight for person in demo.variant(own).people} == {25}
    assert demo.end(own) == pytest.approx(56)
    assert demo.run(own).rounds_to_agree == demo.within_a_point(own) == 10
    assert "swing" in demo.kinds()
    assert "swing" not in demo.kinds(leads) | demo.kinds(own)


def test_mountain_path(demo: Demo) -> None:
    demo.says("start between 60 and 80 and give every other voice 12 points; Ioan starts at 10")
    ioan, *others = demo.starts()
    assert (ioan, min(others), max(others)) == (10, 60, 80)
    assert {arrow.weight for arrow in demo.variant().arrows} == {12}
    demo.says("five to one up to round 3 and none for from round 4 on, and in the end everybody is at 10")
    assert [demo.count(NOW, after) for after in range(7)] == [(5, 1)] * 4 + [(0, 6)] * 3
    assert demo.end() == pytest.approx(10)
    hold, walk = "Others hold their starts", "Walk on the path"
    demo.says("with a firmness of 0.4 the five end between 56 and 66", "a gap of 56 points lasts")
    assert {person.firmness for person in demo.variant(hold).people[1:]} == {0.4}
    ends = list(demo.ends(hold).values())
    assert (ends[0], min(ends[1:]), max(ends[1:])) == pytest.approx((10, 56, 66), abs=0.5)
    assert max(ends) - min(ends) == pytest.approx(56, abs=0.5)
    assert all(demo.count(hold, after) == (5, 1) for after in (0, 3, 6, 60))
    demo.says("Ioan hears the others too, 8 points each, and all end at 56.2, within one point after six rounds")
    assert demo.points("ioan", "malia", walk) == 8
    assert demo.end(walk) == pytest.approx(56.2, abs=0.05)
    assert demo.run(walk).rounds_to_agree == demo.within_a_point(walk) == 6
    assert demo.finding("fixed-view").people == ("ioan",)
    assert "lasting-gap" in demo.kinds(hold)
    assert not {"fixed-view", "lasting-gap"} & demo.kinds(walk)


def test_two_clinics(demo: Demo) -> None:
    hill, harbour = slice(0, 5), slice(5, 10)
    visits = "Visits in pairs"
    demo.says("only Elif and Fiadh give each other 4 of 100 points")
    hill_people, harbour_people = demo.run().people[hill], demo.run().people[harbour]
    across = [a for a in demo.variant().arrows if (a.listener in hill_people) == (a.source in harbour_people)]
    assert len(across) == 2
    assert demo.points("elif", "fiadh") == demo.points("fiadh", "elif") == 4
    demo.says("The clinics start 44 points apart on average and are still 40 apart after six joint meetings")
    assert demo.apart(hill, harbour, after=0) == 44
    assert demo.apart(hill, harbour, after=6) == pytest.approx(40, abs=0.5)
    demo.says("the gap halves only every 46 rounds, and it takes 254 rounds until")
    assert demo.run().rounds_to_halve == pytest.approx(46, abs=0.5)
    far = plain_rounds(demo.scenario, NOW, "evenings", 346)
    assert np.ptp(far[346]) == pytest.approx(np.ptp(far[300]) / 2, rel=0.01)
    assert demo.run().rounds_to_agree == demo.within_a_point(NOW) == 254
    demo.says(
        "gives 12 points to one colleague", "the gap halves every 2.5 rounds, is down to 8.5 after the six meetings"
    )
    assert demo.points("bruno", "huda", visits) == 12
    assert demo.run(visits).rounds_to_halve == pytest.approx(2.5, abs=0.05)
    assert demo.apart(hill, harbour, visits) == pytest.approx(8.5, abs=0.05)
    demo.says("all are within one point after 14", "Both ways lead to 50")
    assert demo.run(visits).rounds_to_agree == demo.within_a_point(visits) == 14
    assert demo.end() == pytest.approx(50)
    assert demo.end(visits) == pytest.approx(50)
    assert {frozenset(pair) for pair in demo.finding("bridge").arrows} == {frozenset({"elif", "fiadh"})}
    assert "bridge" not in demo.kinds(visits)


def test_riverbank_panel(demo: Demo) -> None:
    specialists, residents = demo.starts()[:4], demo.starts()[4:]
    demo.says("On a scale of 1 to 9 the specialists start at 6 to 8 and the residents at 2 to 4")
    assert (min(specialists), max(specialists), min(residents), max(residents)) == (6, 8, 2, 4)
    demo.says("residents give the specialists 56 of 100 points", "although no resident started above 4")
    assert 4 * demo.points("eka", "dung") == 56
    demo.says("everybody ends at 7.0, the residents' starts count for nothing")
    assert demo.end() == pytest.approx(7)
    assert demo.run().influence[4:] == pytest.approx(np.zeros(8))
    assert demo.run().outside == demo.run().people[4:]
    assert demo.run().agreement is not None
    assert [demo.run().agreement[after][0].verdict for after in (0, 8)] == ["neither", "agreement"]
    hear, first = "Specialists hear residents", "Residents speak first"
    demo.says("with 20 of 100 points, everybody ends at 5.95 and the residents' starts make up 26 %")
    assert 8 * demo.points("dung", "eka", hear) == 20
    assert demo.end(hear) == pytest.approx(5.95, abs=0.005)
    assert demo.run(hear).influence == pytest.approx(demo.plain_influence(hear))
    assert demo.run(hear).influence[4:].sum() == pytest.approx(0.26, abs=0.005)
    demo.says("with the same points, everybody ends at 4.27", "the order alone moves the result by 1.7 points")
    assert demo.variant(first).arrows == demo.variant(hear).arrows
    assert demo.end(first) == pytest.approx(4.27, abs=0.005)
    assert demo.end(hear) - demo.end(first) == pytest.approx(1.7, abs=0.05)
    assert set(demo.finding("outside").people) == set(demo.run().people[4:])
    assert "outside" not in demo.kinds(hear) | demo.kinds(first)


def test_dock_roster(demo: Demo) -> None:
    demo.says("The eight others give Olavi, who starts at 51, 25 of 100 points")
    assert demo.starts("olavi") == [51]
    assert [demo.points(id, "olavi") for id in demo.run().people if id != "olavi"] == [25] * 8
    demo.says("five for and four against with Olavi at 50.3")
    assert demo.count(NOW, 2) == (5, 4)
    assert demo.run().rounds[2, 2] == pytest.approx(50.3, abs=0.05)
    demo.says("had Olavi started at 50, it would be four for and five against")
    lower = demo.plain_beliefs(NOW, {2: 50}, 2)
    assert ((lower > 50).sum(), (lower < 50).sum()) == (4, 5)
    demo.says("if they went on talking, all nine would end at 49.8, just below the mark")
    assert demo.end() == pytest.approx(49.8, abs=0.05)
    around = "Go-round"
    demo.says("the nine are within half a point, at about 46.4", "no change of one start by up to 30 points")
    assert demo.run(around).spread[2] < 0.5
    assert demo.run(around).rounds[2] == pytest.approx([46.4] * 9, abs=0.25)
    for at, start in enumerate(demo.starts()):
        for moved in (-30, 30):
            beliefs = demo.plain_beliefs(around, {at: min(max(start + moved, 0), 100)}, 2)
            assert (beliefs > 50).sum() < 5
    assert "knife-edge" in demo.kinds()
    assert "knife-edge" not in demo.kinds(around)


def test_fever_guideline(demo: Demo) -> None:
    demo.says("rate a treatment from 1 to 9", "five start in the upper third and four in the lower")
    everyone, first, again = (np.array(demo.starts(question=at)) for at in range(3))
    assert ((everyone >= 7).sum(), (everyone <= 3).sum(), len(everyone)) == (5, 4, 11)
    demo.says("after one round of plenary all eleven lie between 4.8 and 5.8")
    talked = demo.run().rounds[1]
    assert (talked.min(), talked.max()) == pytest.approx((4.8, 5.8), abs=0.05)
    assert demo.verdicts(NOW, "everyone")[:2] == ["disagreement", "agreement"]
    assert not {4, 5.4} & set(everyone.tolist())
    split = "Question split"
    demo.says("For a first attack ten of eleven rate 7 or more, for a second attack all rate 3 or less")
    assert (first >= 7).sum() == 10
    assert again.max() == 3
    assert demo.variant(split).plan.stages[0].setting == "silence"
    assert demo.verdicts(split, "first")[:2] == demo.verdicts(split, "again")[:2] == ["agreement"] * 2
    assert demo.verdicts(split, "everyone")[:2] == ["disagreement"] * 2
    assert "agreement" in demo.kinds(NOW, "everyone") & demo.kinds(split, "first") & demo.kinds(split, "again")


def test_seabed_survey(demo: Demo) -> None:
    people = demo.variant().people
    votes = np.array([person.ballots for person in people])
    demo.says("one of them holds 42 of 100 votes", "The programme of 400 thousand euros")
    assert (votes[0], votes.sum(), demo.scenario.questions[0].pass_mark) == (42, 100, 400)
    demo.says("at least 55 % of the members and 65 % of the votes")
    members, weighted = demo.scenario.ballot.tests
    assert (members.count, members.at_least) == ("people", "55/100")
    assert (weighted.count, weighted.at_least) == ("ballots", "65/100")
    demo.says("five of six members are above 400 through all six rounds, but their 58 votes are too few")
    result = demo.run()
    assert ((result.rounds > 400).sum(axis=1) == 5).all()
    assert result.ballot is not None
    assert {(tally.in_favour, tally.passes) for tally in result.ballot} == {(58, False)}
    demo.says("gives the five others 1 point each, has come from 210 to 274", "all end at 358, below the mark")
    assert demo.points("vilhelm", "zofia") == 1
    assert result.rounds[[0, 6], 0] == pytest.approx([210, 274], abs=0.5)
    assert demo.end() == pytest.approx(358, abs=0.5)
    talks = "Bilateral talks first"
    demo.says("hears the others with 36 points and they him with 24")
    assert sum(arrow.weight for arrow in demo.variant(talks).arrows if arrow.listener == "vilhelm") == 36
    assert demo.points("zofia", "vilhelm", talks) == 24
    demo.says("after six rounds the six are within 2 thousand euros of each other, at 372")
    assert demo.run(talks).spread[6] < 2
    assert demo.run(talks).rounds[6].mean() == pytest.approx(372, abs=0.5)
    assert demo.run(talks).ballot_at_limit is not None
    assert not demo.run(talks).ballot_at_limit.passes
    assert "unfinished" in demo.kinds()
    assert "unfinished" not in demo.kinds(talks)


def test_canal_house(demo: Demo) -> None:
    demo.says("nobody hears Mele and Nuria, who start at 10 and 5", "below the objection mark of 25")
    assert demo.starts("mele", "nuria") == [10, 5]
    hearers = {arrow.listener for arrow in demo.variant().arrows if arrow.source in ("mele", "nuria")}
    assert hearers == {"mele", "nuria", "katya", "lamin"}
    assert demo.scenario.questions[0].objection_mark == 25
    demo.says("after eight rounds, at 17 and 14", "eleven of fourteen are in favour")
    assert demo.run().rounds[8, -2:] == pytest.approx([17, 14], abs=0.5)
    assert standing(demo, NOW, "workshop") == (11, 2, False)
    first = "Objections first"
    demo.says("the two are at 32 and 30, nobody is below the mark, and nine are in favour")
    assert demo.run(first).rounds[8, -2:] == pytest.approx([32, 30], abs=0.5)
    assert standing(demo, first, "workshop") == (9, 0, True)
    for variant in (NOW, first):
        tallies = demo.run(variant, "machines-stay", 60).ballot
        assert tallies is not None
        assert {tally.objecting for tally in tallies} == {0}
    demo.says("Everybody brings back 0.3 of the start in every round, so a gap lasts in both")
    assert {person.firmness for variant in demo.scenario.variants for person in variant.people} == {0.3}
    assert "lasting-gap" in demo.kinds() & demo.kinds(first)


def standing(demo: Demo, variant: str, question: str) -> tuple[float, float, bool]:
    """In favour, objecting, and whether the rule is met, at the plan's end."""
    ballot = demo.run(variant, question).ballot
    assert ballot is not None
    tally = ballot[-1]
    return tally.in_favour, tally.objecting, tally.passes


def test_open_ground(demo: Demo) -> None:
    demo.says("On average the north streets start at 74 and the south fields at 22")
    quarters = np.array(demo.starts()).reshape(5, 8).mean(axis=1)
    assert quarters.tolist() == [74, 62, 48, 34, 22]
    demo.says("end in five views, 74, 62, 48, 34 and 22, and the spread stays at 52")
    assert demo.run().limit == pytest.approx(np.repeat([74, 62, 48, 34, 22], 8))
    assert demo.run().spread[6] == pytest.approx(52, abs=0.5)
    assert len(demo.run().closed_groups) == 5
    mixed = "Mixed tables"
    assert demo.variant(mixed).arrows == demo.variant().arrows
    assert demo.variant(mixed).people == demo.variant().people
    assert [stage.rounds for stage in demo.variant(mixed).plan.stages] == [2, 3, 1]
    demo.says("After the same six rounds the spread is 5.8, the agreed test (a spread of at most 10) is met")
    assert demo.run(mixed).spread[6] == pytest.approx(5.8, abs=0.05)
    assert [demo.verdicts(variant, "ground")[6] for variant in (NOW, mixed)] == ["neither", "agreement"]
    demo.says("going on in plenary all reach 48")
    assert demo.end(mixed) == pytest.approx(48)
    assert "closed-groups" in demo.kinds()
    assert "closed-groups" not in demo.kinds(mixed)


def test_night_market(demo: Demo) -> None:
    traders, residents = slice(0, 5), slice(5, 10)
    walks = "Mixed walks"
    assert {person.firmness for variant in demo.scenario.variants for person in variant.people} == {0.1}
    assert {(v.plan.rounds, v.plan.afterwards) for v in demo.scenario.variants} == {(6, "repeat")}
    assert demo.variant(walks).arrows == demo.variant().arrows
    demo.says("the traders end at 181 minutes after 21:00 on average and the residents at 59")
    demo.says("122 minutes apart, of 160 at the start")
    ends = np.array(list(demo.ends().values()))
    assert (ends[traders].mean(), ends[residents].mean()) == pytest.approx((181, 59), abs=0.5)
    assert ends[traders].mean() - ends[residents].mean() == pytest.approx(122, abs=0.5)
    assert demo.apart(traders, residents, after=0) == 160
    demo.says("the sides end at 145 and 95, 50 minutes apart")
    ends = np.array(list(demo.ends(walks).values()))
    assert (ends[traders].mean(), ends[residents].mean()) == pytest.approx((145, 95), abs=0.5)
    assert ends[traders].mean() - ends[residents].mean() == pytest.approx(50, abs=0.5)
    assert "lasting-gap" in demo.kinds() & demo.kinds(walks)
    assert demo.run(walks).limit is not None
    assert np.ptp(demo.run(walks).limit) < np.ptp(demo.run().limit)


def test_school_kitchen(demo: Demo) -> None:
    thursday = "Thursday instead"
    voters = [person for person in demo.variant().people if person.ballots]
    assert (len(voters), sum(person.present for person in voters)) == (8, 4)
    assert sum(person.present and person.ballots > 0 for person in demo.variant(thursday).people) == 7
    for variant, met in ((NOW, False), (thursday, True)):
        tallies = demo.run(variant).ballot
        assert tallies is not None
        assert {tally.quorum_met for tally in tallies} == {met}
    demo.says("puts her at 50, the middle of the scale, and those present end at 50.4")
    assert demo.run().unknown_starts == ("nayeli",)
    assert demo.run().rounds[0, 2] == 50
    there = [person.present for person in demo.variant().people]
    assert np.array(list(demo.ends().values()))[there] == pytest.approx([50.4] * 5)
    demo.says("with 45 in her place it would be 49.4, on the other side of the mark")
    assert demo.plain_beliefs(NOW, {2: 45}, 400)[there] == pytest.approx([49.4] * 5)
    demo.says("Nayeli, called beforehand, starts at 56: those present end at 54.5")
    assert demo.starts("nayeli", variant=thursday) == [56]
    there = [person.present for person in demo.variant(thursday).people]
    assert np.array(list(demo.ends(thursday).values()))[there] == pytest.approx([54.5] * 8)
    assert {"quorum", "unknown-starts", "absent"} <= demo.kinds()
    assert not {"quorum", "unknown-starts"} & demo.kinds(thursday)


def test_festival_route(demo: Demo) -> None:
    demo.says("The old town starts at 14 to 30 and the harbour side at 66 to 82", "the nearest two are 36 apart")
    town, harbour = demo.starts()[:4], demo.starts()[4:]
    assert (min(town), max(town), min(harbour), max(harbour)) == (14, 30, 66, 82)
    demo.says("more than 30 points away", "the camps settle on 22 and 74")
    assert demo.scenario.questions[0].hearing_range == 30
    assert list(demo.ends().values()) == pytest.approx([22] * 4 + [74] * 4)
    between = "A go-between"
    demo.says("has no vote and starts at 48", "all end at 48, within one point after eight rounds")
    wangari = demo.variant(between).people[-1]
    assert (wangari.id, wangari.ballots, wangari.beliefs["route"]) == ("wangari", 0, 48)
    assert demo.end(between) == pytest.approx(48)
    assert demo.run(between).rounds_to_agree == demo.within_a_point(between) == 8
    demo.says("from round 5 on they take in each other directly")
    beliefs = plain_rounds(demo.scenario, between, "route", 5)
    nearest = beliefs[:, 4:8].min(axis=1) - beliefs[:, :4].max(axis=1)
    assert [bool(distance <= 30) for distance in nearest[:5]] == [False] * 4 + [True]  # heard in the round after
    assert {"closed-groups", "lasting-gap"} & demo.kinds()
    assert not {"closed-groups", "lasting-gap"} & demo.kinds(between)
