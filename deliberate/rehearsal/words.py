"""Figures and names as a reader wants them: digits that fit the scale, short lists, plurals.

Only ASCII is added to what the scenario holds, so that every terminal can print it; but for the marks of `isolated`,
which can be left out.
"""

from __future__ import annotations

import math
import unicodedata
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence

from deliberate.rehearsal.results import Tally
from deliberate.scenario.values import AgreementTest, Question, Variant

_STEPS = 1000  # a figure is shown to about this part of the scale: 0.714 of 1, 71.4 of 100, 714 of 1000
_MOST_DECIMALS = 9
ISOLATED = "\u2068\u2069"  # first strong isolate, pop directional isolate
# fmt: off
_SMALL_NUMBERS = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven",
                  "twelve")
# fmt: on


def decimals(question: Question) -> int:
    """How many decimals show about a thousandth of the question's scale, at most 9."""
    width = question.width
    return min(max(0, round(math.log10(_STEPS) - math.log10(width))), _MOST_DECIMALS) if width > 0 else 0


def number(value: float, question: Question, beside: float | None = None) -> str:
    """`value` on the question's scale, without idle zeros: "0.714", "71.4", "12,500".

    `beside` is a figure this one must be told apart from (a pass mark, say): digits are added until the two
    read differently, unless they are equal.
    """
    if question.width < 1e-6:
        return f"{value:.6g}"
    places = decimals(question)
    text = _fixed(value, places)
    if beside is not None and beside != value:
        while text == _fixed(beside, places) and places < 17:
            places += 1
            text = _fixed(value, places)
    return text


def numbers(values: Sequence[float], question: Question) -> list[str]:
    """Figures of one table, all with the same number of decimals, as few as they need; "-" for no number."""
    if not 1e-6 <= question.width < 1e15:
        return [number(value, question) if math.isfinite(value) else "-" for value in values]
    shown = [_fixed(value, decimals(question)) for value in values if math.isfinite(value)]
    places = max((len(text.partition(".")[2]) for text in shown), default=0)
    return [f"{round(value, places) + 0.0:,.{places}f}" if math.isfinite(value) else "-" for value in values]


def with_unit(value: float, question: Question, beside: float | None = None) -> str:
    """`number` followed by the question's unit, if it has one: "480 thousand euros"."""
    text = number(value, question, beside)
    return f"{text} {question.unit}" if question.unit else text


def amount(value: float) -> str:
    """A count of ballots or points as it was given: "3", "2.5", "12,000"."""
    return _fixed(value, 6)


def percent(share: float) -> str:
    """A share of one as "81 %"; near both ends with a decimal, and never rounded to nothing or to all."""
    hundredth = share * 100
    if hundredth <= 0 or hundredth >= 100 or 0.995 <= hundredth <= 99.005:
        return f"{math.floor(hundredth + 0.5)} %"
    if hundredth < 0.05:
        return "under 0.1 %"
    if hundredth > 99.95:
        return "over 99.9 %"
    return f"{hundredth:.1f} %"


def count(n: float, one: str, several: str) -> str:
    """`n` and the fitting noun, in figures: "1 person", "3 people", "2.5 ballots"."""
    return f"{amount(n)} {one if n == 1 else several}"


def in_words(n: int, one: str, several: str) -> str:
    """`n` and the fitting noun, in words up to twelve: "no people", "one person", "three people", "13 people"."""
    figure = _SMALL_NUMBERS[n] if 0 <= n < len(_SMALL_NUMBERS) else amount(n)
    return f"{figure} {one if n == 1 else several}"


def agreement_test(test: AgreementTest, question: Question) -> str:
    """What a test of agreement asks: "3/4 within 7 to 9", "spread at most 10"."""
    match test.test:
        case "rand-ucla":
            return "RAND/UCLA"
        case "share-within":
            share = test.at_least if isinstance(test.at_least, str) else f"{amount(100 * test.at_least)} %"
            return f"{share} within {number(test.low, question)} to {number(test.high, question, beside=test.low)}"
        case "quartile-range":
            return f"quartile range at most {number(test.at_most, question, beside=0.0)}"
        case "spread":
            return f"spread at most {number(test.at_most, question, beside=0.0)}"


def votes(tally: Tally) -> str:
    """The votes counted: "4 for, 3 against, 1 abstaining, 2 objecting", the last two where there are any."""
    abstaining = f", {amount(tally.abstain)} abstaining" if tally.abstain else ""
    objecting = f", {amount(tally.objecting)} objecting" if tally.objecting else ""
    return f"{amount(tally.in_favour)} for, {amount(tally.against)} against{abstaining}{objecting}"


def outcome(tally: Tally) -> str:
    """What comes of the votes: "passes", "does not pass", "cannot pass without a quorum"."""
    return "passes" if tally.passes else "does not pass" if tally.quorum_met else "cannot pass without a quorum"


def ballot(tally: Tally) -> str:
    """The votes and what comes of them: "4 for, 3 against: passes"."""
    nobody = tally.in_favour == tally.against == tally.abstain == 0
    return "nobody votes" if nobody and tally.quorum_met else f"{votes(tally)}: {outcome(tally)}"


def listing(parts: Sequence[str]) -> str:
    """Joined as in a sentence: "a", "a and b", "a, b and c"."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} and {parts[-1]}"


def shown_names(variant: Variant) -> Mapping[str, str]:
    """Each id's name; people who share a name get their id behind it: "Amina (amina-2)"."""
    times = Counter(person.shown_name for person in variant.people)
    return {
        person.id: name if times[name] == 1 else f"{name} ({person.id})"
        for person in variant.people
        for name in (person.shown_name,)
    }


def names(ids: Iterable[str], variant: Variant | Mapping[str, str], most: int = 4) -> str:
    """The people as a list of at most `most` entries: "Amina and Bilal", "Amina, Bilal, Chen and 3 others".

    A name that is a number stands in quotation marks, so that it is not read as a figure; one that is read from right
    to left is `isolated`.

    `variant` may also be what `shown_names` gives, which saves time where many lists are made of one variant.
    """
    known = shown_names(variant) if isinstance(variant, Variant) else variant
    shown = [isolated(_told_from_figures(known.get(one, one))) for one in ids]
    if len(shown) > max(most, 1):
        kept = max(most - 1, 1)
        shown = [*shown[:kept], count(len(shown) - kept, "other", "others")]
    return listing(shown)


def _told_from_figures(name: str) -> str:
    return name if any(map(str.isalpha, name)) or not any(map(str.isdigit, name)) else f'"{name}"'


def isolated(name: str) -> str:
    """A name for the middle of a sentence: one that is read from right to left stands within invisible marks (FSI and
    PDI of the Unicode Bidirectional Algorithm, UAX #9), so that it turns round nothing but itself."""
    return name.join(ISOLATED) if any(map(_from_right_to_left, name)) else name


def without_marks(text: str) -> str:
    """`text` without the marks of `isolated`: for what is kept in a file, and for terminals that lack them."""
    return text.translate(dict.fromkeys(map(ord, ISOLATED)))


def _from_right_to_left(letter: str) -> bool:
    return unicodedata.bidirectional(letter) in ("R", "AL")


def sentence(text: str) -> str:
    """`text` with a capital first letter, the rest untouched."""
    return text[:1].upper() + text[1:]


def _fixed(value: float, places: int) -> str:
    """At most `places` decimals, no idle zeros, no "-0"; thousands set off; exponents only for huge numbers."""
    if abs(value) >= 1e15:
        return f"{value:.6g}"
    text = f"{value:,.{places}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
