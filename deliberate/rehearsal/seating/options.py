"""A wish for tables from the options of a command line."""

from __future__ import annotations

import argparse
from typing import get_args

from deliberate.rehearsal.seating.wish import Goal, Wish
from deliberate.scenario.edits.table_stages import Place
from deliberate.scenario.values import Unheard

MOST = 10_000


def add_options(parser: argparse.ArgumentParser) -> None:
    """Add the options that make up a `Wish`; `wish_of` reads them."""
    usual = Wish()
    count = parser.add_mutually_exclusive_group(required=True)
    count.add_argument("--tables", metavar="N", type=_count, help="how many tables there are")
    count.add_argument("--size", metavar="N", type=_count, help="how many people sit at one, at most")
    _add_count(parser, "--rotations", "how often people are seated anew", usual.rotations)
    _add_count(parser, "--rounds", "rounds each time", usual.rounds)
    _add_choice(parser, "--aim", get_args(Goal), "what the seating shall do", usual.goal)
    _add_choice(
        parser,
        "--place",
        get_args(Place),
        "before the plan's stages, after them, or instead of its table stages",
        usual.place,
    )
    _add_choice(
        parser, "--unheard", get_args(Unheard), "what becomes of points for those at other tables", usual.unheard
    )
    for name, what in (("--together", "two who sit at one table"), ("--apart", "two who never do")):
        parser.add_argument(name, metavar="ID", nargs=2, action="append", default=[], help=what)
    parser.add_argument("--role", action="append", default=[], help="a role that every table needs")
    parser.add_argument("--linked", action="store_true", help="everybody hears or is heard at their table")


def wish_of(options: argparse.Namespace) -> Wish:
    """The wish that was given."""
    return Wish(
        tables=options.tables,
        size=options.size,
        rotations=options.rotations,
        rounds=options.rounds,
        goal=options.aim,
        place=options.place,
        unheard=options.unheard,
        together=tuple(map(tuple, options.together)),
        apart=tuple(map(tuple, options.apart)),
        roles=tuple(options.role),
        linked=options.linked,
    )


def _add_count(parser: argparse.ArgumentParser, name: str, what: str, usual: int) -> None:
    parser.add_argument(name, metavar="N", type=_count, default=usual, help=f"{what} (default: {usual})")


def _add_choice(parser: argparse.ArgumentParser, name: str, choices: tuple[str, ...], what: str, usual: str) -> None:
    parser.add_argument(name, choices=choices, default=usual, help=f"{what} (default: {usual})")


def _count(text: str) -> int:
    if not (text.isascii() and text.isdigit() and len(text) <= len(str(MOST)) and 1 <= int(text) <= MOST):
        raise argparse.ArgumentTypeError(f"must be a whole number from 1 to {MOST:,}, is {text!r}")
    return int(text)
