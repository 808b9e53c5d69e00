"""Numbers as people type them. Free of Qt."""

from __future__ import annotations

import math

from deliberate.errors import DeliberateError


def typed_number(text: str, what: str) -> float:
    """The number in `text`, with a decimal point or comma. Raises DeliberateError naming `what` when it is none."""
    tidy = text.strip().replace("\u2212", "-").replace(" ", "").replace("\u00a0", "").replace("%", "")
    if "," in tidy and "." not in tidy:
        tidy = tidy.replace(",", ".")
    try:
        value = float(tidy)
    except ValueError:
        raise DeliberateError(f"{what} must be a number, is “{text.strip()}”") from None
    if not math.isfinite(value):
        raise DeliberateError(f"{what} must be a number, is “{text.strip()}”")
    return value
