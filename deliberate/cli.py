"""The command line: the window, and what can be asked of a file without one.

Each command imports what it needs when it runs, so that none pays for another and only the window loads Qt.
Exit status 0 when done, 2 for bad usage or bad input, 1 for anything else.
"""

from __future__ import annotations

import argparse
import os
import sys
import traceback
from collections.abc import Callable, Sequence

from deliberate import usage
from deliberate.errors import DeliberateError
from deliberate.terminal import OTHERWISE, put, put_json, say

DONE, BAD_INPUT = 0, 2


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
        say("deliberate: something went wrong in the program itself; the lines above say where.")
        return OTHERWISE


def _run(arguments: Sequence[str]) -> int:
    match arguments:
        case ["rehearse", *rest]:
            return _on_file(_rehearse, usage.rehearse_parser().parse_args(rest))
        case ["doubt", *rest]:
            return _on_file(_doubt, usage.doubt_parser().parse_args(rest))
        case ["leverage", *rest]:
            return _on_file(_leverage, usage.leverage_parser().parse_args(rest))
        case ["remedies", *rest]:
            return _on_file(_remedies, usage.remedies_parser().parse_args(rest))
        case ["tables", *rest]:
            return _on_file(_tables, usage.tables_parser().parse_args(rest))
        case ["check", *rest]:
            return _on_file(_check, usage.check_parser().parse_args(rest))
        case _:
            options = usage.window_parser().parse_args(arguments)
            if options.version:
                put(f"deliberate {_version()}\n")
                return DONE
            return _window(options.file)


def _on_file(command: Callable[[argparse.Namespace], None], options: argparse.Namespace) -> int:
    """Run `command`; what is wrong with the file or with names in it becomes one line."""
    try:
        command(options)
    except DeliberateError as error:
        say(f"{options.file}: {error}")
        return BAD_INPUT
    return DONE


def _rehearse(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.rehearse import rehearse

    scenario = read(options.file)
    rehearsal = rehearse(scenario, options.variant, options.question, options.rounds, options.tolerance)
    if options.json:
        from deliberate.rehearsal.report import to_json

        put_json(to_json(rehearsal))
    else:
        from deliberate.rehearsal.findings import findings
        from deliberate.rehearsal.summary import summary

        put(summary(scenario, rehearsal, findings(scenario, rehearsal)))


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
        put_json(doubt_to_json(found))
    else:
        put(doubt_summary(scenario, found))


def _leverage(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.leverage import leverage
    from deliberate.rehearsal.leverage_report import leverage_summary, leverage_to_json

    scenario = read(options.file)
    found = leverage(scenario, options.variant, options.question)
    if options.json:
        put_json(leverage_to_json(scenario, found))
    else:
        put(leverage_summary(scenario, found))


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
        put_json(remedies_to_json(scenario, *which, found))
    else:
        put(remedies_summary(scenario, *which, found))


def _tables(options: argparse.Namespace) -> None:
    from deliberate.files import read
    from deliberate.rehearsal.seating.report import seating_summary, seating_to_json
    from deliberate.rehearsal.seating.seat import seat

    scenario = read(options.file)
    found = seat(scenario, options.variant, options.question, usage.wish_of(options), seed=options.seed)
    if options.json:
        put_json(seating_to_json(found))
    else:
        put(seating_summary(scenario, found))


def _check(options: argparse.Namespace) -> None:
    from deliberate.files import read

    read(options.file)
    put("ok\n")


def _window(path: str | None) -> int:
    # A committee's matrices are small: more threads would only wait for each other, and for other programs.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    try:
        from deliberate.window.app import NoScreenError, run
    except ImportError as error:
        if (error.name or "").startswith("deliberate"):
            raise
        say(f"deliberate: {_no_qt(error)}")
        return OTHERWISE
    try:
        return run(path)
    except NoScreenError as error:
        say(f"deliberate: {error}")
        return OTHERWISE
    except DeliberateError as error:
        say(f"{path or 'deliberate'}: {error}")
        return BAD_INPUT


def _no_qt(error: ImportError) -> str:
    return (
        f"the window cannot open, because a part of Qt is missing ({error}): install PySide6-Essentials, and on"
        " Debian or Ubuntu libegl1 and libgl1. `deliberate rehearse FILE` works without."
    )


def _version() -> str:
    from importlib import metadata

    try:
        return metadata.version("deliberate")
    except metadata.PackageNotFoundError:
        return "(not installed)"


if __name__ == "__main__":
    sys.exit(main())
