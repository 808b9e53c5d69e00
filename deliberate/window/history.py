"""What was done, step by step, so that every step can be taken back. Free of Qt.

A scenario is a value, so a history is a list of values; unchanged people and arrows are shared between them.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from deliberate.scenario.values import Scenario

MOST_STEPS = 1_000


@dataclass(frozen=True)
class Moment:
    """The meeting after `step`, and which variant was on screen. A `coded` step was taken while codes stood for
    names: its words hold none."""

    step: str
    scenario: Scenario
    variant: str
    merge: str = ""
    coded: bool = False


class History:
    """The moments of one open meeting; `now` is the one on screen."""

    def __init__(self, scenario: Scenario, variant: str) -> None:
        self._moments = [Moment("", scenario, variant)]
        self._at = 0
        self._saved: Scenario | None = scenario

    @property
    def now(self) -> Moment:
        """The moment on screen."""
        return self._moments[self._at]

    @property
    def modified(self) -> bool:
        """Whether the meeting differs from what was last saved."""
        return self.now.scenario is not self._saved and self.now.scenario != self._saved

    @property
    def undo_moment(self) -> Moment | None:
        """The moment whose step undo would take back, or None."""
        return self.now if self._at > 0 else None

    @property
    def redo_moment(self) -> Moment | None:
        """The moment whose step redo would do again, or None."""
        return self._moments[self._at + 1] if self._at + 1 < len(self._moments) else None

    @property
    def undo_step(self) -> str | None:
        """The name of the step that undo would take back, or None."""
        return self.undo_moment.step if self.undo_moment is not None else None

    @property
    def redo_step(self) -> str | None:
        """The name of the step that redo would do again, or None."""
        return self.redo_moment.step if self.redo_moment is not None else None

    def push(self, step: str, scenario: Scenario, variant: str, merge: str = "", *, coded: bool = False) -> None:
        """Add a moment after the present one. A non-empty `merge` equal to the present one's replaces it, so
        that turning a wheel or holding a key is one step."""
        del self._moments[self._at + 1 :]
        moment = Moment(step, scenario, variant, merge, coded)
        if merge and self._at > 0 and self.now.merge == merge:
            self._moments[self._at] = moment
            return
        self._moments.append(moment)
        self._at += 1
        if len(self._moments) > MOST_STEPS:
            del self._moments[0]
            self._at -= 1

    def seal(self) -> None:
        """Let the next step stand on its own even if its merge key is the same."""
        moment = self.now
        self._moments[self._at] = replace(moment, merge="")

    def show(self, variant: str) -> None:
        """Remember that `variant` is on screen at the present moment; not a step."""
        moment = self.now
        self._moments[self._at] = replace(moment, variant=variant, merge="")

    def call(self, step: str) -> None:
        """Give the present moment's step other words."""
        self._moments[self._at] = replace(self.now, step=step)

    def undo(self) -> bool:
        """Go one moment back; False at the beginning."""
        if self._at == 0:
            return False
        self._at -= 1
        return True

    def redo(self) -> bool:
        """Go one moment on; False at the end."""
        if self._at + 1 == len(self._moments):
            return False
        self._at += 1
        return True

    def mark_saved(self, scenario: Scenario | None) -> None:
        """Remember what is on disk; None when nothing is."""
        self._saved = scenario
        self.seal()
