"""Adding: a stage at a place, into a link, behind an output, ahead of an input; and a link between two ports."""

from __future__ import annotations

from engine.project import Changes, Project
from engine.stages import Port, Stage
from engine.topology import LinkError, PortError

from .draft import Draft, first_port, port_named
from .grid import (
    free_place,
    free_row_ahead,
    free_row_behind,
    keep_links_rightward,
    occupied,
    push_right,
    put_at,
)


def add_stage(project: Project, kind: str, column: int, row: int) -> Changes:
    """A new stage at a place, or at the next free one below it."""
    draft = Draft(project)
    draft.new_stage(kind, *free_place(draft, column, row))
    return draft.changes()


def insert_on_link(project: Project, kind: str, link_id: str) -> Changes:
    """A new stage between the two ends of a link; where there is no room a column is opened for its path.

    Of N alike it becomes N alike. Raises `LinkError` where it does not fit there.
    """
    draft = Draft(project)
    put_into_link(draft, draft.new_stage(kind, 0, 0).id, link_id)
    return draft.changes()


def put_into_link(draft: Draft, key: str, link_id: str) -> None:
    """Join a stage that has no links yet into a link, which keeps its id and its target's wiring."""
    link = draft.links[link_id]
    source, target, stage = draft.stages[link.source], draft.stages[link.target], draft.stages[key]
    arrives, leaves = _domain_out(source, link.output), _domain_in(target, link.input)
    input = first_port(stage, is_output=False, fits=lambda port: port.domain == arrives)
    output = first_port(stage, is_output=True, fits=lambda port: port.domain == leaves)
    if source.count > 1 and stage.count == 1:
        draft.put(stage.with_fields(count=source.count))
    row = source.row if len(draft.into(target.id)) > 1 else target.row
    taken = occupied(draft, without={key})
    column = next((at for at in range(source.column + 1, target.column) if (at, row) not in taken), None)
    draft.links[link_id] = link.model_copy(update={"source": key, "output": output.name})
    draft.new_link(source.id, link.output, key, input.name)
    if column is None:
        column = target.column
        push_right(draft, [target.id], held={key, source.id})
        if (column, row) in occupied(draft, without={key}):
            _, row = free_place(draft, column, row, without={key})
    put_at(draft, key, column, row)
    keep_links_rightward(draft)


def branch_from(project: Project, kind: str, source_id: str, output: str | None = None) -> Changes:
    """A new stage fed by an output, which keeps what it feeds already. Without a name: the first output that fits."""
    draft = Draft(project)
    source = draft.stages[source_id]
    column = source.column + 1
    row = source.row
    if draft.out_of(source_id) or (column, row) in occupied(draft):
        row = free_row_behind(draft, column, row)
    stage = draft.new_stage(kind, column, row, source.count)
    leaving, arriving = _pair(source, stage, output, None)
    draft.new_link(source_id, leaving.name, stage.id, arriving.name)
    return draft.changes()


def lead_into(project: Project, kind: str, target_id: str, input: str | None = None) -> Changes:
    """A new stage that feeds an input. Without a name: the first input that fits and is not taken."""
    draft = Draft(project)
    target = draft.stages[target_id]
    if input is None:
        free = [port.name for port in target.inputs() if port.many or not _feeds(draft, target_id, port.name)]
        input = free[0] if free else None
    if target.column == 0:
        push_right(draft, [target_id])
        target = draft.stages[target_id]
    column, row = target.column - 1, target.row
    if draft.into(target_id) or (column, row) in occupied(draft):
        row = free_row_ahead(draft, column, row)
    stage = draft.new_stage(kind, column, row)
    leaving, arriving = _pair(stage, target, None, input)
    if target.count > 1 and not arriving.many and leaving.domain == arriving.domain:
        draft.put(stage.with_fields(count=target.count))
    draft.new_link(stage.id, leaving.name, target_id, arriving.name)
    return draft.changes()


def add_behind(project: Project, kind: str, key: str | None) -> Changes:
    """A new stage behind a stage or in a link, the way a hand without a mouse adds it.

    Behind the end of a path it is joined on; within a path it is put in between; where it cannot come between it
    branches. With nothing given it starts a path of its own.
    """
    draft = Draft(project)
    if key is None or key not in {**draft.stages, **draft.links}:
        return add_stage(project, kind, 0, free_row_ahead(draft, 0, 0) if draft.stages else 0)
    if key in draft.links:
        return insert_on_link(project, kind, key)
    after = draft.out_of(key)
    if len(after) == 1:
        try:
            return insert_on_link(project, kind, after[0].id)
        except LinkError:
            pass  # it does not fit in between: it may still be a branch
    return branch_from(project, kind, key)


def add_ahead(project: Project, kind: str, key: str) -> Changes:
    """A new stage ahead of a stage or in a link: fed into a free input, or put between a stage and what feeds it."""
    draft = Draft(project)
    if key in draft.links:
        return insert_on_link(project, kind, key)
    before = draft.into(key)
    takes_more = any(port.many or not _feeds(draft, key, port.name) for port in draft.stages[key].inputs())
    if len(before) == 1 and not takes_more:
        return insert_on_link(project, kind, before[0].id)
    return lead_into(project, kind, key)


def add_link(project: Project, source: str, output: str, target: str, input: str) -> Changes:
    """A link between two ports; a target that does not stand right of its source is pushed on with all it feeds."""
    draft = Draft(project)
    draft.new_link(source, output, target, input)
    keep_links_rightward(draft)
    return draft.changes()


def _pair(source: Stage, target: Stage, output: str | None, input: str | None) -> tuple[Port, Port]:
    """The ports to join: those named, else the first two of one domain, else the first two, for the check to refuse."""
    leaving = _side(source, output, is_output=True)
    arriving = _side(target, input, is_output=False)
    alike = ((a, b) for a in leaving for b in arriving if a.domain == b.domain)
    return next(alike, (leaving[0], arriving[0]))


def _side(stage: Stage, name: str | None, *, is_output: bool) -> list[Port]:
    first_port(stage, is_output=is_output)
    ports = list(stage.outputs() if is_output else stage.inputs())
    if name is None:
        return ports
    named = [port for port in ports if port.name == name]
    if not named:
        raise PortError(f"{stage.name} has no {'output' if is_output else 'input'} {name!r}")
    return named


def _feeds(draft: Draft, target: str, input: str) -> bool:
    return any(link.input == input for link in draft.into(target))


def _domain_out(stage: Stage, name: str) -> object:
    port = port_named(stage, name, is_output=True)
    return port.domain if port else None


def _domain_in(stage: Stage, name: str) -> object:
    port = port_named(stage, name, is_output=False)
    return port.domain if port else None
