"""Models as plain JSON values, in the order in which they declare their fields."""

from __future__ import annotations

from typing import Any

from pydantic import BaseModel

PLACE_KEYS = frozenset({"column", "row"})  # where a stage stands on the grid


def plain(model: BaseModel) -> dict[str, Any]:
    """A model as a JSON object, unknown fields last.

    Every value is written, so that a file keeps its meaning when a default changes; left out is only what is empty
    and would be read as empty.
    """
    content: dict[str, Any] = {}
    for name, declared in type(model).model_fields.items():
        value = getattr(model, name)
        if value is None and declared.default is None:
            continue
        content[name] = _value(value)
    content.update(sorted((model.__pydantic_extra__ or {}).items()))
    return content


def _value(value: object) -> Any:
    if isinstance(value, BaseModel):
        return plain(value)
    if isinstance(value, tuple):
        return [_value(each) for each in value]
    return value
