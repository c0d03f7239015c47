"""Adding a kind without a mouse: behind what is selected, as a branch of it, or ahead of it."""

from __future__ import annotations

from collections.abc import Collection
from typing import Literal

from app import edits
from app.document import Document
from app.edits.grid import free_row_ahead, free_row_behind
from engine.project import Changes, Project
from engine.stages import KINDS, template
from engine.topology import LinkError

How = Literal["behind", "branch", "ahead"]


def anchor(project: Project, selection: Collection[str]) -> str | None:
    """What is added to: the last selected stage in signal order, else a selected link."""
    stages = [key for key in project.topology.order if key in selection]
    return stages[-1] if stages else next((key for key in project.link if key in selection), None)


def add_kind(document: Document, kind: str, how: How = "behind") -> str:
    """Add a kind and select it. What does not fit is set down unlinked; then the answer says why, in words."""
    project = document.project
    at = anchor(project, document.selection)
    title = KINDS[kind].title
    note = ""
    try:
        changes = _changes(project, kind, at, how)
    except LinkError as error:
        note = f"{title} stands unlinked. {edits.reason(error)}"
        changes = _unlinked(project, kind, at)
    document.edit(f"Add {title}", changes)
    document.select(edits.added_stages(changes))
    return note


def _changes(project: Project, kind: str, at: str | None, how: How) -> Changes:
    if at is None or (how == "behind" and not template(kind, "new").inputs()):
        return edits.add_behind(project, kind, None)
    if how == "ahead":
        return edits.add_ahead(project, kind, at)
    if how == "branch" and at in project.stage:
        return edits.branch_from(project, kind, at)
    return edits.add_behind(project, kind, at)


def _unlinked(project: Project, kind: str, at: str | None) -> Changes:
    stage = project.stage.get(at or "")
    draft = edits.Draft(project)
    if stage is None:
        return edits.add_stage(project, kind, 0, free_row_ahead(draft, 0, 0))
    column = stage.column + 1
    return edits.add_stage(project, kind, column, free_row_behind(draft, column, stage.row))
