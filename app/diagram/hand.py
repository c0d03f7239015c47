"""A hand on a level: which control it moves, and how far on that control's own steps. No Qt here."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from engine.levels import NodeLevels
from engine.outcome import Outcome, evaluate
from engine.project import Changes, Project

TRIAL_DB = 3.0


@dataclass(frozen=True)
class Grip:
    """The control a drag moves: where it stood when the hand took it."""

    stage: str
    control: str
    label: str
    start: float

    def moved(self, project: Project, by_db: float) -> tuple[Changes, float]:
        """The change that moves the control by about `by_db`, and where that puts it."""
        stage = project.stage[self.stage]
        value = stage.control_range(self.control).nearest(self.start + by_db)
        typed = None if value == -math.inf else round(value, 6)
        return {self.stage: (stage, stage.with_control(self.control, typed))}, value


def grip(outcome: Outcome, path: Sequence[str], node: NodeLevels) -> Grip | None:
    """The nearest adjustable control at or ahead of a node that moves its level dB for dB; None where there is none.

    Whether a control does is tried on the solved project itself: an equaliser band or another output's trim does not.
    """
    at = path.index(node.stage)
    ahead = path[: at + 1] if node.direction == "out" else path[:at]
    for key in reversed(ahead):
        for name, spec, setting in reversed(list(outcome.project.stage[key].controls())):
            if spec.unit != "dB" or spec.choices or setting.state != "adjustable" or setting.value is None:
                continue
            if _moves(outcome, key, name, setting.value, node):
                label = f"{outcome.project.stage[key].name}, {spec.label.lower()}"
                return Grip(key, name, label, setting.value)
    return None


def _moves(outcome: Outcome, key: str, name: str, value: float, node: NodeLevels) -> bool:
    stage = outcome.project.stage[key]
    ends = stage.control_range(name)
    step = TRIAL_DB if value + TRIAL_DB <= ends.high else -TRIAL_DB
    tried = ends.nearest(value + step)
    if not math.isfinite(tried) or tried == value or node.level is None:
        return False
    moved = outcome.project.with_changes({key: (stage, stage.with_control(name, tried))})
    after = evaluate(moved, outcome).node(node.stage, node.direction, node.port).level
    return after is not None and abs(after - node.level - (tried - value)) < 0.2 * abs(tried - value)
