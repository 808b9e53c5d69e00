"""What the start must not wait for."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

from deliberate.files.resources import demo_scenarios

# Everything that takes more than a few milliseconds to import and that the first frame can do without.
LATER = ("numpy.ma", "scipy", "pyqtgraph", "networkx", "PySide6.QtPrintSupport", "PySide6.QtSvg")
PROGRAM = """
import os, sys
from deliberate.window.canvas import Canvas
paint = Canvas.paintEvent
def paint_and_leave(self, event):
    paint(self, event)
    print(*sys.modules)
    sys.stdout.flush()
    os._exit(0)
Canvas.paintEvent = paint_and_leave
from deliberate.window.app import run
run(sys.argv[1])
"""


def test_the_first_frame_loads_nothing_heavy(tmp_path: Path) -> None:
    mine = {**os.environ, "HOME": str(tmp_path), "XDG_CONFIG_HOME": str(tmp_path), "QT_QPA_PLATFORM": "offscreen"}
    command = [sys.executable, "-c", PROGRAM, str(demo_scenarios()[0])]
    done = subprocess.run(command, env=mine, capture_output=True, text=True, check=True)
    loaded = set(done.stdout.split())
    assert "deliberate.window.main_window" in loaded
    assert not [name for name in LATER if name in loaded]
