"""`python -m deliberate` is `deliberate`; `python3 deliberate` in a bare checkout sets up `.venv` before that."""

import os
import sys


def _from_checkout() -> int:
    import subprocess

    import machine  # the file beside this one: the package is not installed yet

    command = [str(machine.environment(".venv")), "-m", "deliberate", *sys.argv[1:]]
    if os.name != "nt":  # where exec would give the terminal back at once
        os.execv(command[0], command)
    return subprocess.call(command)


if __package__:
    from deliberate.cli import main

    sys.exit(main())
else:
    sys.exit(_from_checkout())
