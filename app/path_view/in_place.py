"""A field over a block: a name or a count typed where it stands."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QRect, Qt
from PySide6.QtGui import QFocusEvent, QKeyEvent
from PySide6.QtWidgets import QLineEdit, QWidget

from app.inks import font


class InPlaceField(QLineEdit):
    """Takes one value: Enter or leaving commits it, Escape drops it; a refused value stays to be mended."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setFont(font(12))
        self.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.hide()
        self._commit: Callable[[str], bool] | None = None
        self._was = ""

    def begin(self, box: QRect, text: str, label: str, commit: Callable[[str], bool]) -> None:
        """Open over `box` with `text`; `commit` says whether a value was taken."""
        self._commit, self._was = commit, text
        self.setAccessibleName(label)
        self.setText(text)
        self.setGeometry(box)
        self.show()
        self.selectAll()
        self.setFocus(Qt.FocusReason.OtherFocusReason)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self._close()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            if self._taken():
                self._close()
        else:
            super().keyPressEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        if self.isVisible() and event.reason() != Qt.FocusReason.PopupFocusReason:
            self._taken()
            self._close(refocus=False)

    def _taken(self) -> bool:
        return self.text() == self._was or self._commit is None or self._commit(self.text())

    def _close(self, *, refocus: bool = True) -> None:
        self._commit = None
        self.hide()
        parent = self.parentWidget()
        if refocus and parent is not None:
            parent.setFocus(Qt.FocusReason.OtherFocusReason)
