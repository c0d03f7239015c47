"""Questions to the person, as something that can be handed in: dialogs in the window, answers written down in tests."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Literal, Protocol

from PySide6.QtWidgets import QFileDialog, QMessageBox, QPushButton, QWidget

from engine.store import SUFFIX

SaveFirst = Literal["save", "discard", "cancel"]
Recovered = Literal["open", "later", "discard"]

PROJECTS = f"Gainwright projects (*{SUFFIX})"


class Ask(Protocol):
    """What the window may ask or tell."""

    def save_first(self, name: str) -> SaveFirst:
        """The project has unsaved changes and is about to be left."""

    def recover(self, text: str) -> Recovered:
        """There is unsaved work of a window that is no more."""

    def confirm(self, title: str, text: str, yes: str) -> bool:
        """May this be done? `yes` names the doing."""

    def tell(self, title: str, text: str) -> None:
        """Something the person has to know before they go on."""

    def open_path(self, folder: Path) -> Path | None:
        """Which project to open."""

    def open_file(self, title: str, folder: Path, kinds: Sequence[str]) -> Path | None:
        """Which other file to read. `kinds` are file dialogs' filters."""

    def save_path(self, title: str, suggested: Path, kinds: Sequence[str]) -> Path | None:
        """Where to save. `kinds` are file dialogs' filters, the usual one first."""


class Dialogs:
    """Asks in dialogs over the window."""

    def __init__(self, parent: QWidget | None = None) -> None:
        self.parent = parent

    def save_first(self, name: str) -> SaveFirst:
        box = self._box("Unsaved changes", f"“{name}” has changes that are not saved.")
        box.setInformativeText("Save them before it is closed?")
        save = box.addButton("Save", QMessageBox.ButtonRole.AcceptRole)
        discard = box.addButton("Don’t save", QMessageBox.ButtonRole.DestructiveRole)
        box.addButton("Cancel", QMessageBox.ButtonRole.RejectRole)
        clicked = _answer(box, save)
        return "save" if clicked is save else "discard" if clicked is discard else "cancel"

    def recover(self, text: str) -> Recovered:
        box = self._box("Unsaved work was found", "Gainwright was closed before this work was saved.")
        box.setInformativeText(text)
        opened = box.addButton("Open it", QMessageBox.ButtonRole.AcceptRole)
        discard = box.addButton("Throw it away", QMessageBox.ButtonRole.DestructiveRole)
        box.addButton("Decide later", QMessageBox.ButtonRole.RejectRole)
        clicked = _answer(box, opened)
        return "open" if clicked is opened else "discard" if clicked is discard else "later"

    def confirm(self, title: str, text: str, yes: str) -> bool:
        box = self._box(title, title)
        box.setInformativeText(text)
        agreed = box.addButton(yes, QMessageBox.ButtonRole.AcceptRole)
        cancel = box.addButton("Cancel", QMessageBox.ButtonRole.RejectRole)
        return _answer(box, cancel) is agreed

    def tell(self, title: str, text: str) -> None:
        box = self._box(title, title)
        box.setInformativeText(text)
        _answer(box, box.addButton("OK", QMessageBox.ButtonRole.AcceptRole))

    def open_file(self, title: str, folder: Path, kinds: Sequence[str]) -> Path | None:
        name, _ = QFileDialog.getOpenFileName(self.parent, title, str(folder), ";;".join(kinds))
        return Path(name) if name else None

    def open_path(self, folder: Path) -> Path | None:
        name, _ = QFileDialog.getOpenFileName(self.parent, "Open a project", str(folder), PROJECTS)
        return Path(name) if name else None

    def save_path(self, title: str, suggested: Path, kinds: Sequence[str]) -> Path | None:
        name, chosen = QFileDialog.getSaveFileName(self.parent, title, str(suggested), ";;".join(kinds))
        if not name:
            return None
        path = Path(name)
        return path if path.suffix else path.with_suffix(_suffix(chosen or kinds[0]))

    def _box(self, title: str, text: str) -> QMessageBox:
        box = QMessageBox(self.parent)
        box.setWindowTitle(title)
        box.setText(text)
        return box


def _answer(box: QMessageBox, usual: QPushButton) -> object:
    box.setDefaultButton(usual)
    box.exec()
    return box.clickedButton()


def _suffix(kind: str) -> str:
    """The suffix a filter such as "PDF (*.pdf)" stands for."""
    return kind.rpartition("*")[2].rstrip(") ")
