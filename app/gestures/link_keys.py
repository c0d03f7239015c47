"""A link drawn with the keyboard: arrows choose among the inputs, Enter confirms, Escape drops it."""

from __future__ import annotations

from typing import Literal

from .base import Plan, Preview, Surface, Target
from .link_drag import LinkDrag

Way = Literal["left", "right", "up", "down"]


class LinkKeys:
    """Chooses a target stage on the grid; starts at the nearest one that the link may lead to."""

    def __init__(self, surface: Surface, stage: str) -> None:
        """Raises ValueError where the stage has no output to start from."""
        self.surface = surface
        self.stage = stage
        self._outputs = [port.name for port in surface.project.stage[stage].outputs()]
        if not self._outputs:
            name = surface.project.stage[stage].name
            raise ValueError(f"{name} has no output: a path ends at it, so nothing can follow")
        self._output = 0
        self.target = Target()
        self.preview = Preview()
        self.plan: Plan | None = None
        self._start_nearest()

    @property
    def output(self) -> str:
        """The name of the output that the link leaves from."""
        return self._outputs[self._output]

    def next_output(self) -> None:
        """Leave from the stage's next output instead."""
        self._output = (self._output + 1) % len(self._outputs)
        self._choose(self._drag().best_port(self.target.id) if self.target.id else self.target)

    def step(self, way: Way) -> None:
        """Go to the next stage that way; up and down also go through the inputs of a stage that has several."""
        project = self.surface.project
        here = project.stage[self.target.id or self.stage]
        if way in ("up", "down") and self.target.what == "input":
            names = [port.name for port in here.inputs()]
            at = names.index(self.target.port) + (1 if way == "down" else -1)
            if 0 <= at < len(names):
                self._choose(Target("input", here.id, names[at]))
                return
        others = [stage for stage in project.stages if stage.id not in (here.id, self.stage)]
        ranked = sorted(
            (*_away(way, stage.column - here.column, stage.row - here.row), stage.id) for stage in others
        )
        ranked = [entry for entry in ranked if entry[0] > 0]
        if ranked:
            self._choose(self._drag().best_port(ranked[0][2]))

    def confirm(self) -> Plan | None:
        """The edit to make; None where the target refuses, as the preview says."""
        return self.plan

    def _drag(self) -> LinkDrag:
        return LinkDrag(self.surface, self.stage, self.output, (0.0, 0.0), from_output=True)

    def _start_nearest(self) -> None:
        project = self.surface.project
        here = project.stage[self.stage]
        rest = sorted(
            (stage for stage in project.stages if stage.id != self.stage),
            key=lambda stage: (
                stage.column <= here.column,
                abs(stage.column - here.column) + abs(stage.row - here.row),
                stage.id,
            ),
        )
        targets = [self._drag().best_port(stage.id) for stage in rest]
        for target in targets:
            self._choose(target)
            if self.plan is not None:
                return
        self._choose(targets[0] if targets else Target())

    def _choose(self, target: Target) -> None:
        self.target = target
        drag = self._drag()
        drag.think(target)
        self.plan = drag.plan
        hint = drag.preview.hint
        if len(self._outputs) > 1:
            hint = f"{hint} · L: next output"
        self.preview = Preview(target, (), drag.preview.refusal, hint)


def _away(way: Way, columns: int, rows: int) -> tuple[int, int]:
    """How far a place lies that way (not that way: 0 or less), and how far aside."""
    along = {"left": -columns, "right": columns, "up": -rows, "down": rows}[way]
    return along, abs(rows if way in ("left", "right") else columns)
