"""The context menu of a block, a link or an empty place. Kinds come from the engine, by family."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QMenu

from app import edits
from app.families import families, kind_of
from app.gestures import Hit
from app.gestures.base import Place
from engine.project import Changes

if TYPE_CHECKING:
    from .view import PathView

#: One key for one thing, wherever it is named.
KEYS = {
    "copy": "Ctrl+C", "cut": "Ctrl+X", "paste": "Ctrl+V", "duplicate": "Ctrl+D", "delete": "Del", "rename": "F2",
    "count": "N", "link": "L", "all": "Ctrl+A",
}  # fmt: skip


def build_menu(view: PathView, hit: Hit, place: Place) -> QMenu:
    """The menu for what lies there; the view has already selected it."""
    menu = QMenu(view)
    commands, project = view.commands, view.project
    if hit.what in ("stage", "output", "input"):
        key = hit.id
        _add(menu, "Rename", "rename", view.rename_current)
        _add(menu, "How many alike…", "count", view.count_current)
        _add(menu, "Link to…", "link", view.start_link, enabled=bool(project.stage[key].outputs()))
        menu.addSeparator()
        _kinds(menu, "Add behind", lambda kind: commands.add(kind, "behind"),
               lambda kind: edits.add_behind(project, kind, key))  # fmt: skip
        _kinds(menu, "Branch to", lambda kind: commands.add(kind, "branch"),
               lambda kind: edits.branch_from(project, kind, key))  # fmt: skip
        _kinds(menu, "Add ahead", lambda kind: commands.add(kind, "ahead"),
               lambda kind: edits.add_ahead(project, kind, key))  # fmt: skip
        menu.addSeparator()
        _add(menu, "Cut", "cut", commands.cut)
        _add(menu, "Copy", "copy", commands.copy)
        _add(menu, "Duplicate", "duplicate", commands.duplicate)
        _add(menu, "Delete", "delete", commands.delete)
    elif hit.what == "link":
        key = hit.id
        _kinds(menu, "Insert", lambda kind: commands.add(kind, "behind"),
               lambda kind: edits.insert_on_link(project, kind, key))  # fmt: skip
        _options(menu, view, key)
        menu.addSeparator()
        _add(menu, "Delete link", "delete", commands.delete)
    else:
        _kinds(menu, "Add here", lambda kind: commands.add_at(kind, place), None)
        menu.addSeparator()
        _add(menu, "Paste here", "paste", lambda: commands.paste(place))
        _add(menu, "Select all", "all", commands.select_all)
    return menu


def _add(menu: QMenu, text: str, key: str, run: Callable[[], object], *, enabled: bool = True) -> None:
    action = QAction(text, menu)
    action.setShortcut(QKeySequence(KEYS[key]))
    action.setShortcutVisibleInContextMenu(True)
    action.setEnabled(enabled)
    action.triggered.connect(lambda _checked=False: run())
    menu.addAction(action)


def _kinds(
    menu: QMenu, text: str, run: Callable[[str], None], may_be: Callable[[str], Changes] | None
) -> None:
    """A submenu of the kinds that fit, family by family; worked out when it opens."""
    below = menu.addMenu(text)
    below.aboutToShow.connect(partial(_fill, below, run, may_be))


def _fill(below: QMenu, run: Callable[[str], None], may_be: Callable[[str], Changes] | None) -> None:
    below.clear()
    for family, kinds in families().items():
        fitting = [kind for kind in kinds if may_be is None or _fits(may_be, kind_of(kind))]
        if fitting:
            below.addSection(family)
        for kind in fitting:
            action = below.addAction(kind.title)
            action.setToolTip(kind.help)
            action.triggered.connect(partial(_run, run, kind_of(kind)))
    if below.isEmpty():
        below.addAction("Nothing fits here").setEnabled(False)


def _run(run: Callable[[str], None], kind: str, _checked: bool = False) -> None:
    run(kind)


def _fits(may_be: Callable[[str], Changes], kind: str) -> bool:
    try:
        may_be(kind)
    except ValueError:
        return False
    return True


def _options(menu: QMenu, view: PathView, key: str) -> None:
    """The link's own choices."""
    link = view.project.link[key]
    for name, spec in link.option_specs().items():
        below = menu.addMenu(spec.label)
        for choice in spec.choices:
            action = below.addAction(choice[:1].upper() + choice[1:])
            action.setCheckable(True)
            action.setChecked(getattr(link, name) == choice)
            action.triggered.connect(
                lambda _checked=False, name=name, choice=choice: view.commands.set_option(key, name, choice)
            )
