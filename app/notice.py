"""One quiet line under the top: what is worth knowing and needs no answer."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QSizePolicy, QWidget


class Notice(QWidget):
    """Hidden until there is something to say; stays until it is put away or the next thing is said."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("notice")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._text = QLabel()
        self._text.setWordWrap(True)
        self._text.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        self._more, self._close = QPushButton(), QPushButton("Close")
        self._run: Callable[[], object] = lambda: None
        self._more.clicked.connect(self._do_more)
        self._close.clicked.connect(self.hide)
        row = QHBoxLayout(self)
        row.setContentsMargins(20, 6, 12, 6)
        row.setSpacing(8)
        row.addWidget(self._text, 1)
        row.addWidget(self._more)
        row.addWidget(self._close)
        for button in (self._more, self._close):
            button.setFlat(True)
        self.hide()

    @property
    def text(self) -> str:
        """What is said; empty while hidden."""
        return "" if self.isHidden() else self._text.text()

    def say(self, text: str, more: str = "", run: Callable[[], object] | None = None) -> None:
        """Show a text, with one more button where there is something to do about it."""
        self._text.setText(text)
        self.setAccessibleName(text)
        self._more.setText(more)
        self._more.setVisible(bool(more))
        self._run = run or (lambda: None)
        self.show()

    def _do_more(self) -> None:
        self._run()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape:
            self.hide()
        else:
            super().keyPressEvent(event)
