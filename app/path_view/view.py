"""The signal path: blocks on the grid, links between them, and a hand or a keyboard at work on both."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise

from PySide6.QtCore import QEvent, QPoint, QRect, QSize, Qt, QTimer, Signal
from PySide6.QtGui import (
    QContextMenuEvent,
    QFocusEvent,
    QKeyEvent,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QResizeEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QScrollBar, QSizePolicy, QWidget

from app.columns import Columns
from app.document import Document
from app.gestures import Hit
from app.gestures.base import Box, Place
from app.inks import Inks
from engine.project import Header, Link, Project
from engine.stages import Stage

from . import keys, paint, travel
from .commands import Commands
from .hand import Hand
from .in_place import InPlaceField
from .layout import Layout
from .menu import build_menu
from .touch import TOUCHES, Touch

NOTE_STAYS_MS = 6000
WHEEL_STEP = 120.0
EXTENDING = Qt.KeyboardModifier.ShiftModifier | Qt.KeyboardModifier.ControlModifier


class PathView(QWidget):
    """Shows and edits the signal path of a document, on the columns it shares with the level diagram."""

    said = Signal(str)  # in words what was refused or done: for a status line and for screen readers
    shelf_wanted = Signal()  # the person asked for a kind to add
    card_wanted = Signal(str)  # the person asked for a stage's controls
    _touch: Touch | None = None  # events come in while the view is still being made

    def __init__(
        self, document: Document, columns: Columns, inks: Inks, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.document: Document = document
        self.columns: Columns = columns
        self.inks: Inks = inks
        self.grid: Layout = Layout(document.project, columns)
        self.commands: Commands = Commands(self)
        self.hand: Hand = Hand(self)
        self.current = ""  # the stage or link that the keyboard is at
        self.note, self.note_refused = "", False
        self.shown: frozenset[tuple[str, str]] = frozenset()  # what feeds what on the path that is followed
        self._touch = Touch(self)
        self._field = InPlaceField(self)
        self._bar = QScrollBar(Qt.Orientation.Vertical, self)
        self._bar.setAccessibleName("Rows of the signal path")
        self._bar.valueChanged.connect(self._scrolled)
        self._note_timer = QTimer(self, singleShot=True, interval=NOTE_STAYS_MS)
        self._note_timer.timeout.connect(self.hush)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAttribute(Qt.WidgetAttribute.WA_AcceptTouchEvents)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setAccessibleName("Signal path")
        columns.changed.connect(self._columns_changed)
        document.changed.connect(self._project_changed)
        document.selection_changed.connect(self._selection_changed)
        self._describe()

    # -- what gestures ask -----------------------------------------------------------------------------------
    @property
    def project(self) -> Project:
        """The project as it is now."""
        return self.document.project

    def hit(self, x: float, y: float, *, reach: float = 6.0, carrying: bool = False) -> Hit:
        """What lies at a point."""
        return self.grid.hit(x, y, reach=reach, carrying=carrying)

    def place(self, x: float, y: float) -> Place:
        """The grid place at a point."""
        return self.grid.place(x, y)

    def inside(self, box: Box) -> frozenset[str]:
        """The stages that a rectangle touches."""
        return self.grid.inside(box)

    # -- what others do with it ------------------------------------------------------------------------------
    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.inks = inks
        self.update()

    def show_path(self, path: Sequence[str]) -> None:
        """Draw the links of one path stronger: the one that the level diagram follows."""
        self.shown = frozenset(pairwise(path))
        self.update()

    def carry(self, kind: str, at: QPoint) -> bool:
        """A kind from the shelf is at this point of the screen; says whether a drop there would do something."""
        return self.hand.carry(kind, self.mapFromGlobal(at))

    def drop(self) -> bool:
        """Let go of what is carried; says whether something came of it."""
        return self.hand.release()

    def cancel(self) -> None:
        """Drop whatever a hand or the keyboard is in the middle of."""
        self.hand.cancel()

    def say(self, text: str, *, refused: bool = False) -> None:
        """Tell the person something where they are looking."""
        self.note, self.note_refused = text, refused
        self._note_timer.start()
        self.said.emit(text)
        self.update()

    def hush(self) -> None:
        """Take back what was said."""
        if self.note:
            self.note = ""
            self.update()

    def zoom(self, factor: float) -> None:
        """Zoom about the current stage, else about the middle."""
        x = self.width() / 2.0
        if self.current in self.project.stage:
            left, _, width, _ = self.grid.box(self.current)
            x = left + width / 2.0
        self.columns.zoom_by(factor, x)

    def pan(self, x: float, y: float) -> None:
        """Carry the whole path along with the hand."""
        self.columns.scroll_by(-x)
        self._bar.setValue(round(self._bar.value() - y))

    def reveal(self, key: str) -> None:
        """Scroll as little as needed for a stage, or both ends of a link, to be seen."""
        link = self.project.link.get(key)
        for end in (link.source, link.target) if link is not None else (key,):
            stage = self.project.stage.get(end)
            if stage is None:
                continue
            self.columns.reveal(stage.column)
            _, top, _, height = self.grid.box(end)
            spare = (self.grid.scale.row_px - height) / 2.0
            if top < spare:
                self._bar.setValue(round(self._bar.value() + top - spare))
            elif top + height > self.height() - spare:
                self._bar.setValue(round(self._bar.value() + top + height + spare - self.height()))

    def sizeHint(self) -> QSize:
        """Room for three rows."""
        return QSize(900, round(self.grid.scale.height(3)))

    def minimumSizeHint(self) -> QSize:
        """Room for one row."""
        return QSize(240, 84)

    # -- where the keyboard is -------------------------------------------------------------------------------
    def go(self, way: travel.Way, *, extend: bool = False, to_link: bool = False) -> None:
        """Move the selection the way an arrow points."""
        if self.current in self.project.link:
            found = travel.from_link(self.grid, self.project.link[self.current], way)
        elif self.current in self.project.stage:
            found = (travel.link_at if to_link else travel.next_stage)(self.grid, self.current, way)
        else:
            found = travel.first_stage(self.grid)
        self.go_to(found, extend=extend)

    def go_to(self, key: str | None, *, extend: bool = False) -> None:
        """Select one thing, or also that one."""
        if key is not None:
            self.choose(key, self.document.selection | {key} if extend else frozenset({key}))
            self.reveal(key)

    def choose(self, key: str, chosen: frozenset[str]) -> None:
        """Select what is chosen, with the keyboard at `key` if that is among it."""
        self.current = key if key in chosen else ""
        self.document.select(chosen)
        self._describe()
        self.update()

    def ask_for_card(self) -> None:
        """Ask for the controls of the stage that the keyboard is at."""
        if self.current in self.project.stage:
            self.card_wanted.emit(self.current)

    def ask_for_kind(self) -> None:
        """Ask for the shelf."""
        self.shelf_wanted.emit()

    def start_link(self) -> None:
        """Draw a link from the current stage with the arrow keys."""
        if self.current in self.project.stage:
            self.hand.start_link(self.current)

    def rename_current(self) -> None:
        """Type another name where the block stands."""
        stage = self.project.stage.get(self.current)
        if stage is not None:
            self._open_field(stage, stage.name, "Name", lambda text: self.commands.rename(stage.id, text))

    def count_current(self) -> None:
        """Type how many alike the selected blocks stand for."""
        stage = self.project.stage.get(self.current)
        if stage is not None:
            self._open_field(stage, str(stage.count), "How many alike", self.commands.set_count)

    def _open_field(self, stage: Stage, text: str, label: str, commit: keys.Commit) -> None:
        self.reveal(stage.id)
        left, top, width, height = self.grid.box(stage.id)
        wide = max(width, 132.0)
        box = QRect(round(left + (width - wide) / 2.0), round(top + height / 2.0 - 14.0), round(wide), 28)
        self._field.begin(box, text, f"{label} of {stage.name}", commit)

    def _describe(self) -> None:
        """Tell screen readers where the keyboard is."""
        text = keys.described(self.project, self.current, self.document.selection)
        if text != self.accessibleDescription():
            self.setAccessibleDescription(text)

    # -- what changes ----------------------------------------------------------------------------------------
    def _project_changed(self, changes: Mapping[str, tuple[object, object]]) -> None:
        old, self.grid = self.grid, Layout(self.project, self.columns, self.grid.top_px)
        touched = _only_inside(changes)
        if self.current and self.project.item(self.current) is None:
            self.current = ""
        if touched is None:
            self.hand.cancel()
            self.hand.forget_hover()
            self._fit()
            self.update()
        else:
            self.grid.keep_ways_of(old)
            for key in touched:
                left, top, width, height = self.grid.box(key)
                self.update(round(left) - 8, round(top) - 12, round(width) + 20, round(height) + 24)
        self._describe()

    def _selection_changed(self, chosen: frozenset[str]) -> None:
        if self.current not in chosen:
            order = [key for key in self.project.topology.order if key in chosen]
            self.current = next(iter([*order, *sorted(chosen)]), "")
            if len(chosen) == 1:
                self.reveal(self.current)
        self._describe()
        self.update()

    def _columns_changed(self) -> None:
        self._fit()
        self.update()

    def _fit(self) -> None:
        """Tell the columns how many there are; let the rows' scroll bar span all rows, and one more to drop on."""
        self.columns.set_extent(self.grid.columns_used, float(self.width()))
        scale, rows, room = self.grid.scale, self.grid.rows, self.height()
        hidden = scale.height(rows) > room
        self._bar.setRange(0, max(0, round(scale.height(rows + 1) - room)) if hidden else 0)
        self._bar.setPageStep(room)
        self._bar.setSingleStep(round(scale.row_px))
        self._bar.setVisible(hidden)
        width = self._bar.sizeHint().width()
        self._bar.setGeometry(self.width() - width, 0, width, room)

    def _scrolled(self, value: int) -> None:
        self.grid.top_px = float(value)
        self.update()

    # -- events ----------------------------------------------------------------------------------------------
    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        paint.paint(painter, self, event.rect())
        painter.end()

    def resizeEvent(self, event: QResizeEvent) -> None:
        self._fit()

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.update()

    def leaveEvent(self, event: QEvent) -> None:
        self.hand.forget_hover()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        x, y = event.position().x(), event.position().y()
        if event.button() == Qt.MouseButton.LeftButton:
            self.hand.press(x, y, extend=bool(event.modifiers() & EXTENDING))
        elif event.button() == Qt.MouseButton.MiddleButton:
            self.hand.grab_ground(x, y)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        self.hand.move(event.position().x(), event.position().y())

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self.hand.release()
        elif event.button() == Qt.MouseButton.MiddleButton:
            self.hand.cancel()

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        hit = self.hit(event.position().x(), event.position().y())
        if hit.what == "stage":
            self.card_wanted.emit(hit.id)
        elif hit.what == "empty":
            self.shelf_wanted.emit()

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Rows; with Shift columns; with Ctrl zoom about the pointer."""
        x, y = event.angleDelta().x() / WHEEL_STEP, event.angleDelta().y() / WHEEL_STEP
        if event.modifiers() & Qt.KeyboardModifier.ControlModifier:
            self.columns.zoom_by(1.15 ** (y or x), event.position().x())
        elif event.modifiers() & Qt.KeyboardModifier.ShiftModifier:
            self.pan((y or x) * self.columns.pitch_px, 0.0)
        else:
            self.pan(x * self.columns.pitch_px, y * self.grid.scale.row_px)
        event.accept()

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        self.cancel()
        if event.reason() == QContextMenuEvent.Reason.Keyboard:
            self.open_menu_at_current()
        else:
            self.open_menu(event.pos().x(), event.pos().y(), event.globalPos())

    def open_menu_at_current(self) -> None:
        """The menu of what the keyboard is at."""
        x, y = 24.0, self.height() - 24.0
        if self.current in self.project.stage:
            left, top, width, height = self.grid.box(self.current)
            x, y = left + width / 2.0, top + height / 2.0
        elif self.current in self.project.link:
            x, y = self.grid.middle_of_line(self.project.link[self.current])
        self.open_menu(x, y, self.mapToGlobal(QPoint(round(x), round(y))))

    def open_menu(self, x: float, y: float, at: QPoint) -> None:
        """The menu of what lies there; it is selected first."""
        hit = self.hit(x, y, reach=10.0)
        self.choose(
            hit.id,
            self.document.selection if hit.id in self.document.selection else frozenset({hit.id} - {""}),
        )
        menu = build_menu(self, hit, self.place(x, y))
        menu.aboutToHide.connect(menu.deleteLater)
        menu.popup(at)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        self.hush()
        if not keys.handle(self, event):
            super().keyPressEvent(event)

    def event(self, event: QEvent) -> bool:
        """Keys that are ours come to us even where the window has a shortcut for them; fingers go their own way."""
        kind = event.type()
        if kind == QEvent.Type.ShortcutOverride and isinstance(event, QKeyEvent) and keys.is_ours(event):
            event.accept()
            return True
        if kind in TOUCHES and self._touch is not None:
            return self._touch.handle(event)
        return super().event(event)


def _only_inside(changes: Mapping[str, tuple[object, object]]) -> list[str] | None:
    """The stages changed, where nothing but what stands inside blocks has changed; else None."""
    touched = []
    for key, (before, after) in changes.items():
        if isinstance(before, Header | Link) and isinstance(after, Header | Link):
            if isinstance(before, Link) and before.model_dump(include=_ENDS) != after.model_dump(
                include=_ENDS
            ):
                return None
            continue
        if not isinstance(before, Stage) or not isinstance(after, Stage) or _place(before) != _place(after):
            return None
        touched.append(key)
    return touched


_ENDS = {"source", "output", "target", "input"}


def _place(stage: Stage) -> tuple[object, ...]:
    return stage.column, stage.row, stage.count, stage.inputs(), stage.outputs()
