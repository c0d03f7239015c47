"""The line at the bottom, always in view: narrowest margin, who owns the hiss, the loudest seat. Each leads to its stage."""

from __future__ import annotations

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QFontMetrics, QPainter, QPaintEvent
from PySide6.QtWidgets import QAbstractButton, QHBoxLayout, QSizePolicy, QWidget

from engine.outcome import Outcome

from .answers import Answer, answers
from .document import Document
from .inks import Inks, font
from .style import PADDING_PX

HEIGHT_PX = 36
BETWEEN_PX = 32
LABEL_GAP_PX = 8
INSET_PX = 6


class BottomLine(QWidget):
    """Follows a document's outcome."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("bottomLine")
        self.setAccessibleName("Narrowest margin, hiss, loudest seat")
        self.setFixedHeight(HEIGHT_PX)
        self._document, self._inks = document, inks
        self.items = [AnswerButton(inks) for _ in range(3)]
        row = QHBoxLayout(self)
        row.setContentsMargins(PADDING_PX - INSET_PX, 1, PADDING_PX - INSET_PX, 0)
        row.setSpacing(BETWEEN_PX - 2 * INSET_PX)
        for item in self.items:
            row.addWidget(item)
            item.clicked.connect(lambda _checked=False, item=item: self._go(item))
        row.addStretch(1)
        document.solved.connect(self._solved)
        self._solved(document.outcome)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = inks
        for item in self.items:
            item.inks = inks
        self.update()

    def _solved(self, outcome: Outcome) -> None:
        for item, answer in zip(self.items, answers(outcome), strict=True):
            item.show_answer(answer)

    def _go(self, item: AnswerButton) -> None:
        if item.answer.stage is not None:
            self._document.select([item.answer.stage])

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.fillRect(self.rect(), self._inks.raised)
        painter.setPen(self._inks.hairline)
        painter.drawLine(0, 0, self.width(), 0)
        painter.end()


class AnswerButton(QAbstractButton):
    """A quiet label and what it says, cut with an ellipsis where there is no room."""

    def __init__(self, inks: Inks) -> None:
        super().__init__()
        self.inks = inks
        self.answer = Answer("", "")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setSizePolicy(QSizePolicy.Policy.Maximum, QSizePolicy.Policy.Expanding)

    def show_answer(self, answer: Answer) -> None:
        """Show what is so now."""
        if answer == self.answer:
            return
        resized = (answer.label, len(answer.text)) != (self.answer.label, len(self.answer.text))
        self.answer = answer
        self.setAccessibleName(f"{answer.label}: {answer.text}")
        self.setToolTip(f"{answer.label}: {answer.text}")
        if resized:
            self.updateGeometry()
        self.update()

    def sizeHint(self) -> QSize:
        label = QFontMetrics(font(11)).horizontalAdvance(self.answer.label)
        text = QFontMetrics(font(12, strong=True)).horizontalAdvance(self.answer.text)
        return QSize(label + LABEL_GAP_PX + text + 2 * INSET_PX + 4, HEIGHT_PX - 1)

    def minimumSizeHint(self) -> QSize:
        return QSize(80, HEIGHT_PX - 1)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter, inks = QPainter(self), self.inks
        whole = QRectF(self.rect()).adjusted(INSET_PX, 0, -INSET_PX, 0)
        middle = int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        painter.setFont(font(11))
        painter.setPen(inks.muted)
        label = painter.fontMetrics().elidedText(
            self.answer.label, Qt.TextElideMode.ElideRight, max(40, round(whole.width() * 0.4))
        )
        painter.drawText(whole, middle, label)
        used = painter.fontMetrics().horizontalAdvance(label) + LABEL_GAP_PX
        painter.setFont(font(12, strong=True))
        painter.setPen(inks.stop if self.answer.grave else inks.accent if self.underMouse() else inks.ink)
        room = whole.adjusted(used, 0, 0, 0)
        text = painter.fontMetrics().elidedText(
            self.answer.text, Qt.TextElideMode.ElideRight, round(room.width())
        )
        painter.drawText(room, middle, text)
        if self.hasFocus():
            painter.setPen(inks.accent)
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(0.5, 5.5, -0.5, -5.5), 5, 5)
        painter.end()
