"""Everything the menus and shortcuts can do, by name."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtGui import QAction, QActionGroup, QKeySequence

from .diagram.scale import UNITS
from .inks import SCHEMES

if TYPE_CHECKING:
    from .window import MainWindow


def make_actions(window: MainWindow) -> Mapping[str, QAction]:
    """The window's actions, connected and with their keys; each belongs to the window."""
    found: dict[str, QAction] = {}
    files, exports, centre, commands = (
        window.files,
        window.exports,
        window.centre,
        window.centre.path.commands,
    )

    def add(name: str, text: str, keys: str, run: Callable[[], object], tip: str = "") -> QAction:
        action = QAction(text, window)
        action.setShortcuts([QKeySequence(key) for key in keys.split("  ") if key])
        action.triggered.connect(lambda _checked=False: run())
        if tip:
            action.setToolTip(tip)
        window.addAction(action)
        found[name] = action
        return action

    def in_path(name: str, text: str, key: str, run: Callable[[], object]) -> None:
        """A key that means this only while the path has the keyboard."""
        action = add(name, text, key, run)
        action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        window.removeAction(action)

    def choose(
        name: str, text: str, group: QActionGroup, run: Callable[[], object], keys: str = "", short: str = ""
    ) -> None:
        action = add(name, text, keys, run)
        action.setIconText(short or text)
        action.setCheckable(True)
        group.addAction(action)

    add("new", "&New", "Ctrl+N", files.new)
    add("open", "&Open…", "Ctrl+O", files.open)
    add("save", "&Save", "Ctrl+S", files.save)
    add("save_as", "Save &as…", "Ctrl+Shift+S", files.save_as)
    add("revert", "&Revert to saved", "", files.revert)
    add("sheets_pdf", "Save sheets as P&DF…", "Ctrl+Shift+E", exports.write_sheets)
    add("diagram", "Save level dia&gram…", "Ctrl+E", window.write_diagram)
    add("preview", "Pre&view sheets…", "Ctrl+Shift+P", exports.preview_sheets)
    add("print", "&Print…", "Ctrl+P", exports.print_sheets, "Print the level diagram and the sheets")
    add(
        "recording",
        "Read a &recording…",
        "Ctrl+R",
        window.recordings.choose,
        "Look at the show's own programme, and use it",
    )
    add(
        "propose",
        "P&ropose settings…",
        "Ctrl+Shift+R",
        window.propose_settings,
        "Work out where every free control should stand",
    )
    add("venue", "&Venue and conditions…", "F4", window.edit_venue)
    add("quit", "&Quit", "Ctrl+Q", window.close)

    stack = window.document.undo_stack
    for name, made, keys in (
        ("undo", stack.createUndoAction(window, "&Undo"), "Ctrl+Z"),
        ("redo", stack.createRedoAction(window, "&Redo"), "Ctrl+Shift+Z  Ctrl+Y"),
    ):
        made.setShortcuts([QKeySequence(key) for key in keys.split("  ")])
        made.setIconText(name.capitalize())  # a button keeps its width, whatever is undone
        window.addAction(made)
        found[name] = made
    add("cut", "Cu&t", "Ctrl+X", commands.cut)
    add("copy", "&Copy", "Ctrl+C", commands.copy)
    add("paste", "&Paste", "Ctrl+V", commands.paste)
    add("duplicate", "D&uplicate", "Ctrl+D", commands.duplicate)
    add("select_all", "Select &all", "Ctrl+A", commands.select_all)
    in_path("delete", "&Delete", "Del", commands.delete)
    in_path("rename", "Re&name", "F2", centre.path.rename_current)
    in_path("link", "&Link to…", "L", centre.path.start_link)
    add("add", "Add a &stage…", "Ctrl+K", window.go_to_shelf)

    add("zoom_in", "Zoom &in", "Ctrl++  Ctrl+=", lambda: centre.zoom(1.15))
    add("zoom_out", "Zoom &out", "Ctrl+-", lambda: centre.zoom(1 / 1.15))
    add("fit", "Show the &whole path", "Ctrl+0", centre.fit)
    units, views, schemes = QActionGroup(window), QActionGroup(window), QActionGroup(window)
    for place, unit in enumerate(UNITS):
        choose(
            f"unit {unit}",
            f"Levels in {unit}",
            units,
            partial(window.set_unit, unit),
            f"Ctrl+{place + 1}",
            unit,
        )
    choose("view levels", "&Levels", views, lambda: window.set_view("levels"), "Ctrl+4", "Levels")
    choose(
        "view to clip",
        "Referred to the &clip point",
        views,
        lambda: window.set_view("to clip"),
        "Ctrl+5",
        "To clip",
    )
    hold = add(
        "hold", "&Hold trace", "Ctrl+H", lambda: None, "Keep the lines as they are now, to compare with"
    )
    hold.setCheckable(True)
    hold.toggled.connect(window.hold)
    for scheme in SCHEMES:
        choose(
            f"scheme {scheme}",
            scheme[:1].upper() + scheme[1:],
            schemes,
            partial(window.set_scheme, scheme),
        )
    touch = add("touch", "&Touch size", "", lambda: None)
    touch.setCheckable(True)
    touch.toggled.connect(window.set_touch)
    add("next_pane", "Next &part of the window", "F6", lambda: window.step_pane(1))
    add("previous_pane", "Previous part of the window", "Shift+F6", lambda: window.step_pane(-1))

    add("keys", "&Keys", "F1", window.show_keys)
    add("about", "&About and cautions", "", window.show_about)
    return found
