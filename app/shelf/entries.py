"""How the shelf's lines look: a family's name, or a kind as a small block in the shape of its domain."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QStyle, QStyledItemDelegate, QStyleOptionViewItem, QWidget

from app.inks import Inks, blend, font
from app.path_view.shapes import outline, sharp
from app.path_view.type import fitted
from engine.sections.base import Domain

KIND_ROLE = int(Qt.ItemDataRole.UserRole)
DOMAIN_ROLE = KIND_ROLE + 1
POINTER_ROW_PX, TOUCH_ROW_PX = 24, 44
GAP_PX, FAMILY_PX = 4, 26
PAD_PX = 8.0

Index = QModelIndex | QPersistentModelIndex


def paint_entry(
    painter: QPainter, box: QRectF, title: str, domain: Domain, inks: Inks, *, active: bool, hovered: bool
) -> None:
    """One kind as a small block."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    edge = inks.accent if active else inks.muted if hovered else inks.hairline
    painter.setPen(QPen(edge, 1.5 if active else 1.0))
    painter.setBrush(blend(inks.accent, inks.raised, 0.14) if active else inks.raised)
    painter.drawPath(outline(domain, sharp(box.x(), box.y(), box.width(), box.height())))
    painter.setPen(inks.ink)
    painter.setFont(font(12))
    room = box.adjusted(PAD_PX, 0.0, -PAD_PX, 0.0)
    text = fitted(title, room.width(), 12)
    painter.drawText(room, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, text)


class Entries(QStyledItemDelegate):
    """Paints the lines of the shelf's list."""

    def __init__(self, inks: Inks, parent: QWidget) -> None:
        super().__init__(parent)
        self.inks = inks
        self.row_px = POINTER_ROW_PX

    def sizeHint(self, option: QStyleOptionViewItem, index: Index) -> QSize:
        """A family's line, or a block and the gap under it."""
        is_kind = index.data(KIND_ROLE) is not None
        return QSize(100, self.row_px + GAP_PX if is_kind else FAMILY_PX)

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """One line."""
        rect = QRectF(option.rect)
        state: QStyle.StateFlag = option.state
        title = str(index.data(Qt.ItemDataRole.DisplayRole))
        if index.data(KIND_ROLE) is None:
            painter.setPen(self.inks.muted)
            painter.setFont(font(11, strong=True))
            bottom_left = Qt.AlignmentFlag.AlignBottom | Qt.AlignmentFlag.AlignLeft
            painter.drawText(rect.adjusted(2.0, 0.0, 0.0, -5.0), bottom_left, title)
            return
        focused = bool(state & QStyle.StateFlag.State_HasFocus)
        paint_entry(
            painter, rect.adjusted(1.0, 0.0, -1.0, -float(GAP_PX)), title, Domain(index.data(DOMAIN_ROLE)), self.inks,
            active=focused, hovered=bool(state & QStyle.StateFlag.State_MouseOver),
        )  # fmt: skip
