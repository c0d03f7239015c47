"""The card's results, painted: lines of a name and a number, a table of levels, bars of who owns the hiss."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QFontMetrics, QPainter, QPaintEvent
from PySide6.QtWidgets import QAbstractButton, QSizePolicy

from app import words
from app.inks import Inks, blend, font
from engine.outcome import Outcome

from .pieces import column
from .results import MOST_OWNERS, Levels, Line, Owner
from .scene import Part

LINE_PX = 20
PAIR_PX = 34
LEFT, RIGHT = Qt.AlignmentFlag.AlignLeft, Qt.AlignmentFlag.AlignRight
MIDDLE = Qt.AlignmentFlag.AlignVCenter


class Painted(Part):
    """Shows what `read` reads from an outcome; repaints only where that has changed."""

    def __init__(self, inks: Inks, name: str) -> None:
        super().__init__()
        self.inks = inks
        self.setAccessibleName(name)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)

    def tell(self, said: str) -> None:
        """What a screen reader says of it."""
        self.setAccessibleDescription(said)


class Lines(Painted):
    """A quiet name left, its number right."""

    def __init__(self, inks: Inks, name: str, read: Callable[[Outcome], tuple[Line, ...]]) -> None:
        super().__init__(inks, name)
        self._read = read
        self.lines: tuple[Line, ...] = ()
        self.hide()  # takes no room while it has nothing to say

    def show_outcome(self, outcome: Outcome) -> None:
        lines = self._read(outcome)
        if lines != self.lines:
            self.lines = lines
            self.setFixedHeight(len(lines) * LINE_PX)
            self.setVisible(bool(lines))
            self.tell("; ".join(f"{line.label} {line.text}" for line in lines))
            self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        for place, line in enumerate(self.lines):
            box = QRectF(0, place * LINE_PX, self.width(), LINE_PX)
            painter.setFont(font(12, strong=bool(line.grave)))
            used = painter.fontMetrics().horizontalAdvance(line.text)
            painter.setPen(self.inks.severity(line.grave) if line.grave else self.inks.ink)
            painter.drawText(box, int(RIGHT | MIDDLE), line.text)
            painter.setFont(font(12))
            painter.setPen(self.inks.muted)
            label = painter.fontMetrics().elidedText(
                line.label, Qt.TextElideMode.ElideRight, round(box.width() - used - 8)
            )
            painter.drawText(box, int(LEFT | MIDDLE), label)
        painter.end()


class LevelTable(Painted):
    """Gain, level, clip point, peak margin and noise of each section, its name above them."""

    HEADS = ("gain", "level", "clip", "margin", "noise")

    def __init__(self, inks: Inks, name: str, read: Callable[[Outcome], tuple[Levels, ...]]) -> None:
        super().__init__(inks, name)
        self._read = read
        self.rows: tuple[Levels, ...] = ()

    def show_outcome(self, outcome: Outcome) -> None:
        rows = self._read(outcome)
        if rows != self.rows:
            self.rows = rows
            self.setFixedHeight(LINE_PX + len(rows) * PAIR_PX)
            self.tell("; ".join(_spoken(each) for each in rows))
            self.update()

    def cells(self, each: Levels) -> tuple[str, ...]:
        """One row's texts under the heads."""
        return (each.gain, each.level, each.clip, each.margin, each.noise)

    def paintEvent(self, event: QPaintEvent) -> None:
        painter, inks = QPainter(self), self.inks
        painter.setFont(font(11))
        painter.setPen(inks.muted)
        self._paint_cells(painter, 0, self.HEADS)
        for place, each in enumerate(self.rows):
            top = LINE_PX + place * PAIR_PX
            painter.setPen(inks.hairline)
            painter.drawLine(0, top, self.width(), top)
            name = QRectF(0, top + 2, self.width(), 16)
            painter.setPen(inks.muted)
            painter.drawText(name, int(RIGHT | MIDDLE), each.unit)
            room = self.width() - painter.fontMetrics().horizontalAdvance(each.unit) - 8
            painter.setPen(inks.ink)
            painter.drawText(
                name,
                int(LEFT | MIDDLE),
                painter.fontMetrics().elidedText(each.name, Qt.TextElideMode.ElideRight, room),
            )
            self._paint_cells(painter, top + 15, self.cells(each), short=each.short)
        painter.end()

    def _paint_cells(
        self, painter: QPainter, top: int, texts: tuple[str, ...], *, short: bool = False
    ) -> None:
        wide = self.width() / len(self.HEADS)
        for place, text in enumerate(texts):
            if short and place == 3:
                painter.save()
                painter.setFont(font(11, strong=True))
                painter.setPen(self.inks.stop)
            painter.drawText(
                QRectF(place * wide, top, wide, 16), int((LEFT if place == 0 else RIGHT) | MIDDLE), text
            )
            if short and place == 3:
                painter.restore()


