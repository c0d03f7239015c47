"""The shelf of kinds by family. Carry one onto the path, or choose one and press Enter; type to find one."""

from __future__ import annotations

from typing import Protocol

from PySide6.QtCore import QEvent, QObject, QPoint, QSize, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent, QPointingDevice
from PySide6.QtWidgets import (
    QAbstractItemView,
    QFrame,
    QLabel,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.families import families, kind_of
from app.gestures.press import DRAG_PX, TOUCH_DRAG_PX
from app.inks import Inks, font
from app.path_view import How, add_kind
from app.path_view.shapes import shape_of
from engine.stages import KINDS, template

from .entries import DOMAIN_ROLE, KIND_ROLE, POINTER_ROW_PX, TOUCH_ROW_PX, Entries
from .ghost import Carried

WIDTH_PX = 156
PADDING_PX = 16


class Carrier(Protocol):
    """Where a carried kind may be set down: the path view."""

    def carry(self, kind: str, at: QPoint) -> bool: ...
    def drop(self) -> bool: ...
    def cancel(self) -> None: ...
    def say(self, text: str, *, refused: bool = False) -> None: ...


class Shelf(QWidget):
    """Every kind of stage. `onto` is where they are carried to."""

    added = Signal(str)  # the kind that was put into the project from here

    def __init__(
        self, document: Document, inks: Inks, onto: Carrier | None = None, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._document, self._inks, self._onto = document, inks, onto
        self._ghost: Carried | None = None
        self._title = QLabel("Shelf", self)
        self._title.setFont(font(14, strong=True))
        self._title.setProperty("quiet", True)
        self.filter = QLineEdit(self)
        self.filter.setPlaceholderText("Type to find")
        self.filter.setAccessibleName("Find on the shelf")
        self.filter.setFont(font(12))
        self.filter.setClearButtonEnabled(True)
        self.filter.textChanged.connect(self._narrow)
        self.filter.installEventFilter(self)
        self.list = KindList(self)
        self._entries = Entries(inks, self.list)
        self.list.setItemDelegate(self._entries)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(PADDING_PX, 12, PADDING_PX - 6, 8)
        layout.setSpacing(8)
        for widget in (self._title, self.filter, self.list):
            layout.addWidget(widget)
        self.setAccessibleName("Shelf")
        self.setFocusProxy(self.list)
        self._fill()
        self.set_inks(inks)

    # -- what others do with it ------------------------------------------------------------------------------
    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = self._entries.inks = inks
        self.list.viewport().update()

    def set_touch(self, touch: bool) -> None:
        """Lines for fingers (44 px) or for a pointer (24 px)."""
        self._entries.row_px = TOUCH_ROW_PX if touch else POINTER_ROW_PX
        self.list.scheduleDelayedItemsLayout()

    def add_current(self, how: How = "behind") -> None:
        """Add the chosen kind to the selection of the path."""
        item = self.list.currentItem()
        if item.isHidden() or item.data(KIND_ROLE) is None:
            return
        kind = str(item.data(KIND_ROLE))
        try:
            note = add_kind(self._document, kind, how)
        except ValueError as error:
            self._say(str(error), refused=True)
            return
        if note:
            self._say(note)
        self.added.emit(kind)

    def sizeHint(self) -> QSize:
        """Wide enough for the longest title."""
        return QSize(WIDTH_PX + 8, 600)

    # -- carrying --------------------------------------------------------------------------------------------
    def carry(self, kind: str, at: QPoint) -> None:
        """The hand carries a kind, and is at this point of the screen."""
        if self._ghost is None:
            self._ghost = Carried(self.window())
        here = self.window().mapFromGlobal(at)
        self._ghost.show_at(here, KINDS[kind].title, shape_of(template(kind, "new")), self._inks)
        if self._onto is not None:
            self._onto.carry(kind, at)

    def set_down(self, kind: str) -> None:
        """The hand lets go of it."""
        self._drop_ghost()
        if self._onto is not None and self._onto.drop():
            if isinstance(self._onto, QWidget):
                self._onto.setFocus(Qt.FocusReason.OtherFocusReason)
            self.added.emit(kind)

    def put_back(self) -> None:
        """The hand thinks better of it."""
        self._drop_ghost()
        if self._onto is not None:
            self._onto.cancel()

    def _drop_ghost(self) -> None:
        if self._ghost is not None:
            self._ghost.hide()
            self._ghost.deleteLater()
            self._ghost = None

    def _say(self, text: str, *, refused: bool = False) -> None:
        if self._onto is not None:
            self._onto.say(text, refused=refused)

    # -- the list --------------------------------------------------------------------------------------------
    def _fill(self) -> None:
        for family, kinds in families().items():
            heading = QListWidgetItem(family, self.list)
            heading.setFlags(Qt.ItemFlag.NoItemFlags)
            for kind in kinds:
                item = QListWidgetItem(kind.title, self.list)
                name = kind_of(kind)
                item.setData(KIND_ROLE, name)
                item.setData(DOMAIN_ROLE, str(shape_of(template(name, "new"))))
                item.setData(Qt.ItemDataRole.AccessibleTextRole, f"{kind.title}, {family}")
                item.setToolTip(kind.help)
        self._choose_first()

    def _narrow(self, wanted: str) -> None:
        """Show what has every word of the filter in its title or family; families that have nothing left go too."""
        words = wanted.casefold().split()
        heading, shown = None, 0
        for item in (self.list.item(at) for at in range(self.list.count())):
            if item.data(KIND_ROLE) is None:
                if heading is not None:
                    heading.setHidden(shown == 0)
                heading, shown = item, 0
                continue
            known = f"{item.text()} {heading.text() if heading else ''}".casefold()
            item.setHidden(not all(word in known for word in words))
            shown += not item.isHidden()
        if heading is not None:
            heading.setHidden(shown == 0)
        self._choose_first()

    def _choose_first(self) -> None:
        for item in (self.list.item(at) for at in range(self.list.count())):
            if item.data(KIND_ROLE) is not None and not item.isHidden():
                self.list.setCurrentItem(item)
                return

    def look_for(self, text: str) -> None:
        """Begin to find: what was typed on the list goes on in the filter."""
        self.filter.setFocus(Qt.FocusReason.OtherFocusReason)
        self.filter.setText(self.filter.text() + text)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """In the filter: arrows go to the list, Enter adds what is found, Escape clears."""
        if watched is self.filter and event.type() == QEvent.Type.KeyPress and isinstance(event, QKeyEvent):
            key = event.key()
            if key in (Qt.Key.Key_Down, Qt.Key.Key_Up):
                self.list.setFocus(Qt.FocusReason.OtherFocusReason)
                return True
            if key in ADDING_KEYS:
                self.add_current(how_asked(event))
                return True
            if key == Qt.Key.Key_Escape:
                self.filter.clear()
                self.list.setFocus(Qt.FocusReason.OtherFocusReason)
                return True
        return super().eventFilter(watched, event)


ADDING_KEYS = (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Insert)


def how_asked(event: QKeyEvent) -> How:
    """Enter adds behind, Shift+Enter branches, Ctrl+Enter adds ahead."""
    if event.modifiers() & Qt.KeyboardModifier.ShiftModifier:
        return "branch"
    return "ahead" if event.modifiers() & Qt.KeyboardModifier.ControlModifier else "behind"


class KindList(QListWidget):
    """The shelf's list: a press that moves becomes a kind in the hand."""

    def __init__(self, shelf: Shelf) -> None:
        super().__init__(shelf)
        self._shelf = shelf
        self._pressed: tuple[str, QPoint, bool] | None = None
        self._carries = ""
        self.setAccessibleName("Kinds of stage")
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setSelectionMode(QAbstractItemView.SelectionMode.NoSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setMouseTracking(True)
        self.setFont(font(12))

    def mousePressEvent(self, event: QMouseEvent) -> None:
        super().mousePressEvent(event)
        at = event.position().toPoint()
        item = self.itemAt(at)
        if (
            event.button() == Qt.MouseButton.LeftButton
            and item is not None
            and item.data(KIND_ROLE) is not None
        ):
            finger = event.pointerType() == QPointingDevice.PointerType.Finger
            self._pressed = (str(item.data(KIND_ROLE)), at, finger)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if self._pressed is None:
            super().mouseMoveEvent(event)
            return
        kind, start, finger = self._pressed
        moved = event.position().toPoint() - start
        if not self._carries:
            if finger and abs(moved.y()) > abs(moved.x()):  # a finger up or down scrolls the shelf
                bar = self.verticalScrollBar()
                bar.setValue(bar.value() - moved.y())
                self._pressed = (kind, event.position().toPoint(), finger)
                return
            if moved.manhattanLength() < (TOUCH_DRAG_PX if finger else DRAG_PX):
                return
            self._carries = kind
            self.setCursor(Qt.CursorShape.ClosedHandCursor)
        self._shelf.carry(kind, event.globalPosition().toPoint())

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        super().mouseReleaseEvent(event)
        kind, self._carries, self._pressed = self._carries, "", None
        self.unsetCursor()
        if kind:
            self._shelf.set_down(kind)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        item = self.itemAt(event.position().toPoint())
        if item is not None and item.data(KIND_ROLE) is not None:
            self._shelf.add_current()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape and self._carries:
            self._carries, self._pressed = "", None
            self.unsetCursor()
            self._shelf.put_back()
        elif event.key() in ADDING_KEYS:
            self._shelf.add_current(how_asked(event))
        elif event.key() == Qt.Key.Key_Escape and self._shelf.filter.text():
            self._shelf.filter.clear()
        elif event.text().strip() and event.text().isprintable() and not event.modifiers() & COMMANDING:
            self._shelf.look_for(event.text())
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        if self.currentItem() is None:
            self.setCurrentRow(1)


COMMANDING = (
    Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.AltModifier | Qt.KeyboardModifier.MetaModifier
)
