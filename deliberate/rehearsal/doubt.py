"""How sure a rehearsal is when its numbers are guesses: everything guessed is drawn again and again, and counted.

Starts are drawn within their margins, unknown ones from the whole scale, rows of points around their shares (see
`dynamics.draws` for the distributions). Firmness, ballots, who is present and which arrows there are stay as they
are. Vote odds are counted over whole draws: final views share their inputs, so they are no independent coins.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from deliberate.dynamics.progress import Progress, Stopped, never, no_report
from deliberate.errors import DeliberateError
from deliberate.rehearsal.doubt_draws import Chunk, GuessedMeeting
from deliberate.rehearsal.doubt_findings import Check, by_structure, check_of
from deliberate.rehearsal.doubt_guesses import Guesses, Outcome
from deliberate.rehearsal.doubt_results import (
    ALWAYS,
    LEVELS,
    Call,
    Concentration,
    Doubt,
    FindingOdds,
    Guess,
    Odds,
    VoteDoubt,
    call_of,
)
from deliberate.rehearsal.doubt_words import in_draws, says_mean, says_vote
from deliberate.rehearsal.findings import findings
from deliberate.rehearsal.findings.sketch import Sketch, sketch_of
from deliberate.rehearsal.rehearse import rehearse
from deliberate.rehearsal.results import Finding, Floats
from deliberate.rehearsal.words import amount, count, in_words
from deliberate.scenario.values import Scenario

DRAWS = 2_048  # a power of two keeps Sobol points balanced
SEED = 1
MOST_NUMBERS = 100_000_000  # beliefs kept, rounds times people times draws
IN_DOUBT: tuple[Call, ...] = ("too-close", "leans")


def doubt(
    scenario: Scenario,
    variant: str | None = None,
    question: str | None = None,
    *,
    draws: int = DRAWS,
    seed: int = SEED,
    concentration: Concentration | None = None,
    progress: Progress = no_report,
    stopped: Stopped = never,
) -> Doubt | None:
    """Draw the guesses of a meeting `draws` times and play each draw to the plan's end and in the long run.

    `variant` is a name and `question` an id; left out, the first ones. The same arguments give the same numbers.
    `progress` is told the part that is done, 0 to 1. Once `stopped` is true, what has been drawn so far is returned,
    None where that is nothing. Raises DeliberateError for a name that is not in the scenario and for numbers that
    make no sense.
    """
    concentration = concentration or Concentration()
    _check(draws, seed, concentration)
    rehearsal = rehearse(scenario, variant, question)
    sketch = sketch_of(scenario, rehearsal)
    beliefs = rehearsal.rounds.size * draws
    if beliefs > MOST_NUMBERS:
        raise DeliberateError(
            f"{amount(draws)} with {count(rehearsal.rounds.size, 'belief', 'beliefs')} each are more than"
            f" {amount(MOST_NUMBERS)} beliefs; ask for fewer draws",
            "draws",
        )
    if stopped():
        return None
    told = findings(scenario, rehearsal)
    if stopped():
        return None
    meeting = GuessedMeeting(sketch, concentration)
    counted = _Counted(meeting, told, draws)
    progress(0.0)
    for chunk in meeting.chunks(draws, seed, stopped):
        counted.add(chunk)
        progress(counted.done / draws)
        if stopped():
            break
    return counted.doubt(draws, seed, concentration) if counted.done else None


def _check(draws: int, seed: int, concentration: Concentration) -> None:
    if draws < 1:
        raise DeliberateError(f"must be 1 or more, is {draws}", "draws")
    if seed < 0:
        raise DeliberateError(f"must be 0 or more, is {seed}", "seed")
    for basis in ("guess", "stated", "observed"):
        value = getattr(concentration, basis)
        if not value > 0:
            raise DeliberateError(f"must be more than 0, is {value:g}", basis)


class _Counted:
    """What is kept of the draws: beliefs for the bands, counts for the odds."""

    def __init__(self, meeting: GuessedMeeting, told: Sequence[Finding], draws: int) -> None:
        sketch = meeting.sketch
        rounds, people = sketch.plan_rounds + 1, len(sketch.present)
        self.done = 0
        self._sketch = sketch
        self._played = np.empty((rounds, people, draws))
        self._long_run = np.empty((people, draws))
        self._settles = np.empty(draws, dtype=bool)
        votes = sketch.electorate is not None
        self._ballots = np.empty((2, rounds, draws)) if votes else None  # for, against
        self._passes = np.zeros(rounds)
        self._passes_in_long_run = 0
        self._told = tuple(told)
        self._checks = _checks(meeting, self._told)
        self._holds = [0] * len(self._told)
        self._guesses = Guesses(meeting)
        self._meeting = meeting

    def add(self, chunk: Chunk) -> None:
        part = slice(self.done, self.done + chunk.draws)
        self._played[..., part] = chunk.played
        self._long_run[:, part] = chunk.long_run
        self._settles[part] = chunk.settles
        if chunk.tallies is not None:
            tallies = chunk.tallies
            self._ballots[0][:, part] = chunk.by_round(tallies.in_favour)
            self._ballots[1][:, part] = chunk.by_round(tallies.against)
            self._passes += chunk.by_round(tallies.passes).sum(axis=1)
            at_end = self._meeting.tallies(chunk.long_run[None])
            self._passes_in_long_run += int((at_end.passes & chunk.settles).sum())
        for place, check in enumerate(self._checks):
            if check is not None:
                self._holds[place] += int(check(chunk).sum())
        self._guesses.add(chunk)
        self.done += chunk.draws

    def doubt(self, wanted: int, seed: int, concentration: Concentration) -> Doubt:
        sketch, draws = self._sketch, self.done
        played, long_run = self._played[..., :draws], self._long_run[:, :draws]
        mean = _mean(sketch, played)
        spread = _spread(sketch, played)
        vote = self._vote()
        about, hangs_on = self._hangs_on(vote)
        return Doubt(
            variant=sketch.rehearsal.variant,
            question=sketch.rehearsal.question,
            people=sketch.rehearsal.people,
            draws=draws,
            seed=seed,
            concentration=concentration,
            beliefs=_bands(played),
            long_run=_bands(long_run),
            mean=_bands(mean),
            mean_in_long_run=_bands(_mean(sketch, long_run)),
            spread=_bands(spread),
            spread_in_long_run=_bands(_spread(sketch, long_run)),
            settles=Odds.of(int(self._settles[:draws].sum()), draws),
            agrees=Odds.of(int((spread[-1] <= sketch.rehearsal.tolerance).sum()), draws),
            tolerance=sketch.rehearsal.tolerance,
            vote=vote,
            findings=self._finding_odds(),
            hangs_on=hangs_on,
            hangs_about=about,
            says=self._says(vote, _bands(mean[-1])),
            notes=tuple(self._notes(wanted)),
        )

    def _vote(self) -> VoteDoubt | None:
        if self._ballots is None:
            return None
        draws, settled = self.done, int(self._settles[: self.done].sum())
        return VoteDoubt(
            passes=tuple(Odds.of(int(hits), draws) for hits in self._passes),
            passes_in_long_run=Odds.of(self._passes_in_long_run, draws) if settled == draws else None,
            in_favour=_bands(self._ballots[0][:, :draws]),
            against=_bands(self._ballots[1][:, :draws]),
            quorum_met=self._sketch.electorate.quorum_met,
        )

    def _hangs_on(self, vote: VoteDoubt | None) -> tuple[Outcome, tuple[Guess, ...]]:
        """About the vote while that is in doubt and some guess stands out; otherwise about the mean view."""
        if vote is not None and call_of(vote.passes[-1]) in IN_DOUBT:
            found = self._guesses.weightiest("vote")
            if found:
                return "vote", found
        return "mean", self._guesses.weightiest("mean")

    def _finding_odds(self) -> tuple[FindingOdds, ...]:
        odds = []
        for finding, check, holds in zip(self._told, self._checks, self._holds, strict=True):
            if by_structure(self._sketch, finding):
                odds.append(FindingOdds(finding, ALWAYS, True))
            else:
                odds.append(FindingOdds(finding, None if check is None else Odds.of(holds, self.done), False))
        return tuple(odds)

    def _says(self, vote: VoteDoubt | None, mean: Floats) -> str:
        sketch = self._sketch
        if not sketch.present.any():
            return "Nobody is present."
        if vote is not None and len(sketch.voters):
            return says_vote(vote.passes[-1], self.done, vote.quorum_met)
        return says_mean(sketch, mean)

    def _notes(self, wanted: int) -> Sequence[str]:
        sketch, meeting, draws = self._sketch, self._meeting, self.done
        notes = []
        if draws < wanted:
            notes.append(f"stopped after {amount(draws)} of {amount(wanted)} draws")
        sure = int(((meeting.high == meeting.low) & sketch.present).sum())
        if sure:
            one = "present person has no margin, so that start is"
            several = "present people have no margin, so those starts are"
            notes.append(f"{in_words(sure, one, several)} taken as known")
        moving = Odds.of(int((~self._settles[:draws]).sum()), draws)
        if meeting.fate is None:
            why = "a hearing range" if sketch.question.hearing_range is not None else "the size of the group"
            notes.append(f"the long run is found by stepping because of {why}")
            if moving.share:
                notes.append(f"views still moved in {in_draws(moving, draws)} when stepping ended")
        elif moving.share:
            notes.append(f"views swing in {in_draws(moving, draws)}; long-run figures are averages over the swing")
        return notes


def _checks(meeting: GuessedMeeting, told: Sequence[Finding]) -> list[Check | None]:
    """What looks for each finding in the draws; nothing has to where it holds by structure."""
    checks: list[Check | None] = []
    for at, finding in enumerate(told):
        place = sum(other.kind == finding.kind for other in told[:at])
        checks.append(None if by_structure(meeting.sketch, finding) else check_of(meeting, finding, place))
    return checks


def _mean(sketch: Sketch, beliefs: Floats) -> Floats:
    """Mean of (..., n, d) beliefs over those present; 0 where nobody is."""
    if not sketch.present.any():
        return np.zeros((*beliefs.shape[:-2], beliefs.shape[-1]))
    return beliefs[..., sketch.present, :].mean(axis=-2)


def _spread(sketch: Sketch, beliefs: Floats) -> Floats:
    """Highest minus lowest of (..., n, d) beliefs, among those who take part."""
    if not len(sketch.here):
        return np.zeros((*beliefs.shape[:-2], beliefs.shape[-1]))
    return np.ptp(beliefs[..., sketch.here, :], axis=-2)


def _bands(values: Floats) -> Floats:
    """(levels, ...) quantiles over the last axis, linearly interpolated (Hyndman and Fan 1996, type 7)."""
    bands = np.quantile(values, LEVELS, axis=-1)
    bands.flags.writeable = False
    return bands
