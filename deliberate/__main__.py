"""`python -m deliberate` is `deliberate`; `python3 deliberate` in a bare checkout sets up `.venv` before that."""

import sys


def _from_checkout() -> int:
    import subprocess

    import machine  # the file beside this one: the package is not installed yet

    python = machine.environment(".venv")
    return subprocess.call([str(python), "-m", "deliberate", *sys.argv[1:]])


if __package__:
    from deliberate.cli import main

    sys.exit(main())
else:
    sys.exit(_from_checkout())
