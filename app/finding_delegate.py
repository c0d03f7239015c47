"""How one finding is painted: a bar and a word for its severity, what is so, and under it what to do."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QPointF, QRect, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QTextCharFormat, QTextLayout, QTextOption
from PySide6.QtWidgets import QListView, QStyle, QStyledItemDelegate, QStyleOptionViewItem

from engine.findings import Finding

from .inks import Inks, blend, font
from .style import PADDING_PX

FINDING = Qt.ItemDataRole.UserRole
BAR_PX, TEXT_GAP_PX, ROW_PAD_PX, LINE_GAP_PX = 3, 9, 6, 2


class FindingDelegate(QStyledItemDelegate):
    """Lays out the text at the view's width."""

    def __init__(self, inks: Inks, view: QListView) -> None:
        super().__init__(view)
        self._inks, self._view = inks, view

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        finding: Finding = index.data(FINDING)
        width = self._view.viewport().width()
        blocks = self._blocks(finding, width)
        height = sum(block.boundingRect().height() for block in blocks) + LINE_GAP_PX * (len(blocks) - 1)
        return QSize(max(60, width - 2), round(height) + 2 * ROW_PAD_PX)

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        finding: Finding = index.data(FINDING)
        inks, box = self._inks, QRect(option.rect)
        state = option.state
        if state & QStyle.StateFlag.State_HasFocus:
            painter.fillRect(box, blend(inks.accent, inks.paper, 0.16))
        elif state & QStyle.StateFlag.State_MouseOver and finding.stage is not None:
            painter.fillRect(box, blend(inks.ink, inks.paper, 0.05))
        bar = QRectF(PADDING_PX, box.top() + ROW_PAD_PX + 2, BAR_PX, box.height() - 2 * ROW_PAD_PX - 4)
        painter.fillRect(bar, inks.severity(finding.severity))
        y = float(box.top() + ROW_PAD_PX)
        for block in self._blocks(finding, self._view.viewport().width()):
            block.draw(painter, QPointF(PADDING_PX + BAR_PX + TEXT_GAP_PX, y))
            y += block.boundingRect().height() + LINE_GAP_PX

    def _blocks(self, finding: Finding, width: int) -> list[QTextLayout]:
        inks, room = self._inks, width - 2 * PADDING_PX - BAR_PX - TEXT_GAP_PX
        word = finding.severity.capitalize()
        blocks = [
            _laid_out(
                f"{word}\u2002{finding.message}", font(12), room,
                (0, len(word), inks.severity(finding.severity), True),
                (len(word), len(finding.message) + 1, inks.ink, False),
            )
        ]  # fmt: skip
        if finding.mend:
            blocks.append(_laid_out(finding.mend, font(11), room, (0, len(finding.mend), inks.muted, False)))
        return blocks


def _laid_out(text: str, face: QFont, room: int, *runs: tuple[int, int, QColor, bool]) -> QTextLayout:
    """A text broken into lines; each run has a start, a length, an ink and whether it is strong."""
    layout = QTextLayout(text, face)
    option = QTextOption()
    option.setWrapMode(QTextOption.WrapMode.WrapAtWordBoundaryOrAnywhere)
    layout.setTextOption(option)
    ranges = []
    for start, length, ink, strong in runs:
        span = QTextLayout.FormatRange()
        span.start, span.length = start, length
        shape = QTextCharFormat()
        shape.setForeground(ink)
        if strong:
            shape.setFontWeight(QFont.Weight.DemiBold)
        span.format = shape
        ranges.append(span)
    layout.setFormats(ranges)
    layout.beginLayout()
    height = 0.0
    while (line := layout.createLine()).isValid():
        line.setLineWidth(max(40, room))
        line.setPosition(QPointF(0.0, height))
        height += line.height()
    layout.endLayout()
    return layout
