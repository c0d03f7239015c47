"""Which actions stand in which menu."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtGui import QAction
from PySide6.QtWidgets import QMenu, QMenuBar

from . import places
from .inks import SCHEMES

if TYPE_CHECKING:
    from .window import MainWindow

#: Menus by title: names of actions, "-" a line, "=recent" and "=samples" menus filled when opened.
MENUS: Mapping[str, tuple[str, ...]] = {
    "&File": (
        "new", "open", "=recent", "=samples", "-", "save", "save_as", "revert", "-",
        "venue", "recording", "-", "preview", "print", "sheets_pdf", "diagram", "-", "quit",
    ),
    "&Edit": (
        "undo", "redo", "-", "cut", "copy", "paste", "duplicate", "delete", "select_all", "-",
        "add", "link", "rename", "-", "propose",
    ),
    "&View": (
        "zoom_in", "zoom_out", "fit", "-", "unit dBu", "unit dBV", "unit V", "-", "view levels", "view to clip", "hold", "-",
        *(f"scheme {scheme}" for scheme in SCHEMES), "touch", "-", "next_pane", "previous_pane",
    ),
    "&Help": ("keys", "about"),
}  # fmt: skip


def build_menus(window: MainWindow, actions: Mapping[str, QAction]) -> QMenuBar:
    """The menu bar; it is put into the top line."""
    bar = QMenuBar()
    for title, names in MENUS.items():
        menu = bar.addMenu(title)
        menu.setToolTipsVisible(True)
        for name in names:
            if name == "-":
                menu.addSeparator()
            elif name == "=recent":
                below = menu.addMenu("Open &recent")
                below.aboutToShow.connect(lambda below=below: _fill_recent(window, below))
            elif name == "=samples":
                _fill_samples(window, menu.addMenu("Sa&mple projects"))
            else:
                menu.addAction(actions[name])
    return bar


def _fill_recent(window: MainWindow, menu: QMenu) -> None:
    menu.clear()
    recent = window.memory.recent
    for number, path in enumerate(recent, 1):
        action = menu.addAction(f"&{number % 10}  {_shown(path)}")
        action.setToolTip(str(path))
        action.triggered.connect(lambda _checked=False, path=path: window.files.open(path))
    if recent:
        menu.addSeparator()
    forget = menu.addAction("Forget them")
    forget.setEnabled(bool(recent))
    forget.triggered.connect(lambda _checked=False: window.memory.forget_recent())


def _fill_samples(window: MainWindow, menu: QMenu) -> None:
    for path in places.sample_projects():
        action = menu.addAction(path.stem.replace("_", " ").capitalize())
        action.triggered.connect(lambda _checked=False, path=path: window.files.open_copy(path))
    menu.menuAction().setEnabled(not menu.isEmpty())


def _shown(path: Path) -> str:
    """A file and the folder it is in; ampersands are letters here."""
    return f"{path.stem} – {path.parent.name or path.parent}".replace("&", "&&")
