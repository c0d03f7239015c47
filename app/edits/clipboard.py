"""Stages and the links among them as text, and back: copy, paste, duplicate."""

from __future__ import annotations

import json
from collections.abc import Collection, Mapping
from typing import Any

from engine.project import Changes, Link, Project
from engine.stages import KINDS, Stage
from engine.topology import LinkError

from .draft import Draft, reason
from .grid import Place, occupied

MARK = "gainwright stages"  # the first key of what is copied, so that foreign text is told apart


def copy_text(project: Project, ids: Collection[str]) -> str:
    """Stages and the links among them as JSON text; empty where no stage is named."""
    stages = [stage for stage in project.stages if stage.id in ids]
    if not stages:
        return ""
    inside = {stage.id for stage in stages}
    links = [link for link in project.links if link.source in inside and link.target in inside]
    content = {
        MARK: 1,
        "stages": [stage.model_dump(mode="json") for stage in stages],
        "links": [link.model_dump(mode="json") for link in links],
    }
    return json.dumps(content, ensure_ascii=False, indent=1)


def paste(project: Project, text: str, place: Place | None = None) -> Changes:
    """What was copied, under fresh ids and names, near `place` or where it came from, in rows that are free.

    Raises ValueError where the text was not copied from here.
    """
    stages, links = _read(text)
    draft = Draft(project)
    ids = _put(draft, stages, place)
    for link in links:
        if link.source in ids and link.target in ids:
            draft.new_link(
                ids[link.source], link.output, ids[link.target], link.input,
                **link.model_dump(exclude={"id", "source", "output", "target", "input"}),
            )  # fmt: skip
    return draft.changes()


def duplicate(project: Project, ids: Collection[str]) -> Changes:
    """The same stages again with their links, below; links from and to the rest too, as far as ports allow."""
    draft = Draft(project)
    stages = [stage for stage in project.stages if stage.id in ids]
    if not stages:
        return {}
    new = _put(draft, stages, None)
    for link in project.links:
        if link.source not in new and link.target not in new:
            continue
        copied = draft.new_link(
            new.get(link.source, link.source), link.output, new.get(link.target, link.target), link.input,
            **link.model_dump(exclude={"id", "source", "output", "target", "input"}),
        )  # fmt: skip
        if not (link.source in new and link.target in new):
            try:
                draft.changes()
            except LinkError:
                del draft.links[copied.id]
    return draft.changes()


def _put(draft: Draft, stages: list[Stage], place: Place | None) -> dict[str, str]:
    """Put copies into the draft; old ids to new ones."""
    left = min(stage.column for stage in stages)
    top = min(stage.row for stage in stages)
    column, row = place if place is not None else (left, top)
    taken = occupied(draft)
    while any((stage.column - left + column, stage.row - top + row) in taken for stage in stages):
        row += 1
    ids: dict[str, str] = {}
    for stage in sorted(stages, key=lambda each: (each.row, each.column)):
        fresh = stage.with_fields(
            id=draft.fresh_id(stage.kind),
            name=draft.fresh_name(stage.name),
            column=stage.column - left + column,
            row=stage.row - top + row,
        )
        draft.put(fresh)
        ids[stage.id] = fresh.id
    return ids


def _read(text: str) -> tuple[list[Stage], list[Link]]:
    try:
        content: Any = json.loads(text)
    except ValueError:
        content = None
    if not isinstance(content, dict) or MARK not in content:
        raise ValueError("The clipboard holds no stages: select some and copy them first.")
    try:
        stages = [_stage(raw) for raw in content["stages"]]
        links = [Link.model_validate(raw) for raw in content["links"]]
    except (KeyError, TypeError) as error:
        raise ValueError("The copied stages are damaged: copy them again.") from error
    except ValueError as error:
        raise ValueError(f"The copied stages cannot be used here: {reason(error)}") from error
    if not stages:
        raise ValueError("The clipboard holds no stages: select some and copy them first.")
    return stages, links


def _stage(raw: Mapping[str, Any]) -> Stage:
    kind = raw["kind"]
    if kind not in KINDS:
        raise ValueError(f"kind {kind!r} is unknown here")
    return KINDS[kind].model_validate(raw)