class Budget(Part):
    """Who owns a seat's hiss: a bar for each of the largest, pressed to go there."""

    def __init__(
        self, inks: Inks, read: Callable[[Outcome], tuple[Owner, ...]], go: Callable[[str], None]
    ) -> None:
        super().__init__()
        self._read = read
        self.bars = [Bar(inks) for _ in range(MOST_OWNERS)]
        body = column(self)
        for bar in self.bars:
            body.addWidget(bar)
            bar.hide()
            bar.clicked.connect(lambda _checked=False, bar=bar: go(bar.owner.stage) if bar.owner else None)

    def show_outcome(self, outcome: Outcome) -> None:
        owners = self._read(outcome)
        for place, bar in enumerate(self.bars):
            bar.show_owner(owners[place] if place < len(owners) else None)


class Bar(QAbstractButton):
    """One owner: name, share, and a bar as long as the share."""

    def __init__(self, inks: Inks) -> None:
        super().__init__()
        self._inks = inks
        self.owner: Owner | None = None
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self.setFixedHeight(26)

    def show_owner(self, owner: Owner | None) -> None:
        """Show another part of the hiss; None hides the bar."""
        if owner == self.owner:
            return
        self.owner = owner
        self.setVisible(owner is not None)
        if owner is not None:
            text = f"{owner.name}: {words.share(owner.share)} of the hiss, {words.number(owner.hiss_a)} dB(A)"
            self.setAccessibleName(text)
            self.setToolTip(text)
            self.update()

    def sizeHint(self) -> QSize:
        return QSize(120, 26)

    def paintEvent(self, event: QPaintEvent) -> None:
        if self.owner is None:
            return
        painter, inks = QPainter(self), self._inks
        painter.setFont(font(11))
        metrics = QFontMetrics(font(11))
        share = words.share(self.owner.share)
        used = metrics.horizontalAdvance("under 1 %") + 8
        active = self.hasFocus() or self.underMouse()
        painter.setPen(inks.accent if active else inks.ink)
        box = QRectF(0, 1, self.width(), 16)
        name = metrics.elidedText(self.owner.name, Qt.TextElideMode.ElideRight, self.width() - used)
        painter.drawText(box, int(LEFT | MIDDLE), name)
        painter.drawText(box, int(RIGHT | MIDDLE), share)
        painter.fillRect(QRectF(0, 19, self.width(), 3), blend(inks.noise, inks.paper, 0.18))
        painter.fillRect(QRectF(0, 19, max(1.0, self.width() * self.owner.share), 3), inks.noise)
        if self.hasFocus():
            painter.setPen(inks.accent)
            painter.drawLine(0, self.height() - 1, self.width(), self.height() - 1)
        painter.end()


def _spoken(each: Levels) -> str:
    said = f"{each.name}: level {each.level} {each.unit}, clip {each.clip}, margin {each.margin} dB, noise {each.noise}"
    return said if not each.gain else f"{said}, gain {each.gain} dB"
