"""What each key does in the path, and what is said of where the keyboard is."""

from __future__ import annotations

from collections.abc import Callable, Collection
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent

from app.gestures import Hit
from engine.project import Project

from . import travel

if TYPE_CHECKING:
    from .view import PathView

Commit = Callable[[str], bool]
Key, Mod = Qt.Key, Qt.KeyboardModifier

ARROWS: dict[int, travel.Way] = {
    Key.Key_Left: "left", Key.Key_Right: "right", Key.Key_Up: "up", Key.Key_Down: "down",
}  # fmt: skip
_PLAIN: dict[int, Callable[[PathView], object]] = {
    Key.Key_Delete: lambda view: view.commands.delete(),
    Key.Key_Backspace: lambda view: view.commands.delete(),
    Key.Key_F2: lambda view: view.rename_current(),
    Key.Key_N: lambda view: view.count_current(),
    Key.Key_L: lambda view: view.start_link(),
    Key.Key_Insert: lambda view: view.ask_for_kind(),
    Key.Key_Home: lambda view: view.go_to(travel.first_stage(view.grid)),
    Key.Key_End: lambda view: view.go_to(travel.last_stage(view.grid)),
    Key.Key_Return: lambda view: view.ask_for_card(),
    Key.Key_Enter: lambda view: view.ask_for_card(),
    Key.Key_Menu: lambda view: view.open_menu_at_current(),
    Key.Key_Plus: lambda view: view.zoom(1.15),
    Key.Key_Minus: lambda view: view.zoom(1 / 1.15),
}
_WITH_CONTROL: dict[int, Callable[[PathView], object]] = {
    Key.Key_C: lambda view: view.commands.copy(),
    Key.Key_X: lambda view: view.commands.cut(),
    Key.Key_V: lambda view: view.commands.paste(),
    Key.Key_D: lambda view: view.commands.duplicate(),
    Key.Key_A: lambda view: view.commands.select_all(),
}
_WITHIN_A_LINK = {Key.Key_Return, Key.Key_Enter, Key.Key_L, Key.Key_Escape, *ARROWS}


def handle(view: PathView, event: QKeyEvent) -> bool:
    """Do what a key asks; says whether it was ours."""
    key = event.key()
    modifiers = event.modifiers() & ~Mod.KeypadModifier
    if key == Key.Key_Escape:
        return _escape(view)
    if view.hand.link_keys is not None and key in _WITHIN_A_LINK and modifiers == Mod.NoModifier:
        _within_a_link(view, key)
        return True
    if key in ARROWS:
        return _arrow(view, ARROWS[key], modifiers)
    if modifiers == Mod.ControlModifier:
        found = _WITH_CONTROL.get(key)
    elif key == Key.Key_F10 and modifiers == Mod.ShiftModifier:
        found = _PLAIN[Key.Key_Menu]
    elif modifiers == Mod.NoModifier or (modifiers == Mod.ShiftModifier and key == Key.Key_Plus):
        found = _PLAIN.get(key)
    else:
        found = None
    if found is None:
        return False
    view.hand.link_keys = None
    found(view)
    return True


def is_ours(event: QKeyEvent) -> bool:
    """Whether a key with a shortcut elsewhere means something of ours while the path has the keyboard."""
    modifiers = event.modifiers() & ~Mod.KeypadModifier
    if modifiers == Mod.ControlModifier:
        return event.key() in _WITH_CONTROL
    return modifiers == Mod.NoModifier and event.key() in {*_PLAIN, *ARROWS, Key.Key_Escape}


def _escape(view: PathView) -> bool:
    busy = view.hand.busy
    view.cancel()
    if not busy:
        if not view.document.selection:
            return False
        view.document.select(())
    return True


def _within_a_link(view: PathView, key: int) -> None:
    assert view.hand.link_keys is not None
    if key in (Key.Key_Return, Key.Key_Enter):
        view.hand.confirm_link()
        return
    if key == Key.Key_L:
        view.hand.link_keys.next_output()
    else:
        view.hand.link_keys.step(ARROWS[key])
    view.hand.announce_link()


def _arrow(view: PathView, way: travel.Way, modifiers: Qt.KeyboardModifier) -> bool:
    if modifiers == Mod.AltModifier:
        view.commands.move(*travel.STEPS[way])
    elif modifiers in (Mod.NoModifier, Mod.ShiftModifier, Mod.ControlModifier):
        view.go(way, extend=modifiers == Mod.ShiftModifier, to_link=modifiers == Mod.ControlModifier)
    else:
        return False
    return True


def described(project: Project, current: str, selection: Collection[str]) -> str:
    """Where the keyboard is, as a screen reader says it."""
    if not project.stages:
        return "Empty: add a first stage from the shelf"
    if current in project.stage:
        stage = project.stage[current]
        around = project.topology
        feeds = ", ".join(project.stage[link.source].name for link in around.into[current]) or "nothing"
        fed = ", ".join(project.stage[link.target].name for link in around.out_of[current]) or "nothing"
        alike = f", {stage.count} alike" if stage.count > 1 else ""
        more = f"; {len(selection)} selected" if len(selection) > 1 else ""
        return f"{stage.name}{alike}, {stage.title}, {stage.summary()}; fed by {feeds}; feeds {fed}{more}"
    if current in project.link:
        link = project.link[current]
        return f"Link from {project.stage[link.source].name} to {project.stage[link.target].name}"
    return f"{len(project.stages)} stages, nothing selected"


def tip(project: Project, hit: Hit) -> str:
    """What the pointer says over a port or a block that may be cut short."""
    if hit.what in ("output", "input"):
        stage = project.stage[hit.id]
        ports = stage.outputs() if hit.what == "output" else stage.inputs()
        port = next(port for port in ports if port.name == hit.port)
        label = port.label or (hit.port.replace("_", " ") if len(ports) > 1 else hit.what)
        return f"{stage.name}: {label} ({port.domain}). Drag to link."
    if hit.what == "stage":
        stage = project.stage[hit.id]
        alike = f" ×{stage.count}" if stage.count > 1 else ""
        return f"{stage.name}{alike}, {stage.summary()}" if stage.summary() else f"{stage.name}{alike}"
    return ""
