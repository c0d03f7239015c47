"""Setting what a stage, a link or the project holds: name, control, figure, option, count, place."""

from __future__ import annotations

from typing import Any, Literal

from pydantic import ValidationError

from engine.figures import Figure
from engine.project import HEADER_KEY, Changes, Header, Item, Link, Project
from engine.stages import Setting, Stage
from engine.stages.declare import State

from .draft import reason

Origin = Literal["sheet", "measured", "guess"]


def rename(project: Project, key: str, name: str) -> Changes:
    """Give a stage, or the project, another name. Raises ValueError where it is empty or too long."""
    item = _item(project, key)
    clean = " ".join(name.split())
    if not clean:
        raise ValueError(f"{item.called} needs a name: type at least one letter")
    if len(clean) > 80:
        raise ValueError(f"a name has at most 80 letters: this one has {len(clean)}")
    return _with(project, key, name=clean)


def set_control(project: Project, key: str, name: str, value: float | None) -> Changes:
    """Move a control, to the nearest position it has; None or minus infinity is off."""
    stage = _stage(project, key)
    if value is not None:
        place = stage.control_range(name).nearest(value)
        value = None if place == float("-inf") else place
    return _changed(project, stage, lambda: stage.with_control(name, value))


def set_state(project: Project, key: str, name: str, state: State) -> Changes:
    """Lock a control, free it, or leave it to the operator."""
    return _setting(project, key, name, state=state)


def set_panel(project: Project, key: str, name: str, panel: str | None) -> Changes:
    """The person's own marking for where a control stands; None or empty takes it away."""
    return _setting(project, key, name, panel=(panel or "").strip() or None)


def set_figure(
    project: Project, key: str, name: str, text: str | None, *,
    origin: Origin | None = None, tolerance: str | Literal["keep"] | None = "keep",
) -> Changes:  # fmt: skip
    """Type a figure of a stage, a link or the project; a numbered name ("rated_power_w.1") is one of several.

    None or empty takes the figure away where it may be absent. Without an `origin` a guess that is typed anew comes
    from the sheet. A control that the figure leaves outside its range goes to its nearest position. Raises ValueError,
    naming figure and remedy.
    """
    item = _item(project, key)
    field, _, number = name.partition(".")
    if field not in item.figure_specs():
        raise ValueError(f"{item.called} has no figure {field!r}")
    spec = item.figure_specs()[field]
    many = spec.many
    old = getattr(item, field)
    row = tuple(old or ()) if many else ()
    place = int(number) if number else len(row)
    before: Figure | None = (row[place] if place < len(row) else None) if many else old
    clean = (text or "").strip()
    if not clean and not spec.optional and not many:
        raise ValueError(f"{spec.label} of {item.called} is missing: give it, such as {spec.typical}")
    after = None if not clean else _typed(before, clean, origin, tolerance)
    fields: dict[str, Any] = {field: after}
    if many:
        fields[field] = (*row[:place], *((after,) if after else ()), *row[place + 1 :])
    return _changed(project, item, lambda: _with_controls_in_range(project, item, fields))


def set_option(project: Project, key: str, name: str, value: Any) -> Changes:
    """Choose how a stage, a link or the project is built. Raises `LinkError` where a linked port would vanish."""
    item = _item(project, key)
    if name not in item.option_specs():
        raise ValueError(f"{item.called} has no option {name!r}")
    changes = _changed(project, item, lambda: _with_controls_in_range(project, item, {name: value}))
    project.with_changes(changes)
    return changes


def set_count(project: Project, keys: str | list[str] | frozenset[str], count: int) -> Changes:
    """How many alike stages stand for, all of them together. Raises `LinkError` where neighbours do not match."""
    changes: dict[str, tuple[Item | None, Item | None]] = {}
    for key in [keys] if isinstance(keys, str) else keys:
        changes.update(_with(project, key, count=count))
    project.with_changes(changes)
    return changes


def set_place(project: Project, key: str, **fields: str | None) -> Changes:
    """Where a stage is found: `rack`, `area`, and its `note`; empty takes it away."""
    unknown = set(fields) - {"rack", "area", "note"}
    if unknown:
        raise ValueError(f"a stage has no {', '.join(sorted(unknown))}: it has rack, area and note")
    return _with(project, key, **{name: (text or "").strip() or None for name, text in fields.items()})


def set_header(project: Project, **fields: Any) -> Changes:
    """Name, revision, status, author, note of the project; its figures go through `set_figure`."""
    return _with(project, HEADER_KEY, **fields)


def _typed(
    before: Figure | None, text: str, origin: Origin | None, tolerance: str | Literal["keep"] | None
) -> Figure:
    old = before or Figure(text=text, origin="sheet")
    update: dict[str, Any] = {"text": text}
    if origin is not None:
        update["origin"] = origin
    elif before is not None and before.text != text and before.origin == "guess":
        update["origin"] = "sheet"
    if tolerance != "keep":
        update["tolerance"] = (tolerance or "").strip() or None
    return Figure.model_validate({**dict(old), **update})


def _with_controls_in_range(project: Project, item: Item, fields: dict[str, Any]) -> Item:
    """The item with these fields; a control left out of range by them is set to its nearest position."""
    try:
        changed: Item = item.with_fields(**fields)
    except ValidationError:
        if not isinstance(item, Stage):
            raise
        changed = item.with_fields(**fields, **_nearest(item, fields))
    if isinstance(changed, Stage):
        _refuse_impossible(project, changed)
    return changed


def _nearest(stage: Stage, fields: dict[str, Any]) -> dict[str, Setting]:
    trial = stage.model_copy(update=fields)
    moved: dict[str, Setting] = {}
    for name, _spec, setting in stage.controls():
        try:
            ends = trial.control_range(name)
        except (ValueError, AttributeError):
            continue  # the figure itself cannot be read: the second attempt says so
        if setting.value is not None:
            place = ends.nearest(setting.value)
            outside = not (ends.low <= setting.value <= ends.high) or ends.choices
            if outside and place != setting.value and place != float("-inf"):
                moved[name] = setting.model_copy(update={"value": place})
    return moved


def _refuse_impossible(project: Project, stage: Stage) -> None:
    values = stage.values().replaced({"temperature_k": project.header.temperature_k})
    for why in stage.check(values, project.axis()):
        raise ValueError(why)


def _setting(project: Project, key: str, name: str, **update: Any) -> Changes:
    stage = _stage(project, key)
    if name not in stage.control_specs():
        raise ValueError(f"{stage.name} has no control {name!r}")
    setting: Setting = getattr(stage, name).model_copy(update=update)
    return _changed(project, stage, lambda: stage.with_fields(**{name: setting}))


def _with(project: Project, key: str, **fields: Any) -> Changes:
    item = _item(project, key)
    return _changed(project, item, lambda: item.with_fields(**fields))


def _changed(project: Project, item: Item, make: Any) -> Changes:
    """The change of one item; nothing where it stays as it was. Pydantic's wrapping of a refusal is taken off."""
    key = HEADER_KEY if isinstance(item, Header) else item.id
    try:
        after = make()
    except ValidationError as error:
        raise ValueError(reason(error)) from error
    return {} if after == item else {key: (item, after)}


def _item(project: Project, key: str) -> Stage | Link | Header:
    item = project.item(key)
    if item is None:
        raise ValueError(f"there is no stage or link {key!r} in this project")
    return item


def _stage(project: Project, key: str) -> Stage:
    item = _item(project, key)
    if not isinstance(item, Stage):
        raise ValueError(f"{item.called} has no controls")
    return item
