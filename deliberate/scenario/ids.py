"""Short plain ids made from names, so that a file with "Zoë" in it can be read by eye: ``zoe``.

Ids never change once given, and they line up across variants.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Container

_LONGEST = 48  # leaves room within the 64 characters of an id for a number at the end
_APOSTROPHES = dict.fromkeys(map(ord, "'\u2019\u2018\u02bb\u02bc\u02b9\u02ba\u0060\u00b4"))
_LETTERS = str.maketrans(
    # Latin letters that do not decompose into a plain letter and a mark
    {"æ": "ae", "œ": "oe", "þ": "th", "ð": "d", "ı": "i", "ŋ": "ng", "ə": "e", "ɛ": "e", "ɔ": "o"}
    # Cyrillic, as in common passports' romanisation
    | dict(zip("абвгдезийклмнопрстуфыэіјґ", "abvgdeziiklmnoprstufyeijg", strict=True))
    | {"ж": "zh", "х": "kh", "ц": "ts", "ч": "ch", "ш": "sh", "щ": "shch", "ю": "yu", "я": "ya", "ё": "e"}
    | {"є": "ie", "ї": "i", "ў": "u", "ъ": "", "ь": "", "ђ": "dj", "љ": "lj", "њ": "nj", "ћ": "c", "џ": "dz"}
    # Greek (modern pronunciation, simplified)
    | dict(zip("αβγδεζηικλμνξοπρσςτυφω", "avgdeziiklmnxoprsstyfo", strict=True))
    | {"θ": "th", "χ": "ch", "ψ": "ps"}
)  # fmt: skip
_WITH_A_MARK = re.compile(r"LATIN SMALL LETTER (?:[A-Z]+ )?([A-Z])(?: WITH .*)?")


def fresh_id(name: str, fallback: str, taken: Container[str]) -> str:
    """An id not in `taken`, made from `name` ("Zoë Łuk" gives ``zoe-luk``, a second one ``zoe-luk-2``).

    Where nothing of the name can be written in plain letters it is made from `fallback`.
    """
    return fresh_name(_plain(name) or fallback, taken, "{}-{}")


def fresh_name(wanted: str, taken: Container[str], pattern: str = "{} ({})") -> str:
    """`wanted`, or with the first number from 2 that makes it differ from all of `taken`."""
    if wanted not in taken:
        return wanted
    number = 2
    while (numbered := pattern.format(wanted, number)) in taken:
        number += 1
    return numbered


def _plain(name: str) -> str:
    """`name` in a-z, 0-9 and single hyphens; empty where none of its letters is known."""
    letters = name.casefold().translate(_APOSTROPHES).translate(_LETTERS)
    letters = "".join(_unmarked(letter) for letter in unicodedata.normalize("NFKD", letters))
    words = re.findall(r"[a-z0-9]+", letters.translate(_LETTERS))
    return "-".join(words)[:_LONGEST].strip("-")


def _unmarked(letter: str) -> str:
    """A Latin letter without its stroke, hook or the like; combining marks vanish, other characters stay."""
    if letter.isascii():
        return letter
    if unicodedata.combining(letter):
        return ""
    match = _WITH_A_MARK.fullmatch(unicodedata.name(letter, ""))
    return match[1].lower() if match else letter
