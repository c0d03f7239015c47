"""A line that is typed into: taken on Enter or on leaving, kept as typed while it cannot be taken."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, QRect, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QFocusEvent,
    QFontMetrics,
    QKeyEvent,
    QKeySequence,
    QMouseEvent,
    QPainter,
    QPaintEvent,
    QResizeEvent,
)
from PySide6.QtWidgets import QLineEdit, QSizePolicy, QStyle, QStyleOptionFrame

from app.inks import font

ECHO_GAP_PX = 10
LEAST_TEXT_PX = 56


class Entry(QLineEdit):
    """Shows a text, and beside it, inside at the right, what was understood.

    `taken` asks whoever owns it to take the text; the answer is `settle` or `refuse`.
    """

    taken = Signal(str)
    stepped = Signal(int, bool)  # up +1 or down -1 by a hand's step (page: 6), and whether finely
    entered = Signal()  # Enter was pressed and the text stood
    fitted = Signal()  # another width, or another text beside

    def __init__(self, name: str, *, bare: bool = False, size_px: int = 12, strong: bool = False) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self.setFont(font(size_px, strong=strong))
        self.setProperty("bare", bare)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self.setMinimumWidth(24)
        self.steps = False
        self._shown = ""
        self._refused: str | None = None
        self._echo = ""
        self._echo_ink = QColor()
        self._fresh = False  # the click that brought the focus selects all
        self.textEdited.connect(self._edited)

    # -- what it shows ---------------------------------------------------------------------------------------
    @property
    def is_wrong(self) -> bool:
        """Whether it holds a text that could not be taken."""
        return self._refused is not None

    @property
    def is_dirty(self) -> bool:
        """Whether it holds a text that was not asked about yet."""
        return self.text() != (self._shown if self._refused is None else self._refused)

    def show_value(self, text: str) -> None:
        """Show what stands now, unless a hand is typing or a refused text waits to be mended."""
        is_idle = not self.is_wrong and not (self.hasFocus() and self.is_dirty)
        self._shown = text
        if is_idle and self.text() != text:
            was_whole = self.hasFocus() and self.selectedText() == self.text()
            self.setText(text)
            self.setCursorPosition(0)
            if was_whole:
                self.selectAll()

    def settle(self, text: str) -> None:
        """The text was taken; show what it became."""
        self._mark(None)
        self._shown = text
        self.setText(text)
        if self.hasFocus():
            self.selectAll()
        else:
            self.setCursorPosition(0)

    def refuse(self, text: str) -> None:
        """The text cannot be: it stays until it is mended or given up."""
        if self.text() != text:
            self.setText(text)
        self._mark(text)

    def show_echo(self, text: str, ink: QColor) -> None:
        """What was understood, at the right; see `has_room` for whether it fits."""
        if (text, ink) != (self._echo, self._echo_ink):
            self._echo, self._echo_ink = text, ink
            self._fit_echo()
            self.update()

    @property
    def has_room(self) -> bool:
        """Whether text and echo stand side by side."""
        if not self._echo:
            return True
        text = self.fontMetrics().horizontalAdvance(self.text())
        return max(LEAST_TEXT_PX, text) + ECHO_GAP_PX + self._echo_px() <= self._whole().width() - 4

    # -- events ----------------------------------------------------------------------------------------------
    def fix_width(self, px: int) -> None:
        """Take this width and no other."""
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        self.setFixedWidth(px)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Undo belongs to the project, unless there is typing to undo. Listens to itself, while it has the keyboard."""
        if (
            not self.is_dirty
            and isinstance(event, QKeyEvent)
            and event.type() == QEvent.Type.ShortcutOverride
        ):
            undoing = (QKeySequence.StandardKey.Undo, QKeySequence.StandardKey.Redo)
            if any(event.matches(keys) for keys in undoing):
                event.ignore()
                return True
        return False

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key = event.key()
        up_down = {Qt.Key.Key_Up: 1, Qt.Key.Key_Down: -1, Qt.Key.Key_PageUp: 6, Qt.Key.Key_PageDown: -6}
        if key in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.take()
            if not self.is_wrong:
                self.entered.emit()
        elif key == Qt.Key.Key_Escape and (self.is_dirty or self.is_wrong):
            self.settle(self._shown)
            self.taken.emit(self._shown)
        elif self.steps and key in up_down:
            self.take()
            if not self.is_wrong:
                self.stepped.emit(
                    up_down[Qt.Key(key)], bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
                )
        else:
            super().keyPressEvent(event)

    def take(self) -> None:
        """Ask for the text to be taken, where it is a new one."""
        if self.is_dirty:
            self.taken.emit(self.text())

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self.installEventFilter(self)
        self._fresh = event.reason() == Qt.FocusReason.MouseFocusReason
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.selectAll()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        self.removeEventFilter(self)
        self._fresh = False
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.take()
            self.deselect()
            self.setCursorPosition(0)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        super().mouseReleaseEvent(event)
        if self._fresh and not self.hasSelectedText():
            self.selectAll()
        self._fresh = False

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit_echo()
        self.fitted.emit()

    def paintEvent(self, event: QPaintEvent) -> None:
        inside = self._inside()
        if self.hasFocus() or self.fontMetrics().horizontalAdvance(self.text()) <= inside.width() - 2:
            super().paintEvent(event)
        else:
            self._paint_cut(inside)
        if self._echo and self.has_room:
            painter = QPainter(self)
            painter.setFont(font(11))
            painter.setPen(self._echo_ink)
            where = self._whole().adjusted(0, 0, -2, 0)
            painter.drawText(
                where, int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter), self._echo
            )
            painter.end()

    # -- inside ----------------------------------------------------------------------------------------------
    def _paint_cut(self, inside: QRect) -> None:
        """A text too long for its line ends in an ellipsis."""
        painter = QPainter(self)
        option = QStyleOptionFrame()
        self.initStyleOption(option)
        self.style().drawPrimitive(QStyle.PrimitiveElement.PE_PanelLineEdit, option, painter, self)
        painter.setFont(self.font())
        painter.setPen(self.palette().color(self.foregroundRole()))
        text = self.fontMetrics().elidedText(self.text(), Qt.TextElideMode.ElideRight, inside.width() - 4)
        side = self.alignment() & Qt.AlignmentFlag.AlignHorizontal_Mask
        painter.drawText(inside.adjusted(2, 0, -2, 0), int(side | Qt.AlignmentFlag.AlignVCenter), text)
        painter.end()

    def _inside(self) -> QRect:
        return self._whole().marginsRemoved(self.textMargins())

    def _whole(self) -> QRect:
        option = QStyleOptionFrame()
        self.initStyleOption(option)
        return self.style().subElementRect(QStyle.SubElement.SE_LineEditContents, option, self)

    def _echo_px(self) -> int:
        return QFontMetrics(font(11)).horizontalAdvance(self._echo)

    def _fit_echo(self) -> None:
        """Keep the text out of the echo's place, where both have room."""
        self.setTextMargins(0, 0, 0, 0)
        if self._echo and self.has_room:
            self.setTextMargins(0, 0, self._echo_px() + ECHO_GAP_PX, 0)

    def _edited(self) -> None:
        self._fit_echo()
        self.fitted.emit()

    def _mark(self, refused: str | None) -> None:
        was, self._refused = self._refused, refused
        if (was is None) != (refused is None):
            self.setProperty("wrong", refused is not None)
            self.style().unpolish(self)
            self.style().polish(self)
