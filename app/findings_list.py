"""What the tool has noticed: a severity bar and word, the number and where, and what to do. Choosing one selects its stage."""

from __future__ import annotations

from PySide6.QtCore import QAbstractListModel, QEvent, QModelIndex, QPersistentModelIndex, QRectF, QSize, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPen, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QLabel,
    QListView,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.inks import Inks, blend, font
from engine.findings import Finding
from engine.outcome import Outcome

Index = QModelIndex | QPersistentModelIndex
BAR_PX, INDENT_PX, PAD_PX = 3.0, 12.0, 6.0
NOTHING = "Nothing to mend."


class FindingsModel(QAbstractListModel):
    """The findings of the present outcome, one row each."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.findings: tuple[Finding, ...] = ()

    def show(self, findings: tuple[Finding, ...]) -> bool:
        """Put other findings in place; says whether they differ."""
        if findings == self.findings:
            return False
        if len(findings) == len(self.findings):
            self.findings = findings
            self.dataChanged.emit(self.index(0), self.index(len(findings) - 1))
        else:
            self.beginResetModel()
            self.findings = findings
            self.endResetModel()
        return True

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self.findings)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> str | None:
        finding = self.findings[index.row()]
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole):
            return f"{finding.severity}: {finding.message} {finding.mend}".strip()
        return None


class FindingDelegate(QStyledItemDelegate):
    """Paints a finding in as many lines as it takes."""

    def __init__(self, view: QListView, model: FindingsModel, inks: Inks) -> None:
        super().__init__(view)
        self.view, self.model, self.inks = view, model, inks

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        finding = self.model.findings[index.row()]
        box = QRectF(option.rect)
        state = option.state
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if state & QStyle.StateFlag.State_Selected or state & QStyle.StateFlag.State_MouseOver:
            painter.fillRect(box, blend(self.inks.accent, self.inks.paper, 0.12))
        if state & QStyle.StateFlag.State_HasFocus:
            painter.setPen(QPen(self.inks.accent, 1.0))
            painter.drawRect(box.adjusted(0.5, 0.5, -0.5, -0.5))
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(self.inks.severity(finding.severity))
        painter.drawRoundedRect(
            QRectF(box.left(), box.top() + PAD_PX, BAR_PX, box.height() - 2 * PAD_PX), 1.5, 1.5
        )
        text = box.adjusted(INDENT_PX, PAD_PX, -4.0, -PAD_PX)
        for words, strong, ink in _lines(finding, self.inks):
            painter.setFont(font(11, strong=strong))
            painter.setPen(ink)
            needed = painter.boundingRect(text, int(Qt.TextFlag.TextWordWrap), words)
            painter.drawText(text, int(Qt.TextFlag.TextWordWrap), words)
            text.setTop(needed.bottom() + 1.0)
        painter.restore()

    def sizeHint(self, option: QStyleOptionViewItem, index: Index) -> QSize:
        width = self.view.viewport().width()
        room = QRectF(0.0, 0.0, width - INDENT_PX - 4.0, 1e4)
        height = 2.0 * PAD_PX
        for words, strong, _ in _lines(self.model.findings[index.row()], self.inks):
            metrics = QFontMetricsF(font(11, strong=strong))
            height += metrics.boundingRect(room, int(Qt.TextFlag.TextWordWrap), words).height() + 1.0
        return QSize(width, round(height))


def _lines(finding: Finding, inks: Inks) -> list[tuple[str, bool, object]]:
    found: list[tuple[str, bool, object]] = [(finding.severity, True, inks.severity(finding.severity))]
    found.append((finding.message, False, inks.ink))
    if finding.mend and finding.severity != "note":
        found.append((finding.mend, False, inks.muted))
    return found


class FindingsList(QWidget):
    """The findings of the document's outcome."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.title = QLabel("Findings")
        self.title.setProperty("strong", True)
        self.view = QListView()
        self.view.setAccessibleName("Findings")
        self.model = FindingsModel(self)
        self.view.setModel(self.model)
        self.delegate = FindingDelegate(self.view, self.model, inks)
        self.view.setItemDelegate(self.delegate)
        self.view.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.view.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.view.setResizeMode(QListView.ResizeMode.Adjust)
        self.view.setMouseTracking(True)
        self.nothing = QLabel(NOTHING)
        self.nothing.setProperty("quiet", True)
        column = QVBoxLayout(self)
        column.setContentsMargins(20, 10, 8, 8)
        column.setSpacing(6)
        column.addWidget(self.title)
        column.addWidget(self.nothing)
        column.addWidget(self.view, 1)
        self.view.clicked.connect(self._choose)
        self.view.activated.connect(self._choose)
        document.solved.connect(self.refresh)
        self.refresh(document.outcome)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.delegate.inks = inks
        self.view.viewport().update()

    def refresh(self, outcome: Outcome) -> None:
        """Show the findings of a solved project; while a hand moves, they wait for it to let go."""
        if self.document.gesture_open:
            return
        if not self.model.show(outcome.findings):
            return
        counts = {
            word: sum(f.severity == word for f in outcome.findings) for word in ("stop", "mend", "note")
        }
        said = ", ".join(f"{number} {word}" for word, number in counts.items() if number)
        self.title.setText(f"Findings  {said}" if said else "Findings")
        self.nothing.setVisible(not outcome.findings)
        self.view.setVisible(bool(outcome.findings))
        self.view.doItemsLayout()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.view.doItemsLayout()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self.view.doItemsLayout()

    def _choose(self, index: Index) -> None:
        stage = self.model.findings[index.row()].stage
        if stage is not None:
            self.document.select([stage])
