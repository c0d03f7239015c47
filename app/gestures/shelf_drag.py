"""A kind carried from the shelf: set down on a free place, into a link, behind an output or ahead of an input."""

from __future__ import annotations

from app import edits
from engine.project import Changes
from engine.stages import KINDS, Stage

from .base import Gesture, Ghost, Hit, Place, Plan, Preview, Surface, Target, attempt

LINK_REACH_PX = 14.0  # a carried block is a wide thing: links catch it from farther off than a pointer


class ShelfDrag(Gesture):
    """Carries one kind; knows at every moment what dropping it there would do."""

    def __init__(self, surface: Surface, kind: str) -> None:
        super().__init__(surface)
        self.kind = kind
        self._at: tuple[Target, Place] | None = None

    def move(self, x: float, y: float) -> None:
        hit = self.surface.hit(x, y, reach=LINK_REACH_PX, carrying=True)
        place = self.surface.place(x, y)
        target = _target(hit, self.surface)
        if self._at == (target, place):
            return
        self._at = (target, place)
        changes, refusal = attempt(lambda: self._changes(target, place))
        title = KINDS[self.kind].title
        refusal = refusal.replace(edits.Draft(self.surface.project).fresh_name(title), title)
        new = edits.added_stages(changes)
        self.plan = Plan(_title(target, title), changes, new) if changes else None
        self.preview = Preview(target, _ghosts(changes), refusal, _hint(target, title, self.surface))

    def leave(self) -> None:
        """The pointer is off the path: a release there does nothing."""
        self._at = None
        self.cancel()

    def _changes(self, target: Target, place: Place) -> Changes:
        project = self.surface.project
        match target.what:
            case "link":
                return edits.insert_on_link(project, self.kind, target.id)
            case "output":
                return edits.branch_from(project, self.kind, target.id, target.port or None)
            case "input":
                return edits.lead_into(project, self.kind, target.id, target.port or None)
        return edits.add_stage(project, self.kind, *place)


def _target(hit: Hit, surface: Surface) -> Target:
    if hit.what == "empty":
        return Target("place")
    if hit.what != "stage":
        return Target(hit.what, hit.id, hit.port)
    stage = surface.project.stage[hit.id]
    is_output = bool(stage.outputs()) and (hit.right or not stage.inputs())
    return Target("output" if is_output else "input", hit.id)


def _ghosts(changes: Changes) -> tuple[Ghost, ...]:
    return tuple(
        Ghost(key, after.column, after.row)
        for key, (before, after) in changes.items()
        if isinstance(after, Stage) and before is None
    )


def _title(target: Target, title: str) -> str:
    if target.what == "link":
        return f"Insert {title}"
    return f"Branch to {title}" if target.what == "output" else f"Add {title}"


def _hint(target: Target, title: str, surface: Surface) -> str:
    project = surface.project
    if target.what == "link":
        link = project.link[target.id]
        return f"Between {project.stage[link.source].name} and {project.stage[link.target].name}"
    if target.what == "output":
        return f"{title} behind {project.stage[target.id].name}"
    if target.what == "input":
        return f"{title} ahead of {project.stage[target.id].name}"
    return ""
