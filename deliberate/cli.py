"""The command line: the window, and what can be asked of a file without one.

Each command imports what it needs when it runs, so that none pays for another and only the window loads Qt.
Exit status 0 when done, 2 for bad usage or bad input, 1 for anything else.
"""

from __future__ import annotations

import argparse
import math
import os
import sys
import traceback
from collections.abc import Callable, Sequence
from typing import Any

from deliberate.errors import DeliberateError

DONE, OTHERWISE, BAD_INPUT = 0, 1, 2
MOST_ROUNDS = 1_000_000
MOST_DRAWS = 1_000_000
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


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command that `argv` (by default the process's arguments) asks for; return the exit status."""
    try:
        return _run(list(sys.argv[1:] if argv is None else argv))
    except SystemExit as leaving:  # after argparse's own message
        return leaving.code if isinstance(leaving.code, int) else DONE
    except KeyboardInterrupt:
        return OTHERWISE
    except Exception:
        traceback.print_exc()
        _say("deliberate: something went wrong in the program itself; the lines above say where.")
        return OTHERWISE


def _run(arguments: Sequence[str]) -> int:
    match arguments:
        case ["rehearse", *rest]:
            return _on_file(_rehearse, _rehearse_parser().parse_args(rest))
        case ["doubt", *rest]:
            return _on_file(_doubt, _doubt_parser().parse_args(rest))
        case ["leverage", *rest]:
            return _on_file(_leverage, _leverage_parser().parse_args(rest))
        case ["remedies", *rest]:
            return _on_file(_remedies, _remedies_parser().parse_args(rest))
        case ["tables", *rest]:
            return _on_file(_tables, _tables_parser().parse_args(rest))
        case ["check", *rest]:
            return _on_file(_check, _check_parser().parse_args(rest))
        case _:
            options = _window_parser().parse_args(arguments)
            if options.version:
                _print(f"deliberate {_version()}\n")
                return DONE
            return _window(options.file)


def _on_file(command: Callable[[argparse.Namespace], None], options: argparse.Namespace) -> int:
    """Run `command`; what is wrong with the file or with names in it becomes one line."""
    try:
        command(options)
    except DeliberateError as error:
        _say(f"{options.file}: {error}")
        return BAD_INPUT
    return DONE


def _rehearse(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.rehearse import rehearse

    scenario = read(options.file)
    rehearsal = rehearse(scenario, options.variant, options.question, options.rounds, options.tolerance)
    if options.json:
        from deliberate.rehearsal.report import to_json

        _print_json(to_json(rehearsal))
    else:
        from deliberate.rehearsal.findings import findings
        from deliberate.rehearsal.summary import summary

        _print(summary(scenario, rehearsal, findings(scenario, rehearsal)))


def _doubt(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.doubt import DRAWS, SEED, doubt
    from deliberate.rehearsal.doubt_report import doubt_summary, doubt_to_json
    from deliberate.rehearsal.doubt_results import Concentration

    scenario = read(options.file)
    given = {basis: getattr(options, basis) for basis in ("guess", "stated", "observed")}
    found = doubt(
        scenario,
        options.variant,
        options.question,
        draws=DRAWS if options.draws is None else options.draws,
        seed=SEED if options.seed is None else options.seed,
        concentration=Concentration(**{basis: value for basis, value in given.items() if value is not None}),
    )
    if options.json:
        _print_json(doubt_to_json(found))
    else:
        _print(doubt_summary(scenario, found))


def _leverage(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.leverage import leverage
    from deliberate.rehearsal.leverage_report import leverage_summary, leverage_to_json

    scenario = read(options.file)
    found = leverage(scenario, options.variant, options.question)
    if options.json:
        _print_json(leverage_to_json(scenario, found))
    else:
        _print(leverage_summary(scenario, found))


def _remedies(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.remedies import best_for_each_aim, remedies
    from deliberate.rehearsal.remedies.report import remedies_summary, remedies_to_json

    scenario, which = read(options.file), (options.variant, options.question)
    if options.aim is None:
        found = best_for_each_aim(scenario, *which)
    else:
        found = {options.aim: remedies(scenario, *which, options.aim)}
    if options.json:
        _print_json(remedies_to_json(scenario, *which, found))
    else:
        _print(remedies_summary(scenario, *which, found))


def _tables(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.seating.options import wish_of
    from deliberate.rehearsal.seating.report import seating_summary, seating_to_json
    from deliberate.rehearsal.seating.seat import seat

    scenario = read(options.file)
    found = seat(scenario, options.variant, options.question, wish_of(options), seed=options.seed)
    if options.json:
        _print_json(seating_to_json(found))
    else:
        _print(seating_summary(scenario, found))


def _check(options: argparse.Namespace) -> None:
    from deliberate.files import read

    read(options.file)
    _print("ok\n")


def _window(path: str | None) -> int:
    # A committee's matrices are small: more threads would only wait for each other, and for other programs.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    try:
        from deliberate.window.app import NoScreenError, run
    except ImportError as error:
        if (error.name or "").startswith("deliberate"):
            raise
        _say(f"deliberate: {_no_qt(error)}")
        return OTHERWISE
    try:
        return run(path)
    except NoScreenError as error:
        _say(f"deliberate: {error}")
        return OTHERWISE
    except DeliberateError as error:
        _say(f"{path or 'deliberate'}: {error}")
        return BAD_INPUT


def _no_qt(error: ImportError) -> str:
    return (
        f"the window cannot open, because a part of Qt is missing ({error}): install PySide6-Essentials, and on"
        " Debian or Ubuntu libegl1 and libgl1. `deliberate rehearse FILE` works without."
    )


class _Parser(argparse.ArgumentParser):
    """Options in full only, and help that goes the way of all output."""

    def __init__(self, prog: str, description: str, usage: str | None = None, whole_help: str = "") -> None:
        super().__init__(prog, usage, description, allow_abbrev=False)
        self._whole_help = whole_help

    def format_help(self) -> str:
        return self._whole_help or super().format_help()

    def print_help(self, file: object = None) -> None:
        _print(self.format_help())


def _window_parser() -> argparse.ArgumentParser:
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


def _rehearse_parser() -> argparse.ArgumentParser:
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


def _doubt_parser() -> argparse.ArgumentParser:
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


def _leverage_parser() -> argparse.ArgumentParser:
    return _meeting_parser("leverage", "Say what the result hangs on: how far each guess moves it.")


def _remedies_parser() -> argparse.ArgumentParser:
    parser = _meeting_parser("remedies", "Say which change of process would help people hear each other.")
    parser.add_argument(
        "--aim",
        metavar="AIM",
        help="common-view, end-swing, sooner, more-voices, outside-heard or less-spread"
        " (default: the best change for each that the figures ask for)",
    )
    return parser


def _tables_parser() -> argparse.ArgumentParser:
    from deliberate.rehearsal.seating.options import add_options

    parser = _meeting_parser("tables", "Find who should sit with whom at mixed tables.")
    add_options(parser)
    parser.add_argument("--seed", metavar="S", type=_seed, default=1, help="the same seed gives the same seating")
    return parser


def _check_parser() -> argparse.ArgumentParser:
    parser = _Parser("deliberate check", "Say `ok`, or where the file is wrong and how.")
    parser.add_argument("file", metavar="FILE", help="a .deliberate.json scenario")
    return parser


def _rounds(text: str) -> int:
    return _whole(text, 0, MOST_ROUNDS)


def _draws(text: str) -> int:
    return _whole(text, 1, MOST_DRAWS)


def _seed(text: str) -> int:
    return _whole(text, 0, LARGEST_SEED)


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


def _version() -> str:
    from importlib import metadata

    try:
        return metadata.version("deliberate")
    except metadata.PackageNotFoundError:
        return "(not installed)"


def _print_json(data: dict[str, Any]) -> None:
    from msgspec import json

    _print(json.encode(data) + b"\n")


def _print(text: str | bytes) -> None:
    """Write to standard output now. Bytes are UTF-8 whatever the terminal speaks; text is spelt out where the
    terminal lacks a letter. A reader who has left ends the program quietly."""
    out = sys.stdout
    if out is None:
        return
    try:
        if isinstance(text, bytes):
            out.flush()
            out.buffer.write(text)
        else:
            out.reconfigure(errors="backslashreplace")
            out.write(text if text.isascii() else _fit_for(out.encoding, text))
        out.flush()
    except OSError as error:
        os.dup2(os.open(os.devnull, os.O_WRONLY), out.fileno())  # or the interpreter's last flush fails as well
        if not isinstance(error, BrokenPipeError):
            _say(f"deliberate: the output cannot be written: {error.strerror}")
        raise SystemExit(OTHERWISE) from None


def _fit_for(encoding: str, text: str) -> str:
    """`text` without the marks around names that are read from right to left, where these cannot be written."""
    from deliberate.rehearsal.words import ISOLATED, without_marks

    return text if ISOLATED.encode(encoding, "ignore") else without_marks(text)


def _say(message: str) -> None:
    """One line on standard error, whatever a file's name or the message holds."""
    if sys.stderr is not None:
        print("".join(c if c.isprintable() else repr(c)[1:-1] for c in message), file=sys.stderr)


if __name__ == "__main__":
    sys.exit(main())
