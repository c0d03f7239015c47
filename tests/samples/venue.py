"""A few words to write an invented venue down with: stages from templates, every figure a guess, and their links."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from engine.figures import Figure
from engine.project import Header, Link, Project
from engine.stages import KINDS, Setting, Stage, template


class Venue:
    """Stages and links being gathered; `project` checks them as a whole."""

    def __init__(self, name: str, *, author: str, note: str, revision: int = 1) -> None:
        self.header = Header(name=name, author=author, note=note, revision=revision)
        self.stages: dict[str, Stage] = {}
        self.links: list[Link] = []

    def add(self, kind: str, key: str, name: str, column: int, row: int, **fields: Any) -> str:
        """A stage: figures as text, many of them as a list; controls as a value, or as (value, state[, panel])."""
        maker = KINDS[kind]
        given = {field: _field(maker, field, value) for field, value in fields.items()}
        self.stages[key] = template(kind, key, name, column=column, row=row, **given)
        return key

    def link(
        self, source: str, target: str, output: str = "out", *, m: float | None = None, off_axis: float | None = None,
        wiring: str = "balanced",
    ) -> None:  # fmt: skip
        """A link; `m` is its distance through the air, `off_axis` what is lost beside the loudspeaker's axis."""
        air: dict[str, Any] = {}
        if m is not None:
            air["distance_m"] = Figure(text=f"{m:g} m")
        if off_axis is not None:
            air["off_axis_db"] = Figure(text=f"{off_axis:g} dB")
        key = f"{source}-{target}" if output == "out" else f"{source}-{output}-{target}"
        self.links.append(Link(id=key, source=source, output=output, target=target, wiring=wiring, **air))

    def chain(self, *keys: str) -> None:
        """Links from each to the next, first output to first input."""
        for source, target in pairwise(keys):
            self.link(source, target)

    @property
    def project(self) -> Project:
        return Project(header=self.header, stages=tuple(self.stages.values()), links=tuple(self.links))


def _field(maker: type[Stage], name: str, value: Any) -> Any:
    if name in maker.figure_specs():
        texts = value if isinstance(value, list) else None
        return (
            tuple(Figure(text=text) for text in texts) if texts is not None else value and Figure(text=value)
        )
    if name in maker.control_specs():
        value, state, panel = (*value, None, None)[:3] if isinstance(value, tuple) else (value, None, None)
        return Setting(
            value=None if value is None else float(value), state=state or "adjustable", panel=panel
        )
    return value
