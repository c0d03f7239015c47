"""Places on the grid: who stands where, what is free, and how a path is pushed on to open a column."""

from __future__ import annotations

from collections.abc import Collection, Iterable

from .draft import Draft

Place = tuple[int, int]  # column, row


def occupied(draft: Draft, *, without: Collection[str] = ()) -> dict[Place, str]:
    """Who stands on each place."""
    return {(stage.column, stage.row): stage.id for stage in draft.stages.values() if stage.id not in without}


def free_place(draft: Draft, column: int, row: int, *, without: Collection[str] = ()) -> Place:
    """The nearest free place in this column, from this row downwards."""
    taken = occupied(draft, without=without)
    column, row = max(0, column), max(0, row)
    while (column, row) in taken:
        row += 1
    return column, row


def free_row_behind(draft: Draft, column: int, row: int) -> int:
    """The first row from `row` downwards with nothing in this column or right of it: room for a path."""
    taken = {stage.row for stage in draft.stages.values() if stage.column >= column}
    while row in taken:
        row += 1
    return row


def free_row_ahead(draft: Draft, column: int, row: int) -> int:
    """The first row from `row` downwards with nothing in this column or left of it."""
    taken = {stage.row for stage in draft.stages.values() if stage.column <= column}
    while row in taken:
        row += 1
    return row


def put_at(draft: Draft, key: str, column: int, row: int) -> None:
    """Set a stage down."""
    stage = draft.stages[key]
    if (stage.column, stage.row) != (column, row):
        draft.put(stage.model_copy(update={"column": column, "row": row}))


def push_right(draft: Draft, keys: Iterable[str], by: int = 1, *, held: Collection[str] = ()) -> None:
    """Move stages and all they feed to the right; what would be stood upon moves along. `held` stay where they are."""
    moving = {*keys}
    moving |= draft.fed_by(moving)
    moving -= set(held)
    while True:
        standing = occupied(draft, without=moving)
        hit = {
            standing[place]
            for key in moving
            if (place := (draft.stages[key].column + by, draft.stages[key].row)) in standing
        } - set(held)
        if not hit:
            break
        moving |= (hit | draft.fed_by(hit)) - set(held)
    for key in moving:
        stage = draft.stages[key]
        put_at(draft, key, stage.column + by, stage.row)


def keep_links_rightward(draft: Draft, *, held: Collection[str] = ()) -> None:
    """Push on, as little as needed, every stage that does not stand right of what feeds it.

    Cycles are left for the check, which names them.
    """
    for _ in range(len(draft.stages) + 1):
        back = next(
            (
                link
                for link in draft.links.values()
                if link.source in draft.stages
                and link.target in draft.stages
                and draft.stages[link.source].column >= draft.stages[link.target].column
            ),
            None,
        )
        if back is None or back.source in draft.fed_by([back.target]) | {back.target}:
            return
        by = draft.stages[back.source].column + 1 - draft.stages[back.target].column
        push_right(draft, [back.target], by, held=held)
