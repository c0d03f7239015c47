"""Places in a project file, in words."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from engine.project import HEADER_KEY, Header, Link
from engine.stages import KINDS, Declared

Path = tuple[str | int, ...]

GROUPS = {"stages": "stage", "links": "link"}


def place(raw: Mapping[str, Any], path: Path) -> str:
    """Where a value stands, as a person would say it: 'stage "amp-a", Rated power'."""
    if not path:
        return "the file"
    group, rest = path[0], path[1:]
    if group in GROUPS and rest and isinstance(raw[group], list):
        item = raw[group][rest[0]]
        kind = _kind(str(group), item)
        return _joined(_called(str(group), item, int(rest[0])), kind, rest[1:])
    if group == HEADER_KEY:
        return _joined("the project", Header, rest)
    return _joined("the file", None, path)


def _kind(group: str, item: object) -> type[Declared] | None:
    if group == "links":
        return Link
    kind = item.get("kind") if isinstance(item, dict) else None
    return KINDS.get(kind) if isinstance(kind, str) else None


def _called(group: str, item: object, number: int) -> str:
    word = GROUPS[group]
    key = item.get("id") if isinstance(item, dict) else None
    return f'{word} "{key}"' if isinstance(key, str) and key else f"{word} {number + 1}"


def _joined(start: str, kind: type[Declared] | None, rest: Path) -> str:
    """The place's name, then the field by its label; "text" of a figure and "value" of a control go unsaid."""
    names = [start]
    for number, key in enumerate(rest):
        if isinstance(key, int):
            names[-1] += f" {key + 1}"
        elif number == 0:
            names.append(_label(kind, key))
        elif key not in ("text", "value"):
            names.append(f'"{key}"')
    return ", ".join(names)


def _label(kind: type[Declared] | None, key: str) -> str:
    declared = kind.model_fields.get(key) if kind is not None else None
    return (declared.title if declared is not None else None) or f'"{key}"'
