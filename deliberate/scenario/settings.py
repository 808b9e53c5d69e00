"""Which arrows a stage lets through, as one rule on ids. `rehearsal.assemble` has it on arrays."""

from __future__ import annotations

from collections.abc import Callable

from deliberate.scenario.values import Stage


def lets_through(stage: Stage) -> Callable[[str, str], bool]:
    """Whether an arrow ``listener -> source`` would count in the stage, were both present."""
    match stage.setting:
        case "plenary":
            return lambda listener, source: True
        case "silence":
            return lambda listener, source: False
        case "panel":
            speakers = frozenset(stage.speakers)
            return lambda listener, source: source in speakers
        case "pairs":
            pairs = frozenset(map(frozenset, stage.pairs))
            return lambda listener, source: frozenset((listener, source)) in pairs
        case "tables":
            table = {person: number for number, people in enumerate(stage.tables) for person in people}
            return lambda listener, source: listener in table and table[listener] == table.get(source)
