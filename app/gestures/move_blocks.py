"""Blocks carried about the grid; a single one may also be carried into another link."""

from __future__ import annotations

from app import edits
from engine.project import Changes
from engine.stages import Stage

from .base import Gesture, Ghost, Plan, Point, Preview, Surface, Target, attempt


class MoveBlocks(Gesture):
    """Moves the stages among `ids` by as many places as the pointer has gone."""

    def __init__(self, surface: Surface, ids: frozenset[str], start: Point) -> None:
        super().__init__(surface)
        self.ids = frozenset(key for key in ids if key in surface.project.stage)
        self._from = surface.place(*start)
        self._at: tuple[Target, int, int] | None = None

    def move(self, x: float, y: float) -> None:
        column, row = self.surface.place(x, y)
        by = column - self._from[0], row - self._from[1]
        target = self._target(x, y)
        if self._at == (target, *by):
            return
        self._at = (target, *by)
        changes, refusal = attempt(lambda: self._changes(target, *by))
        title = "Move" if len(self.ids) > 1 else f"Move {self._name()}"
        self.plan = Plan(title, changes) if changes else None
        self.preview = Preview(target, self._ghosts(changes), refusal, self._hint(target))

    def _target(self, x: float, y: float) -> Target:
        """A link that does not touch the carried block, when only one is carried."""
        hit = self.surface.hit(x, y, reach=8.0, carrying=True)
        if hit.what != "link" or len(self.ids) != 1:
            return Target("place")
        link = self.surface.project.link[hit.id]
        return Target("place") if self.ids & {link.source, link.target} else Target("link", hit.id)

    def _changes(self, target: Target, columns: int, rows: int) -> Changes:
        if target.what == "link":
            (key,) = self.ids
            return edits.move_into(self.surface.project, key, target.id)
        return edits.move(self.surface.project, self.ids, columns, rows)

    def _ghosts(self, changes: Changes) -> tuple[Ghost, ...]:
        """All that would stand elsewhere."""
        return tuple(
            Ghost(key, after.column, after.row)
            for key, (before, after) in changes.items()
            if isinstance(before, Stage)
            and isinstance(after, Stage)
            and (before.column, before.row) != (after.column, after.row)
        )

    def _hint(self, target: Target) -> str:
        if target.what != "link":
            others = (
                len({ghost.id for ghost in self._ghosts(self.plan.changes)} - self.ids) if self.plan else 0
            )
            return f"{others} more move on" if others > 1 else "One more moves on" if others else ""
        project = self.surface.project
        link = project.link[target.id]
        return f"Between {project.stage[link.source].name} and {project.stage[link.target].name}"

    def _name(self) -> str:
        return next((self.surface.project.stage[key].name for key in self.ids), "")
