"""What each command can be given, and its help. Words of a command's own are imported when it is called."""

from __future__ import annotations

import argparse
import math
from typing import TYPE_CHECKING, get_args

from deliberate.terminal import put

if TYPE_CHECKING:
    from deliberate.rehearsal.seating.wish import Wish

MOST_ROUNDS = 1_000_000
MOST_DRAWS = 1_000_000
MOST_SEATS = 10_000
LARGEST_SEED = 2**63 - 1

USAGE = """\
deliberate [FILE]
       deliberate rehearse FILE [options]
       deliberate doubt FILE [options]
       deliberate leverage FILE [options]
       deliberate remedies FILE [options]
       deliberate tables FILE --tables N [options]
       deliberate check FILE"""
WINDOW_HELP = f"""\
usage: {USAGE}

Rehearse a contested meeting: who listens to whom, where talking leads, and why
it stalls. FILE is a scenario, `something.deliberate.json`.

  deliberate [FILE]         open the window on FILE, or on what was open last
  deliberate rehearse FILE  print the rehearsal; needs no display. Its options:
                            `deliberate rehearse -h`
  deliberate doubt FILE     draw the guesses again and again: how sure is that
  deliberate leverage FILE  say what the result hangs on, guess by guess
  deliberate remedies FILE  say which change of process would help
  deliberate tables FILE    find who should sit with whom at mixed tables
  deliberate check FILE     say `ok`, or where the file is wrong and how

  -h, --help                show this and exit
  --version                 show the version and exit

A FILE called like a command opens with `deliberate -- FILE`.
"""


class _Parser(argparse.ArgumentParser):
    """Options in full only, and help that goes the way of all output."""

    def __init__(self, prog: str, description: str, usage: str | None = None, whole_help: str = "") -> None:
        super().__init__(prog, usage, description, allow_abbrev=False)
        self._whole_help = whole_help

    def format_help(self) -> str:
        return self._whole_help or super().format_help()

    def print_help(self, file: object = None) -> None:
        put(self.format_help())


def window_parser() -> argparse.ArgumentParser:
    """`deliberate [FILE]`, and what is asked of the program itself."""
    parser = _Parser("deliberate", "", USAGE, WINDOW_HELP)
    parser.add_argument("file", nargs="?", metavar="FILE")
    parser.add_argument("--version", action="store_true")
    return parser


def _meeting_parser(command: str, description: str) -> argparse.ArgumentParser:
    """What the commands share that compute something about one variant and one question."""
    parser = _Parser(f"deliberate {command}", f"{description} A sketch, not a forecast.")
    parser.add_argument("file", metavar="FILE", help="a .deliberate.json scenario")
    parser.add_argument("--variant", metavar="NAME", help="the set-up to look at (default: the first)")
    parser.add_argument("--question", metavar="ID", help="the question that is talked about (default: the first)")
    parser.add_argument("--json", action="store_true", help="print everything as JSON, at full precision")
    return parser


def rehearse_parser() -> argparse.ArgumentParser:
    """`deliberate rehearse`."""
    parser = _meeting_parser("rehearse", "Play the meeting and say where the talking leads.")
    parser.add_argument(
        "--rounds", metavar="N", type=_rounds, help="rounds to play (default: as many as the plan has)"
    )
    parser.add_argument(
        "--tolerance",
        metavar="X",
        type=_above_zero,
        help="how near is agreed, on the scale (default: 1 %% of its width)",
    )
    return parser


def doubt_parser() -> argparse.ArgumentParser:
    """`deliberate doubt`."""
    parser = _meeting_parser(
        "doubt", "Draw everything that is guessed many times and say what holds, and in how many draws."
    )
    parser.add_argument("--draws", metavar="N", type=_draws, help="how many draws (default: 2048)")
    parser.add_argument("--seed", metavar="S", type=_seed, help="the same seed gives the same draws (default: 1)")
    for basis, default in (("guess", 10), ("stated", 40), ("observed", 160)):
        parser.add_argument(
            f"--{basis}",
            metavar="K",
            type=_above_zero,
            help=f"how closely points of this basis are drawn; 4 times K halves the error (default: {default})",
        )
    return parser


