"""Numbers and shares as people type them and as a field shows them for typing. Free of Qt."""

from __future__ import annotations

import math
import re
from fractions import Fraction

from deliberate.errors import DeliberateError
from deliberate.scenario.values import Share

# As the program writes large figures. "0,125" and "12,5" do not fit, so a decimal comma is still understood.
_GROUPED = re.compile(r"[-+]?[1-9]\d{0,2}(,\d{3})+(\.\d*)?")
_FRACTION = re.compile(r"(\d{1,9})\s*/\s*(\d{1,9})")
SHARE_WANTED = "a fraction such as 2/3, or a share such as 75 %"


def typed_number(text: str, what: str) -> float:
    """The number in `text`, with a decimal point or comma. Raises DeliberateError naming `what` when it is none."""
    tidy = "".join(text.split()).replace("\u2212", "-")
    if _GROUPED.fullmatch(tidy):
        tidy = tidy.replace(",", "")
    elif tidy.count(",") == 1 and "." not in tidy:
        tidy = tidy.replace(",", ".")
    try:
        value = float(tidy.replace("_", "?"))
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise DeliberateError(f"{what} must be a number, is “{text.strip()}”")
    return value


def plain(value: float) -> str:
    """`value` to be typed over: exact, without thousands set off."""
    value = float(value)
    return str(int(value)) if value.is_integer() and abs(value) < 1e15 else repr(value)


def hundredths(share: float) -> str:
    """A part of one in hundredths, to be typed over; 0.29 is "29" although 0.29 * 100 is not 29 in doubles."""
    return plain(float(Fraction(repr(float(share))) * 100))


def typed_share(text: str, what: str) -> Share:
    """The share in `text`: a fraction as it stands, hundredths with "%", otherwise a part of one.

    Raises DeliberateError naming `what` where it is none of these or does not lie between none and all.
    """
    fraction = _FRACTION.fullmatch(text.strip())
    if fraction is not None:
        if 0 < int(fraction[2]) >= int(fraction[1]):
            return f"{fraction[1]}/{fraction[2]}"
    else:
        share = _part_of_one(text.strip())
        if share is not None and 0 <= share <= 1:
            return share
    raise DeliberateError(f"{what} must be {SHARE_WANTED}, from none to all, is “{text.strip()}”")


def _part_of_one(text: str) -> float | None:
    try:
        share = typed_number(text.removesuffix("%"), "a share")
    except DeliberateError:
        return None
    return float(Fraction(repr(share)) / 100) if text.endswith("%") else share


def share_text(share: Share) -> str:
    """A share to be typed over: a fraction as it was given, anything else in hundredths."""
    return share if isinstance(share, str) else f"{hundredths(share)} %"
