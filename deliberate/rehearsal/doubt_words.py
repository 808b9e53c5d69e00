"""What the draws say, in sentences that are never surer than they are."""

from __future__ import annotations

from deliberate.rehearsal.doubt_results import FindingOdds, Odds, call_of
from deliberate.rehearsal.findings.sketch import Sketch
from deliberate.rehearsal.results import Floats
from deliberate.rehearsal.words import amount

_CALLS = {
    "too-close": "too close to call",
    "leans": "it leans that way, and may go the other",
    "nearly-all": "as sketched, hardly in doubt",
    "all": "as sketched, not in doubt",
}


def in_draws(odds: Odds, draws: int) -> str:
    """ "62 of 100 draws"; "all 2,048 draws"; never rounded to none or to all."""
    if odds.share in (0.0, 1.0):
        return f"{'all' if odds.share else 'none of'} {amount(draws)} draws"
    hundredths = round(100 * odds.share)
    if hundredths == 0:
        return "fewer than 1 of 100 draws"
    return "more than 99 of 100 draws" if hundredths == 100 else f"{hundredths} of 100 draws"


def holds(odds: FindingOdds, draws: int) -> str:
    """In how many draws a finding of the sketch holds; its figures are those of the sketch alone. One sentence."""
    if odds.by_structure:
        return "In all draws: it follows from who is there and which arrows there are."
    if odds.odds is None:
        return "Not looked at in the draws."
    if odds.finding.kind == "knife-edge":
        return f"The same change turns the vote in {in_draws(odds.odds, draws)}."
    counted = in_draws(odds.odds, draws)
    match odds.finding.kind:
        case "vote":
            return f"The same outcome in {counted}."
        case "agreement":
            return f"In {counted}."
        case _:
            return f"In {counted}, with figures of its own in each." if odds.odds.share else f"In {counted}."


def says_vote(passes: Odds, draws: int, quorum_met: bool) -> str:
    """The vote at the plan's end by its commoner outcome, and how sure that is; `call_of` has the thresholds."""
    if not quorum_met:
        return "It cannot pass without a quorum, whatever the views are."
    commoner = passes if passes.share >= 0.5 else passes.against
    verb = "passes" if passes.share >= 0.5 else "does not pass"
    return f"At the plan's end it {verb} in {in_draws(commoner, draws)}: {_CALLS[call_of(passes)]}."


def says_mean(sketch: Sketch, bands: Floats) -> str:
    """Where the mean view of those present ends; bands: (levels,)."""
    low, middle, high = bands[0], bands[len(bands) // 2], bands[-1]
    views = sketch.number(low), sketch.number(middle), sketch.view(high)
    if views[0] == sketch.number(high):
        return f"The mean view at the plan's end is {views[2]} in at least 8 of 10 draws."
    return (
        f"The mean view at the plan's end lies between {views[0]} and {views[2]} in 8 of 10 draws, half of them"
        f" below {views[1]}."
    )