def leverage_parser() -> argparse.ArgumentParser:
    """`deliberate leverage`."""
    return _meeting_parser("leverage", "Say what the result hangs on: how far each guess moves it.")


def remedies_parser() -> argparse.ArgumentParser:
    """`deliberate remedies`."""
    parser = _meeting_parser("remedies", "Say which change of process would help people hear each other.")
    parser.add_argument(
        "--aim",
        metavar="AIM",
        help="common-view, end-swing, sooner, more-voices, outside-heard or less-spread"
        " (default: the best change for each that the figures ask for)",
    )
    return parser


def tables_parser() -> argparse.ArgumentParser:
    """`deliberate tables`: the options make up a `Wish`, which `wish_of` reads."""
    from deliberate.rehearsal.seating.wish import Goal, Wish
    from deliberate.scenario.edits.table_stages import Place
    from deliberate.scenario.values import Unheard

    usual = Wish()
    parser = _meeting_parser("tables", "Find who should sit with whom at mixed tables.")
    laid = parser.add_mutually_exclusive_group(required=True)
    laid.add_argument("--tables", metavar="N", type=_seats, help="how many tables there are")
    laid.add_argument("--size", metavar="N", type=_seats, help="how many people sit at one, at most")
    for name, what, number in (
        ("--rotations", "how often people are seated anew", usual.rotations),
        ("--rounds", "rounds each time", usual.rounds),
    ):
        parser.add_argument(name, metavar="N", type=_seats, default=number, help=f"{what} (default: {number})")
    where = "before the plan's stages, after them, or instead of its table stages"
    for name, choices, what, choice in (
        ("--aim", get_args(Goal), "what the seating shall do", usual.goal),
        ("--place", get_args(Place), where, usual.place),
        ("--unheard", get_args(Unheard), "what becomes of points for those at other tables", usual.unheard),
    ):
        parser.add_argument(name, choices=choices, default=choice, help=f"{what} (default: {choice})")
    for name, what in (("--together", "two who sit at one table"), ("--apart", "two who never do")):
        parser.add_argument(name, metavar="ID", nargs=2, action="append", default=[], help=what)
    parser.add_argument("--role", action="append", default=[], help="a role that every table needs")
    parser.add_argument("--linked", action="store_true", help="everybody hears or is heard at their table")
    parser.add_argument("--seed", metavar="S", type=_seed, default=1, help="the same seed gives the same seating")
    return parser


def wish_of(options: argparse.Namespace) -> Wish:
    """The tables that the options of `tables_parser` wish for."""
    from deliberate.rehearsal.seating.wish import Wish

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


def check_parser() -> argparse.ArgumentParser:
    """`deliberate check`."""
    parser = _Parser("deliberate check", "Say `ok`, or where the file is wrong and how.")
    parser.add_argument("file", metavar="FILE", help="a .deliberate.json scenario")
    return parser


def _rounds(text: str) -> int:
    return _whole(text, 0, MOST_ROUNDS)


def _draws(text: str) -> int:
    return _whole(text, 1, MOST_DRAWS)


def _seed(text: str) -> int:
    return _whole(text, 0, LARGEST_SEED)


def _seats(text: str) -> int:
    return _whole(text, 1, MOST_SEATS)


def _whole(text: str, least: int, most: int) -> int:
    if not (text.isascii() and text.isdigit() and len(text) <= len(str(most)) and least <= int(text) <= most):
        raise argparse.ArgumentTypeError(f"must be a whole number from {least} to {most:,}, is {text!r}")
    return int(text)


def _above_zero(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = math.nan
    if not 0 < value < math.inf:
        raise argparse.ArgumentTypeError(f"must be a number above 0, is {text!r}")
    return value
