"""Models as plain JSON values, in the order in which they declare their fields."""

from __future__ import annotations

from functools import cache
from typing import Any

from pydantic import BaseModel

PLACE_KEYS = frozenset({"column", "row"})  # where a stage stands on the grid


def plain(model: BaseModel) -> dict[str, Any]:
    """A model as a JSON object, unknown fields last.

    Every value is written, so that a file keeps its meaning when a default changes; left out is only what is empty
    and would be read as empty.
    """
    content: dict[str, Any] = {}
    values = model.__dict__
    for name, may_go_unsaid in _fields(type(model)):
        value = values[name]
        if value is None and may_go_unsaid:
            continue
        if isinstance(value, BaseModel):
            content[name] = plain(value)
        elif isinstance(value, tuple):
            content[name] = [plain(each) if isinstance(each, BaseModel) else each for each in value]
        else:
            content[name] = value
    if model.__pydantic_extra__:
        content.update(sorted(model.__pydantic_extra__.items()))
    return content


@cache
def _fields(kind: type[BaseModel]) -> tuple[tuple[str, bool], ...]:
    """Each field's name, and whether an empty one is read as empty when it is left out."""
    return tuple((name, declared.default is None) for name, declared in kind.model_fields.items())
