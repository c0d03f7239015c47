"""From the text of a project file to a project: strict, and every refusal names its place in words."""

from __future__ import annotations

import json
import math
from collections import Counter
from collections.abc import Iterable, Iterator, Mapping
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from engine.project import HEADER_KEY, Header, Link, Project
from engine.stages import KINDS, Declared, Stage
from engine.topology import LinkError

from .errors import StoreError
from .migrations import FORMAT_VERSION, upgrade
from .spots import GROUPS, Path, place
from .text import FORMAT, MAX_BYTES

MAX_DEPTH = 24
MAX_ITEMS = {"stages": 20_000, "links": 100_000}

T = TypeVar("T", bound=Declared)


class _Twice(dict[str, Any]):
    """An object in which a key stands twice."""

    key: str


class _NoNumber:
    """Stands for NaN or Infinity, which JSON does not have."""

    def __init__(self, word: str) -> None:
        self.word = word


def from_text(text: str) -> tuple[Project, tuple[str, ...]]:
    """The project in the text of a file, and notes on what was kept without being understood.

    Raises `StoreError`, with the place named, for anything that is not a whole project of this or an older version.
    """
    if len(text) > MAX_BYTES:
        raise StoreError(f"this is {len(text):,} characters long: a project has at most {MAX_BYTES:,}")
    raw = _parsed(text)
    version = _version(raw)
    _check_values(raw)
    raw = upgrade(raw, version)
    notes: list[str] = []
    project = _project(raw, notes)
    return project, tuple(notes)


def _parsed(text: str) -> dict[str, Any]:
    try:
        raw = json.loads(text, object_pairs_hook=_object, parse_constant=_NoNumber)
    except json.JSONDecodeError as reason:
        raise StoreError(
            f"line {reason.lineno}, column {reason.colno}: this is no JSON ({reason.msg.lower()})"
        ) from None
    except RecursionError:
        raise StoreError(f"this is nested deeper than {MAX_DEPTH} levels: a project never is") from None
    except ValueError:
        raise StoreError("a whole number in this file has thousands of digits: no project has") from None
    if isinstance(raw, _Twice):
        raise StoreError(f'"{raw.key}" stands twice at the top of the file: remove one')
    if not isinstance(raw, dict):
        raise StoreError("this is no project: a project file is one JSON object")
    return raw


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    content = dict(pairs)
    if len(content) == len(pairs):
        return content
    twice = _Twice(content)
    twice.key = Counter(key for key, _ in pairs).most_common(1)[0][0]
    return twice


def _version(raw: Mapping[str, Any]) -> int:
    if raw.get("format") != FORMAT:
        raise StoreError(f'this is no {FORMAT} project: "format" should be "{FORMAT}"')
    version = raw.get("version")
    if isinstance(version, bool) or not isinstance(version, int) or version < 1:
        raise StoreError(f'"version" should be a whole number from 1 to {FORMAT_VERSION}')
    if version > FORMAT_VERSION:
        raise StoreError(
            f"this file is of version {version}, and this program reads up to version {FORMAT_VERSION}: "
            "open it with a newer one. The file was left as it is"
        )
    return version


# -- what no value may be ------------------------------------------------------------------------------------
def _check_values(raw: Mapping[str, Any]) -> None:
    for path, value in _walk(raw):
        if isinstance(value, _Twice):
            raise StoreError(f'{place(raw, path)}: "{value.key}" stands twice, remove one')
        if isinstance(value, _NoNumber) or (isinstance(value, float) and not math.isfinite(value)):
            said = value.word if isinstance(value, _NoNumber) else "a number too large"
            raise StoreError(f"{place(raw, path)}: {said} is no number a project can hold")
        if isinstance(value, str) and not value.isascii():
            try:
                value.encode("utf-8")
            except UnicodeEncodeError:
                raise StoreError(f"{place(raw, path)}: the text holds half a character") from None
        if len(path) > MAX_DEPTH:
            raise StoreError(f"{place(raw, path[:4])}: nested deeper than {MAX_DEPTH} levels")


