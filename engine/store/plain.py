"""Models as plain JSON values, in the order in which they declare their fields."""

from __future__ import annotations

from collections.abc import Mapping
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
    for name, usual in _fields(type(model)):
        value = values[name]
        if not value and value == usual and (value is None or isinstance(value, Mapping)):
            continue
        if isinstance(value, BaseModel):
            content[name] = plain(value)
        elif isinstance(value, tuple):
            content[name] = [plain(each) if isinstance(each, BaseModel) else each for each in value]
        elif isinstance(value, Mapping):
            content[name] = dict(sorted(value.items()))
        else:
            content[name] = value
    if model.__pydantic_extra__:
        content.update(sorted(model.__pydantic_extra__.items()))
    return content


@cache
def _fields(kind: type[BaseModel]) -> tuple[tuple[str, Any], ...]:
    """Each field's name and its default."""
    return tuple(
        (name, declared.get_default(call_default_factory=True))
        for name, declared in kind.model_fields.items()
    )
