"""What Help says. The program's own words, shown as plain text."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QPlainTextEdit, QVBoxLayout, QWidget

FIRST_STEPS = """\
Draw. Double-click on free ground and type a name. Drag from the ring around a person to another person: the first \
one listens to the second. Drag from a ring onto free ground for a new person with the arrow. Drag a disc to move it.

Set where people start. Select a person and type a number, or use the table on the left. Select an arrow and type \
how many of 100 points the listener gives, or turn the wheel.

Play. Press Space on the picture, or F9 anywhere. In every round each person's belief becomes the mix of the voices \
on the ring. Drag the handle of the round bar to any round.

See why. “What stands out” says whether views settle and what is in the way. Point at a sentence to see whom it is \
about; click it for the reason and for a change to try. A change is tried in a variant of its own: nothing is lost. \
“What would help” looks for more of them, “What it hangs on” says which guesses to ask about again.
"""

KEYS = """\
On the picture
  Double-click          a new person on free ground; rename on a person
  Drag a disc           move it and all that are selected
  Drag from a ring      an arrow to a person, or to a new one on free ground
  0 to 9                starting belief of the selected person, points of the selected arrow
  Wheel                 zoom; on a selected arrow: its points
  Tab, Shift+Tab        next, previous person
  W, Shift+W            next, previous arrow of the focused person: whom she listens to, then who listens to her
  A                     draw an arrow from the focused person: Tab to the source, Return
  R                     turn the selected arrow round
  F2, Delete            rename, remove
  Arrow keys            move the selected people; pan when nobody is selected
  Ctrl+A, Escape        select everybody, nobody
  Ctrl+X, C, V, D       cut, copy, paste, duplicate
  + and -, Ctrl+0       zoom, fit everybody in
  Ctrl+B                arrows show the way beliefs travel, or who listens to whom
  Ctrl+L                arrows as thick as what they move, or as their points
  F3, Shift+F3          left bar, right side: put away or back, for a larger picture

In the left bar
  Alt+L, U, B, M        people, question, ballot, meeting
  Typing, F2            fill in a cell; with several people selected, for all of them
  Return, Tab           next person, next cell
  Space                 present or not, in the column “here”
  Ctrl+C, Ctrl+V        copy rows, paste cells as sheets do; names below the last row are new people
  Delete                remove the selected people; in the table of points: stop listening
  Menu key              choose columns, and more
  Alt+Up, Alt+Down      move a question in their list

The talk (picture, chart and round bar)
  Space, F9 anywhere    play or pause
  Page Down, Page Up    one step on, one step back
  Home, End             to the start, to the end

Below the chart
  Ctrl+1, 2, 3          what stands out, what would help, what it hangs on
  Ctrl+U                how sure it is: the guesses drawn again and again
  Ctrl+M                mixed tables

In front of others
  F5                    projector view; there Page Down or a click steps on, Escape leaves
  F7                    codes instead of names, and back
  F8                    blank the screen; any key brings it back

The meeting
  F6                    compare variants
  Ctrl+M                mixed tables: who sits with whom
  Ctrl+Z, Ctrl+Shift+Z  undo, redo
  Ctrl+T                add a variant
  Ctrl+Tab              next variant
  Ctrl+N, O, S          new, open, save
  Ctrl+Shift+S, O       save as, open a demo
"""

CARE = """\
A sketch, not a forecast of people. The picture says what follows if people mixed each other's views with the points \
you gave. Real people learn, tire, bargain and change their minds. Averaging never leaves the range people start in: \
no new idea comes up in it, and the same number is not yet an agreed text.

Every number is a guess or somebody's statement. Change one and see what still holds.

A vote shown here is what the sketch says under the rule you entered. Your standing orders, the law and those who \
apply them decide, not this program.

Notes about who counts whose view, and where people stand, can be protected personal data: political opinions and \
beliefs are, even when they are inferred, and codes instead of names do not change that. Ask your data-protection \
officer what allows you to hold them, keep them only as long as you need them, and expect that what you print or \
project is read by the people in it.

Holding on to a view may be right. Use what you see to help people hear each other, whatever they then decide.
"""


def show_care(parent: QWidget) -> None:
    """What the sketch is and is not, in full."""
    show(parent, "What the sketch is and is not", CARE)


def show(parent: QWidget, title: str, text: str) -> None:
    """A window with `text` to read, beside the work."""
    dialog = QDialog(parent)
    dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    dialog.setWindowTitle(title)
    page = QPlainTextEdit(text, dialog)
    page.setReadOnly(True)
    page.setAccessibleName(title)
    if text is KEYS:
        font = page.font()
        font.setFamilies(["DejaVu Sans Mono", "Menlo", "Consolas", "monospace"])
        page.setFont(font)
    buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close, dialog)
    buttons.rejected.connect(dialog.close)
    column = QVBoxLayout(dialog)
    column.addWidget(page)
    column.addWidget(buttons)
    dialog.resize(640, 520)
    dialog.show()
