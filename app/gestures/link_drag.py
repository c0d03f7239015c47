"""A link drawn from port to port, either way; a taken input gives up its link, to be led elsewhere or dropped."""

from __future__ import annotations

from app import edits
from app.edits import Draft
from app.edits.grid import keep_links_rightward
from engine.project import Changes
from engine.stages import Stage
from engine.topology import LinkError

from .base import Gesture, Hit, Plan, Point, Preview, Surface, Target, attempt

PORT_REACH_PX = 12.0


class LinkDrag(Gesture):
    """Draws a link from an end that stays. `lifted` is the link that is led elsewhere, if one is."""

    def __init__(
        self, surface: Surface, stage: str, port: str, start: Point, *, from_output: bool, lifted: str = ""
    ) -> None:
        super().__init__(surface)
        self.stage, self.port, self.start = stage, port, start
        self.from_output = from_output
        self.lifted = lifted
        self._at: Target | None = None

    def move(self, x: float, y: float) -> None:
        target = self._target(self.surface.hit(x, y, reach=PORT_REACH_PX))
        if target != self._at:
            self._at = target
            self.think(target)
        shown = self.preview
        self.preview = Preview(shown.target, (), shown.refusal, shown.hint, line=(self.start, (x, y)))

    def think(self, target: Target) -> None:
        """Work out what a release at this target would do, and what to say."""
        self.plan = None
        if target.what == "none":
            self.preview = Preview(hint=self._hint_off_target())
            if self.lifted:
                changes = edits.delete(self.surface.project, {self.lifted})
                self.plan = Plan("Remove link", changes, frozenset())
            return
        changes, refusal = attempt(lambda: self._changes(target))
        self.preview = Preview(target, (), refusal, self._hint(target))
        if not refusal:
            self.plan = Plan("Move link" if self.lifted else "Link", changes)

    def _target(self, hit: Hit) -> Target:
        """The port under the pointer; anywhere on a block means its first port that may be linked."""
        if hit.what in ("empty", "link") or hit.id == self.stage:
            return Target()
        if hit.what == "input" and self.from_output:
            return Target("input", hit.id, hit.port)
        if hit.what == "output" and not self.from_output:
            return Target("output", hit.id, hit.port)
        return self.best_port(hit.id)

    def best_port(self, stage_id: str) -> Target:
        """The first port of a stage that this link may lead to; its first at all where none may be."""
        stage = self.surface.project.stage[stage_id]
        side = "input" if self.from_output else "output"
        ports = stage.inputs() if self.from_output else stage.outputs()
        targets = [Target(side, stage_id, port.name) for port in ports]  # type: ignore[arg-type]
        fitting = (target for target in targets if not attempt(lambda at=target: self._changes(at))[1])  # type: ignore[misc]
        return next(fitting, targets[0] if targets else Target("stage", stage_id))

    def _changes(self, target: Target) -> Changes:
        project = self.surface.project
        if target.what == "stage":
            raise LinkError(self._no_port(project.stage[target.id]))
        draft = Draft(project)
        here, there = (self.stage, self.port), (target.id, target.port)
        source, end = (here, there) if self.from_output else (there, here)
        if self.lifted:
            old = draft.links[self.lifted]
            draft.put(old.model_copy(update={"target": end[0], "input": end[1]}))
        else:
            draft.new_link(*source, *end)
        keep_links_rightward(draft)
        return draft.changes()

    def _no_port(self, stage: Stage) -> str:
        if self.from_output:
            return f"{stage.name} has no input: a path begins at it, so nothing can come before"
        return f"{stage.name} has no output: a path ends at it, so nothing can follow"

    def _hint(self, target: Target) -> str:
        names = self.surface.project.stage
        here, there = names[self.stage].name, names[target.id].name
        return f"{here} to {there}" if self.from_output else f"{there} to {here}"

    def _hint_off_target(self) -> str:
        if self.lifted:
            return "Release to remove this link"
        return "Lead it to an input" if self.from_output else "Lead it to an output"


def start_of_link(surface: Surface, hit: Hit, start: Point) -> LinkDrag:
    """The gesture that a port begins. A taken input that takes only one link gives that one up."""
    if hit.what == "output":
        return LinkDrag(surface, hit.id, hit.port, start, from_output=True)
    project = surface.project
    port = next(port for port in project.stage[hit.id].inputs() if port.name == hit.port)
    taken = [link for link in project.topology.into[hit.id] if link.input == hit.port]
    if taken and not port.many:
        (link,) = taken
        return LinkDrag(surface, link.source, link.output, start, from_output=True, lifted=link.id)
    return LinkDrag(surface, hit.id, hit.port, start, from_output=False)
