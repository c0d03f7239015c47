"""The stage card: what is selected, everything about it in one place; nothing selected: the project."""

from __future__ import annotations

from collections.abc import Mapping

from PySide6.QtCore import QSize, Qt, QTimer
from PySide6.QtWidgets import QApplication, QScrollArea, QVBoxLayout, QWidget

from app.document import Document
from app.inks import Inks
from engine.outcome import Outcome

from .contents import Contents, contents_of
from .hand import Hand
from .pane import Pane
from .pieces import card_sheet
from .scene import Scene
from .slider import WheelGate

WIDTH_PX = 300
Place = tuple[object, str]  # the row that has the keyboard, and which part of it


class StageCard(QWidget):
    """Follows a document's selection. Rows are built anew only where there must be others; values change in place."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("stageCard")
        self.document = document
        self._gate = WheelGate()
        self._soon = QTimer(self, singleShot=True, interval=0)
        self._soon.timeout.connect(self._build)
        self._scene = Scene(document, inks, Hand(document), self._gate.is_open, self._soon.start)
        self._touch = False
        self.builds = 0  # counted for the tests
        self.pane: Pane | None = None
        self.area = QScrollArea()
        self.area.setWidgetResizable(True)
        self.area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.area.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.area.viewport().setFocusProxy(None)  # type: ignore[arg-type]  # it would hand the keyboard to the area nevertheless
        self.area.verticalScrollBar().valueChanged.connect(lambda _value: self._gate.scrolled())
        body = QVBoxLayout(self)
        body.setContentsMargins(0, 0, 0, 0)
        body.addWidget(self.area)
        self.setMinimumWidth(240)
        self.setStyleSheet(card_sheet(inks))
        application = QApplication.instance()
        assert isinstance(application, QApplication)
        application.focusChanged.connect(self._keep_in_view)
        document.changed.connect(self._changed)
        document.solved.connect(self._solved)
        document.selection_changed.connect(self._selected)
        self._build()

    def sizeHint(self) -> QSize:
        return QSize(WIDTH_PX, 480)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._scene.inks = inks
        self.setStyleSheet(card_sheet(inks, touch=self._touch))
        self._build()

    def set_touch(self, on: bool) -> None:
        """Make everything large enough for fingers, or not."""
        self._touch = on
        self.set_inks(self._scene.inks)

    # -- following -------------------------------------------------------------------------------------------
    def _changed(self, _changes: Mapping[str, object]) -> None:
        moving = self.document.gesture_open  # a hand moves values only
        if not moving and self._wanted() != self._contents():
            self._soon.start()
        elif self.pane is not None:
            self.pane.show_project(self.document.project)

    def _solved(self, outcome: Outcome) -> None:
        if self.pane is not None and not self._soon.isActive():
            self.pane.show_outcome(outcome)

    def _selected(self, _selection: frozenset[str]) -> None:
        self._scene.opened.clear()
        self._scene.wanted = None
        self._build()
        self.area.verticalScrollBar().setValue(0)

    def _wanted(self) -> Contents:
        return contents_of(self.document.project, self.document.selection, self._scene.opened)

    def _contents(self) -> Contents | None:
        return None if self.pane is None else self.pane.contents

    # -- building --------------------------------------------------------------------------------------------
    def _build(self) -> None:
        """Put other rows in place of these; the keyboard and the view stay where they are, as far as they can."""
        kept, scrolled = self._focus(), self.area.verticalScrollBar().value()
        old = self.area.takeWidget()  # what is being typed is taken now, as by leaving it
        self.pane = None
        self._soon.stop()
        if old is not None:
            old.hide()
            old.deleteLater()
        contents = self._wanted()
        self._scene.opened &= {
            (key, name.partition(".")[0]) for key in contents.keys[:1] for name in contents.figures
        }
        self.pane = Pane(self._scene, contents)
        self.builds += 1
        self.pane.show_project(self.document.project)
        if self.document.outcome.project.same_as(self.document.project):
            self.pane.show_outcome(self.document.outcome)
        self.area.setWidget(self.pane)
        self.setFocusProxy(self.pane.first)  # type: ignore[arg-type]  # None is none
        self.area.verticalScrollBar().setValue(scrolled)
        self._restore(kept)

    def _keep_in_view(self, _before: QWidget | None, now: QWidget | None) -> None:
        """Scroll to what the keyboard has come to; a mouse is where it points already."""
        by_mouse = QApplication.mouseButtons() != Qt.MouseButton.NoButton
        if now is not None and self.pane is not None and not by_mouse and self.pane.isAncestorOf(now):
            self.area.ensureWidgetVisible(now, 0, 40)

    def _focus(self) -> Place | None:
        focused = QApplication.focusWidget()
        if self.pane is None or focused is None:
            return None
        for row in self.pane.rows:
            if row is focused or row.isAncestorOf(focused):
                return (_identity(row), focused.accessibleName())
        return None

    def _restore(self, kept: Place | None) -> None:
        assert self.pane is not None
        wanted, self._scene.wanted = self._scene.wanted, None
        for row in self.pane.rows:
            if wanted is not None and wanted == (getattr(row, "keys", None), getattr(row, "name", None)):
                row.setFocus(Qt.FocusReason.OtherFocusReason)
                return
            if wanted is None and kept is not None and _identity(row) == kept[0]:
                parts = [part for part in row.findChildren(QWidget) if part.accessibleName() == kept[1]]
                (parts[0] if parts and kept[1] else row).setFocus(Qt.FocusReason.OtherFocusReason)
                return


def _identity(row: QWidget) -> object:
    return (type(row), getattr(row, "keys", None), getattr(row, "name", None))