def _walk(value: Any) -> Iterator[tuple[Path, Any]]:
    """Every value of a file with its place, in the order of the file."""
    ahead: list[tuple[Path, Any]] = [((), value)]
    while ahead:
        at, found = ahead.pop()
        yield at, found
        inside: Iterable[tuple[str | int, Any]] = ()
        if isinstance(found, dict):
            inside = found.items()
        elif isinstance(found, list):
            inside = enumerate(found)
        ahead.extend(reversed([((*at, key), each) for key, each in inside]))


# -- items ---------------------------------------------------------------------------------------------------
def _project(raw: dict[str, Any], notes: list[str]) -> Project:
    header = _item(raw, (HEADER_KEY,), raw.get(HEADER_KEY, {}), Header, notes)
    stages = [_stage(raw, number, item, notes) for number, item in enumerate(_group(raw, "stages"))]
    links = [
        _item(raw, ("links", number), item, Link, notes) for number, item in enumerate(_group(raw, "links"))
    ]
    known = {"format", "version", HEADER_KEY, *GROUPS}
    rest = {key: value for key, value in raw.items() if key not in known}
    if "header" in rest:
        raise StoreError(f'the file: "header" should be called "{HEADER_KEY}"')
    notes.extend(_unknown("the file", key) for key in rest)
    try:
        return Project(header=header, stages=tuple(stages), links=tuple(links), **rest)
    except ValidationError as reason:
        raise StoreError(_first(reason)[1]) from None
    except LinkError as reason:
        raise StoreError(str(reason)) from None


def _group(raw: Mapping[str, Any], group: str) -> list[Any]:
    found = raw.get(group, [])
    if not isinstance(found, list):
        raise StoreError(f'"{group}" should be a list')
    if len(found) > MAX_ITEMS[group]:
        raise StoreError(
            f'"{group}" holds {len(found):,}: a project has at most {MAX_ITEMS[group]:,} {group}'
        )
    return found


def _stage(raw: Mapping[str, Any], number: int, item: object, notes: list[str]) -> Stage:
    path: Path = ("stages", number)
    kind = item.get("kind") if isinstance(item, dict) else None
    if not isinstance(kind, str) or kind not in KINDS:
        said = "it has none" if kind is None else f"{kind!r} is unknown here"
        raise StoreError(f"{place(raw, path)}, kind: {said}; known are {', '.join(KINDS)}")
    return _item(raw, path, item, KINDS[kind], notes)


def _item(raw: Mapping[str, Any], path: Path, item: object, kind: type[T], notes: list[str]) -> T:
    if not isinstance(item, dict):
        raise StoreError(f"{place(raw, path)}: it should be an object with fields")
    try:
        # Through JSON, because only there strictness lets a list be a tuple and still refuses "3" for 3.
        made = kind.model_validate_json(json.dumps(item), strict=True)
    except ValidationError as reason:
        where, what = _first(reason)
        spot = place(raw, (*path, *where))
        if not where:
            # The place names it already: "Rated power of Amplifier A: …" becomes "Rated power: …".
            what = what.replace(f" of {_called(kind, item)}", "", 1)
            raise StoreError(f"{spot}, {what}") from None
        raise StoreError(f"{spot}: {what}") from None
    notes.extend(_unknown(place(raw, (*path, *where)), key) for where, key in _extras(made))
    return made


def _first(reason: ValidationError) -> tuple[Path, str]:
    """Place and plain words of the first thing that was wrong."""
    found = reason.errors(include_url=False)[0]
    cause = found.get("ctx", {}).get("error")
    words = str(cause) if cause is not None else found["msg"]
    if found["type"] == "missing":
        words = "it is missing"
    return tuple(found["loc"]), words[:1].lower() + words[1:] if found["loc"] else words


def _called(kind: type[Declared], item: Mapping[str, Any]) -> str:
    return kind.model_construct(**{name: item.get(name) for name in kind.model_fields}).called


def _extras(model: BaseModel, path: Path = ()) -> Iterator[tuple[Path, str]]:
    yield from ((path, key) for key in model.__pydantic_extra__ or {})
    for name in type(model).model_fields:
        value = getattr(model, name)
        for number, each in enumerate(value if isinstance(value, tuple) else ()):
            if isinstance(each, BaseModel):
                yield from _extras(each, (*path, name, number))
        if isinstance(value, BaseModel):
            yield from _extras(value, (*path, name))


def _unknown(place: str, key: str) -> str:
    return f'{place}: "{key}" is not known here; it is kept as it stands'
