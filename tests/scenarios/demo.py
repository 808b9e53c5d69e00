"""A demo scenario under test: its rehearsals, the same in plain numpy, and which words of its notes are held."""

from __future__ import annotations

from functools import cache

import numpy as np
from plain_rounds import Floats, plain_rounds, share_matrix

from deliberate.files import read
from deliberate.files.resources import demo_scenarios
from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding, Rehearsal
from deliberate.scenario.values import Scenario, Variant

SUFFIX = ".deliberate.json"
DEMOS = {path.name.removesuffix(SUFFIX): path for path in demo_scenarios()}
NOW = "As it stands"


@cache
def load(slug: str) -> Scenario:
    return read(DEMOS[slug])


@cache
def rehearsed(slug: str, variant: str, question: str | None, rounds: int | None) -> Rehearsal:
    return rehearse(load(slug), variant, question, rounds)


class Demo:
    """One demo under test, and the figures of its notes that have been held so far."""

    def __init__(self, slug: str) -> None:
        self.slug = slug
        self.scenario = load(slug)
        self.held: list[str] = []

    def says(self, *phrases: str) -> None:
        """The notes hold these words; the test that calls this holds what they mean."""
        words = " ".join(self.scenario.notes.split())
        for phrase in phrases:
            assert phrase in words
            self.held.append(phrase)

    def run(self, variant: str = NOW, question: str | None = None, rounds: int | None = None) -> Rehearsal:
        return rehearsed(self.slug, variant, question, rounds)

    def variant(self, name: str = NOW) -> Variant:
        return next(one for one in self.scenario.variants if one.name == name)

    def starts(self, *ids: str, question: int = 0, variant: str = NOW) -> list[float]:
        """The starting beliefs of these people, or of all."""
        asked = self.scenario.questions[question].id
        people = self.variant(variant).people
        return [person.beliefs[asked] for person in people if person.id in ids or not ids]

    def points(self, listener: str, source: str, variant: str = NOW) -> float:
        arrows = self.variant(variant).arrows
        return sum(arrow.weight for arrow in arrows if (arrow.listener, arrow.source) == (listener, source))

    def ends(self, variant: str = NOW, question: str | None = None) -> dict[str, float]:
        """Limiting belief by person, the same from the program and from playing very many plain rounds."""
        result = self.run(variant, question)
        assert result.limit is not None
        far = plain_rounds(self.scenario, variant, result.question, 3000 // 6 * self._pass(variant))[-1]
        np.testing.assert_allclose(result.limit, far, rtol=1e-9)
        return dict(zip(result.people, result.limit.tolist(), strict=True))

    def end(self, variant: str = NOW) -> float:
        """The common view that all end at."""
        values = list(self.ends(variant).values())
        assert max(values) - min(values) < 1e-9
        return values[0]

    def count(self, variant: str, after: int) -> tuple[float, float]:
        """Votes for and against after that round."""
        ballot = self.run(variant, rounds=max(after, self.variant(variant).plan.rounds)).ballot
        assert ballot is not None
        return ballot[after].in_favour, ballot[after].against

    def kinds(self, variant: str = NOW, question: str | None = None) -> set[str]:
        return {finding.kind for finding in self.found(variant, question)}

    def found(self, variant: str = NOW, question: str | None = None) -> tuple[Finding, ...]:
        return tuple(findings(self.scenario, self.run(variant, question)))

    def finding(self, kind: str, variant: str = NOW) -> Finding:
        return next(finding for finding in self.found(variant) if finding.kind == kind)

    def apart(self, one: slice, other: slice, variant: str = NOW, after: int = -1) -> float:
        """Distance between the average beliefs of two sides after a round."""
        beliefs = self.run(variant).rounds[after]
        return abs(float(beliefs[one].mean() - beliefs[other].mean()))

    def within_a_point(self, variant: str) -> int:
        """The first round from which the spread stays within one point, counted in plain rounds."""
        spread = np.ptp(plain_rounds(self.scenario, variant, self.scenario.questions[0].id, 600), axis=1)
        return int(np.flatnonzero(spread > 1)[-1]) + 1

    def plain_influence(self, variant: str) -> Floats:
        """Left eigenvector of the last stage's share matrix for the eigenvalue one, adding to 1."""
        values, vectors = np.linalg.eig(self._shares(variant, -1).T)
        vector = np.real(vectors[:, np.argmax(np.real(values))])
        return vector / vector.sum()

    def plain_beliefs(self, variant: str, starts: dict[int, float], rounds: int) -> Floats:
        """Beliefs after so many rounds of the first stage if these people started elsewhere, from plain numpy."""
        beliefs = self.run(variant).rounds[0].copy()
        beliefs[list(starts)] = list(starts.values())
        return np.linalg.matrix_power(self._shares(variant, 0), rounds) @ beliefs

    def verdicts(self, variant: str, question: str) -> list[str]:
        """The first agreement test's verdict after each round."""
        agreement = self.run(variant, question).agreement
        assert agreement is not None
        return [tests[0].verdict for tests in agreement]

    def _shares(self, variant: str, stage: int) -> Floats:
        meeting = self.variant(variant)
        return share_matrix(meeting, meeting.plan.stages[stage], self.scenario.questions[0], np.empty(0))

    def _pass(self, variant: str) -> int:
        plan = self.variant(variant).plan
        return plan.rounds if plan.afterwards == "repeat" else 6
