"""The line that is always there: what clips first, who owns the hiss, how loud the loudest seat is. Each leads to its stage."""

from __future__ import annotations

from PySide6.QtCore import QRectF, QSize, Qt, Signal
from PySide6.QtGui import QFontMetricsF, QKeyEvent, QMouseEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QSizePolicy, QWidget

from app import words
from app.document import Document
from app.inks import Inks, blend, font
from engine.outcome import Outcome
from engine.seat import SeatLevels

HEIGHT_PX = 40
PAD_PX, GAP_PX = 8.0, 8.0
SIDE = {"in": "input", "out": "output"}
NO_SEAT = "no seat yet"


class Answer(QWidget):
    """A quiet label and a strong answer; clicking or Enter leads to the stage it speaks of."""

    chosen = Signal()

    def __init__(self, label: str, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.label, self.text, self.severity = label, "", ""
        self.inks = inks
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
        self.setMinimumWidth(60)
        self.setAttribute(Qt.WidgetAttribute.WA_Hover)

    def say(self, label: str, text: str, severity: str = "") -> None:
        """Show another answer; `severity` colours it where it needs mending."""
        if (label, text, severity) != (self.label, self.text, self.severity):
            self.label, self.text, self.severity = label, text, severity
            self.setAccessibleName(f"{label}: {text}")
            self.setToolTip(f"{label}: {text}")
            self.updateGeometry()
            self.update()

    def sizeHint(self) -> QSize:
        plain, strong = QFontMetricsF(font(12)), QFontMetricsF(font(12, strong=True))
        width = (
            plain.horizontalAdvance(self.label) + strong.horizontalAdvance(self.text) + GAP_PX + 2.0 * PAD_PX
        )
        return QSize(round(width) + 2, HEIGHT_PX - 8)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self.underMouse() or self.hasFocus():
            painter.setPen(QPen(self.inks.accent, 1.5) if self.hasFocus() else Qt.PenStyle.NoPen)
            painter.setBrush(blend(self.inks.ink, self.inks.paper, 0.06))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(1, 1, -1, -1), 5.0, 5.0)
        plain, strong = QFontMetricsF(font(12)), QFontMetricsF(font(12, strong=True))
        line = QRectF(self.rect()).adjusted(PAD_PX, 0.0, -PAD_PX, 0.0)
        painter.setFont(font(12))
        painter.setPen(self.inks.muted)
        painter.drawText(line, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, self.label)
        line.setLeft(line.left() + plain.horizontalAdvance(self.label) + GAP_PX)
        painter.setFont(font(12, strong=True))
        painter.setPen(self.inks.severity(self.severity) if self.severity else self.inks.ink)
        text = strong.elidedText(self.text, Qt.TextElideMode.ElideRight, line.width())
        painter.drawText(line, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, text)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton and self.rect().contains(event.position().toPoint()):
            self.chosen.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.chosen.emit()
        else:
            super().keyPressEvent(event)


class BottomLine(QWidget):
    """Three answers about the whole project, kept up with every solve."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document, self.inks = document, inks
        self.narrowest = Answer("Narrowest", inks)
        self.hiss = Answer("Hiss", inks)
        self.loudest = Answer("Loudest seat", inks)
        self._leads: dict[Answer, str | None] = {}
        row = QHBoxLayout(self)
        row.setContentsMargins(12, 4, 12, 4)
        row.setSpacing(16)
        for answer in self.answers:
            row.addWidget(answer)
            answer.chosen.connect(lambda chosen=answer: self._choose(chosen))
        row.addStretch(1)
        self.setFixedHeight(HEIGHT_PX)
        self.setAccessibleName("Summary of the project")
        document.solved.connect(self.refresh)
        self.refresh(document.outcome)

    @property
    def answers(self) -> tuple[Answer, Answer, Answer]:
        return self.narrowest, self.hiss, self.loudest

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.inks = inks
        for answer in self.answers:
            answer.inks = inks
        self.update()

    def refresh(self, outcome: Outcome) -> None:
        """Say what a solved project comes to."""
        self._say_narrowest(outcome)
        seats = [seat for seat in outcome.seats if seat.level is not None or seat.hiss is not None]
        self._say_hiss(hissing(seats))
        self._say_loudest(seats)

    def _say_narrowest(self, outcome: Outcome) -> None:
        first = outcome.narrowest
        if first is None:
            self._put(self.narrowest, "Narrowest", "nothing clips", None)
            return
        where = f"{first.name}, {first.section} {SIDE[first.side]}"
        self._put(
            self.narrowest, "Narrowest", f"{words.margin(first.margin_db)} at {where}", first.stage,
            "stop" if first.margin_db < 0.0 else "",
        )  # fmt: skip

    def _say_hiss(self, seat: SeatLevels | None) -> None:
        if seat is None or not seat.budget:
            self._put(self.hiss, "Hiss", NO_SEAT, None)
            return
        owner = seat.budget[0]
        text = words.level(seat.hiss_a, "dB(A)", 0)
        severity = ""
        if seat.hiss_margin is not None:
            under = seat.hiss_margin >= 0.0
            text += f", {words.number(abs(seat.hiss_margin), 0)} {'under' if under else 'over'} the room"
            severity = "" if under else "mend"
        self._put(
            self.hiss,
            f"Hiss at {seat.name}",
            f"{text} · {owner.name} owns {owner.share * 100:.0f}\u202f%",
            owner.stage,
            severity,
        )

    def _say_loudest(self, seats: list[SeatLevels]) -> None:
        loud = [seat for seat in seats if seat.level_a is not None]
        if not loud:
            self._put(self.loudest, "Loudest seat", NO_SEAT, None)
            return
        seat = max(loud, key=lambda s: s.level_a or 0.0)
        self._put(
            self.loudest, "Loudest seat", f"{seat.name}, {words.level(seat.level_a, 'dB(A)', 0)}", seat.stage
        )

    def _put(self, answer: Answer, label: str, text: str, stage: str | None, severity: str = "") -> None:
        self._leads[answer] = stage
        answer.say(label, text, severity)

    def _choose(self, answer: Answer) -> None:
        if (stage := self._leads.get(answer)) is not None:
            self.document.select([stage])

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.fillRect(self.rect(), self.inks.raised)
        painter.setPen(self.inks.hairline)
        painter.drawLine(0, 0, self.width(), 0)


def hissing(seats: list[SeatLevels]) -> SeatLevels | None:
    """The seat at which hiss stands out most: the smallest margin to the room, else the most hiss."""
    known = [seat for seat in seats if seat.hiss_margin is not None]
    if known:
        return min(known, key=lambda seat: seat.hiss_margin or 0.0)
    return max(seats, key=lambda seat: seat.hiss_a or -200.0, default=None)
