"""A project being worked on: stages and links that may be put, moved and dropped, then told as `Changes`."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from typing import Any

from pydantic import ValidationError

from engine.project import HEADER_KEY, Changes, Item, Link, Project
from engine.stages import Port, Stage, template
from engine.topology import LinkError


class Draft:
    """Stages and links of a project, free to change until `changes` checks them."""

    def __init__(self, project: Project) -> None:
        self.project = project
        self.stages: dict[str, Stage] = dict(project.stage)
        self.links: dict[str, Link] = dict(project.link)

    # -- what is there ---------------------------------------------------------------------------------------
    def into(self, key: str) -> list[Link]:
        """Links that feed a stage."""
        return [link for link in self.links.values() if link.target == key]

    def out_of(self, key: str) -> list[Link]:
        """Links that a stage feeds."""
        return [link for link in self.links.values() if link.source == key]

    def fed_by(self, keys: Iterable[str]) -> set[str]:
        """Every stage behind any of these."""
        after: dict[str, list[str]] = {}
        for link in self.links.values():
            after.setdefault(link.source, []).append(link.target)
        found: set[str] = set()
        ahead = list(keys)
        while ahead:
            for target in after.get(ahead.pop(), ()):
                if target not in found:
                    found.add(target)
                    ahead.append(target)
        return found

    # -- new things ------------------------------------------------------------------------------------------
    def fresh_id(self, wanted: str) -> str:
        """An id nobody has: "pad", then "pad_2"."""
        base = re.sub(r"\W+", "_", wanted.lower()).strip("_")[:60] or "stage"
        number = 1
        key = base
        while key in self.stages or key in self.links or key == HEADER_KEY:
            number += 1
            key = f"{base}_{number}"
        return key

    def fresh_name(self, wanted: str) -> str:
        """A name nobody has: "Channel 3" becomes "Channel 4" where there is a third already."""
        taken = {stage.name for stage in self.stages.values()}
        if wanted not in taken:
            return wanted
        found = re.fullmatch(r"(.*?)\s+(\d+)", wanted)
        stem, number = (found[1], int(found[2])) if found else (wanted, 1)
        stem = stem[:70]
        while f"{stem} {number}" in taken or number == 1:
            number += 1
        return f"{stem} {number}"

    def new_stage(self, kind: str, column: int, row: int, count: int = 1) -> Stage:
        """Put a template of `kind` there, whether or not the place is free."""
        plain = template(kind, "new")
        stage = plain.with_fields(
            id=self.fresh_id(kind), name=self.fresh_name(plain.name), column=column, row=row, count=count
        )
        self.stages[stage.id] = stage
        return stage

    def new_link(self, source: str, output: str, target: str, input: str, **fields: Any) -> Link:
        """Put a link between two ports, whether or not it may be."""
        link = Link(
            id=self.fresh_id(f"{source}_to_{target}"), source=source, output=output, target=target, input=input,
            **fields,
        )  # fmt: skip
        self.links[link.id] = link
        return link

    def put(self, item: Stage | Link) -> None:
        """Put one item in place of the one with its id."""
        if isinstance(item, Stage):
            self.stages[item.id] = item
        else:
            self.links[item.id] = item

    # -- the outcome -----------------------------------------------------------------------------------------
    def changes(self) -> Changes:
        """What leads from the project to this draft. Raises `LinkError` where a link cannot be."""
        found = self.unchecked()
        self.project.with_changes(found)
        return found

    def unchecked(self) -> Changes:
        """The same without the check of the links."""
        old: dict[str, Item] = {**self.project.stage, **self.project.link}
        new: dict[str, Item] = {**self.stages, **self.links}
        keys = dict.fromkeys([*old, *new])
        pairs = {key: (old.get(key), new.get(key)) for key in keys}
        return {key: (a, b) for key, (a, b) in pairs.items() if a is not b and a != b}


def first_port(stage: Stage, *, is_output: bool, fits: Callable[[Port], bool] = lambda _port: True) -> Port:
    """The first port of a side that fits; the first of all where none does. Raises `LinkError` where there is none."""
    ports = stage.outputs() if is_output else stage.inputs()
    if not ports:
        if is_output:
            raise LinkError(f"{stage.name} has no output: a path ends at it, so nothing can follow")
        raise LinkError(f"{stage.name} has no input: a path begins at it, so nothing can come before")
    return next((port for port in ports if fits(port)), ports[0])


def port_named(stage: Stage, name: str, *, is_output: bool) -> Port | None:
    """The port with this name, None where the stage has none such."""
    return next(
        (port for port in (stage.outputs() if is_output else stage.inputs()) if port.name == name), None
    )


def added_stages(changes: Changes) -> frozenset[str]:
    """The ids of stages that the changes bring in: what to select afterwards."""
    return frozenset(
        key for key, (before, after) in changes.items() if before is None and isinstance(after, Stage)
    )


def reason(error: Exception) -> str:
    """Why something was refused, in one plain sentence; pydantic's wrapping is taken off."""
    if isinstance(error, ValidationError):
        first = error.errors(include_url=False)[0]
        place = ".".join(str(part) for part in first["loc"])
        text = str(first["msg"]).removeprefix("Value error, ")
        return text if first["type"] == "value_error" or not place else f"{place}: {text}"
    return str(error)
