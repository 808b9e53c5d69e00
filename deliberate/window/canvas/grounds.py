"""Which grounds the picture needs: those of a finding that is pointed at, or the tables of the present stage."""

from __future__ import annotations

from deliberate.rehearsal.results import Finding
from deliberate.scenario.values import Stage
from deliberate.window.canvas.hulls import Ground, tidy
from deliberate.window.canvas.scene import Scene
from deliberate.window.session import Light

_LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"


def of_finding(finding: Finding | Light, scene: Scene) -> list[Ground]:
    """One ground for each group of a finding, with what joins them written on it."""
    groups = [tuple(scene.index[one] for one in group if one in scene.index) for group in finding.groups]
    groups = [group for group in groups if group]
    return [Ground(group, _title(finding.kind, number, len(groups))) for number, group in enumerate(groups)]


def of_stage(stage: Stage, scene: Scene) -> list[Ground]:
    """A ground for each table, unless they would run through each other."""
    if stage.setting != "tables" or len(stage.tables) < 2:
        return []
    groups = [tuple(scene.index[one] for one in table if one in scene.index) for table in stage.tables]
    if not tidy(scene.places, groups, scene.radius):
        return []
    return [Ground(group, f"Table {number}", lit=False) for number, group in enumerate(groups, start=1) if group]


def lit_arrows(finding: Finding | Light, scene: Scene) -> set[int] | None:
    """The arrows to light up: those that the finding names, else those inside its groups; None where it is about
    people only, and all arrows stay as they are."""
    if finding.arrows:
        return {scene.arrow_index[pair] for pair in finding.arrows if pair in scene.arrow_index}
    if not finding.groups:
        return None
    # The arrows of a swing run from phase to phase.
    together = (finding.people,) if finding.kind == "swing" else finding.groups
    result: set[int] = set()
    for group in together:
        members = set(group)
        result |= {place for pair, place in scene.arrow_index.items() if members.issuperset(pair)}
    return result


def _title(kind: str, number: int, count: int) -> str:
    letter = _LETTERS[number % len(_LETTERS)]
    match kind:
        case "closed-groups":
            return "hear only each other"
        case "swing":
            return f"phase {letter}"
        case "outside":
            return "outside"
        case _ if count > 1:
            return f"side {letter}" if count == 2 else f"group {letter}"
        case _:
            return ""
