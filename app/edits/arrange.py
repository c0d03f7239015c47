"""Moving on the grid. A link always leads to a higher column: what stands in the way of that is pushed on."""

from __future__ import annotations

from collections.abc import Collection

from engine.project import Changes, Project

from .build import put_into_link
from .draft import Draft
from .grid import free_place, keep_links_rightward, occupied, put_at
from .remove import lift_out


def move(project: Project, ids: Collection[str], columns: int, rows: int) -> Changes:
    """Move stages together by whole columns and rows, as far as the grid and what feeds them allow.

    Leftwards they stop right of what feeds them; rightwards they push what they feed. Who stood on their new places
    takes their old ones, or the next free place below.
    """
    draft = Draft(project)
    moving = {key for key in ids if key in draft.stages}
    if not moving:
        return {}
    columns = max(columns, _leftmost(draft, moving))
    rows = max(rows, -min(draft.stages[key].row for key in moving))
    if columns == 0 and rows == 0:
        return {}
    standing = occupied(draft, without=moving)
    old_places = {(draft.stages[key].column, draft.stages[key].row) for key in moving}
    for key in moving:
        stage = draft.stages[key]
        put_at(draft, key, stage.column + columns, stage.row + rows)
    new_places = {(draft.stages[key].column, draft.stages[key].row): key for key in moving}
    vacated = old_places - set(new_places)
    for place, key in standing.items():
        if place not in new_places:
            continue
        back = (place[0] - columns, place[1] - rows)
        if columns == 0 and back in vacated:
            vacated.discard(back)
            put_at(draft, key, *back)
    keep_links_rightward(draft, held=moving)
    keep_links_rightward(draft)
    _part(draft, moving)
    return draft.changes()


def move_into(project: Project, key: str, link_id: str) -> Changes:
    """Take a stage out of its path, join its neighbours, and put it into another link.

    Raises `LinkError` where it does not fit there.
    """
    draft = Draft(project)
    link = draft.links[link_id]
    if key in (link.source, link.target):
        return {}
    lift_out(draft, {key})
    put_into_link(draft, key, link_id)
    return draft.changes()


def tidy_added(project: Project, ids: Collection[str]) -> Changes:
    """Set stages that share a place with another apart; nothing else moves."""
    draft = Draft(project)
    for key in ids:
        stage = draft.stages[key]
        put_at(draft, key, *free_place(draft, stage.column, stage.row, without={key}))
    return draft.changes()


def _leftmost(draft: Draft, moving: Collection[str]) -> int:
    """How far left they may go: not past column 0, nor past what feeds them (as a number of columns, 0 or less)."""
    most = -min(draft.stages[key].column for key in moving)
    for link in draft.links.values():
        if link.target in moving and link.source not in moving:
            room = draft.stages[link.source].column + 1 - draft.stages[link.target].column
            most = max(most, room)
    return min(0, most)


def _part(draft: Draft, moving: Collection[str]) -> None:
    """Send who still shares a place with a moved stage to the next free row."""
    for key in list(draft.stages):
        if key in moving:
            continue
        stage = draft.stages[key]
        if any(
            (draft.stages[other].column, draft.stages[other].row) == (stage.column, stage.row)
            for other in moving
        ):
            put_at(draft, key, *free_place(draft, stage.column, stage.row, without={key}))
