"""A project as the text of its file."""

from __future__ import annotations

import json
from typing import Any

from engine.project import HEADER_KEY, Link, Project

from .errors import StoreError
from .migrations import FORMAT_VERSION
from .plain import plain

FORMAT = "gainwright"
MAX_BYTES = 64 * 1024 * 1024  # more than the largest venue of 5 000 stages needs


def to_text(project: Project) -> str:
    """The project as the text of its file. Equal projects give equal text, in whatever order they were built.

    Raises `StoreError` where a number is not finite.
    """
    content: dict[str, Any] = {"format": FORMAT, "version": FORMAT_VERSION}
    content[HEADER_KEY] = plain(project.header)
    content["stages"] = [plain(project.stage[key]) for key in project.topology.order]
    content["links"] = [plain(link) for link in _in_signal_order(project)]
    content.update(sorted((project.__pydantic_extra__ or {}).items()))
    try:
        return json.dumps(content, ensure_ascii=False, indent=1, allow_nan=False) + "\n"
    except ValueError as reason:
        raise StoreError(f"the project holds a number that is not finite: {reason}") from None


def _in_signal_order(project: Project) -> list[Link]:
    place = {key: number for number, key in enumerate(project.topology.order)}
    return sorted(
        project.links,
        key=lambda link: (place[link.source], link.output, place[link.target], link.input, link.id),
    )
