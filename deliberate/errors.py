"""The one error a person can cause, with the place and the remedy in it."""

from __future__ import annotations


class DeliberateError(Exception):
    """Something a person gave the program does not fit.

    `where` names the place (a key path such as ``variants[0].arrows[3].weight``, or empty when the whole
    is meant), `what` says what is wrong and what would be right. Anything that is not a DeliberateError is
    a bug in the program.
    """

    def __init__(self, what: str, where: str = "") -> None:
        super().__init__(what, where)
        self.what = what
        self.where = where

    def __str__(self) -> str:
        return f"{self.where}: {self.what}" if self.where else self.what
