"""What the tool has noticed: severity by bar and word, what is so, what to do. A click or Enter goes to the stage."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QAbstractListModel, QModelIndex, QPersistentModelIndex, Qt, QTimer, Signal
from PySide6.QtGui import QKeyEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import QAbstractItemView, QHBoxLayout, QLabel, QListView, QVBoxLayout, QWidget

from engine.findings import Finding

from .document import Document
from .finding_delegate import FINDING, FindingDelegate
from .inks import Inks, font
from .style import PADDING_PX

REST_MS = 150  # a hand that keeps still as long is looked at
EMPTY = "Nothing to mend."
Index = QModelIndex | QPersistentModelIndex


class FindingsList(QWidget):
    """Follows a document's findings, the gravest first."""

    def __init__(self, document: Document, inks: Inks, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.model = FindingsModel(self)
        self.view = FindingsView(inks)
        self.view.setModel(self.model)
        self.title, self.count = QLabel("Findings"), QLabel()
        self.title.setFont(font(12, strong=True))
        self.count.setFont(font(11))
        self.count.setProperty("quiet", True)
        head = QHBoxLayout()
        head.setContentsMargins(PADDING_PX, 8, PADDING_PX, 4)
        head.addWidget(self.title)
        head.addStretch(1)
        head.addWidget(self.count)
        body = QVBoxLayout(self)
        body.setContentsMargins(0, 0, 0, 0)
        body.setSpacing(0)
        body.addLayout(head)
        body.addWidget(self.view, 1)
        self.setMinimumHeight(80)
        self.setFocusProxy(self.view)
        self._rest = QTimer(self, singleShot=True, interval=REST_MS)
        self._rest.timeout.connect(self._show)
        self.view.clicked.connect(self._go)
        self.view.wanted.connect(self._go)
        document.solved.connect(self._solved)
        self._show()

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.view.set_inks(inks)

    def _solved(self, _outcome: object) -> None:
        """While a hand moves they wait until it rests: reading them costs more than a frame has to spare."""
        if self._document.gesture_open:
            self._rest.start()
        else:
            self._show()

    def _show(self) -> None:
        self._rest.stop()
        found = self._document.outcome.findings
        self.view.keep_current(lambda: self.model.show_findings(found))
        counts = ((sum(each.severity == word for each in found), word) for word in ("stop", "mend", "note"))
        self.count.setText(" · ".join(f"{count} {word}" for count, word in counts if count))

    def _go(self, index: QModelIndex) -> None:
        finding = index.data(FINDING)
        if isinstance(finding, Finding) and finding.stage is not None:
            self._document.select([finding.stage])


class FindingsModel(QAbstractListModel):
    """The findings as rows."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.findings: tuple[Finding, ...] = ()

    def show_findings(self, findings: tuple[Finding, ...]) -> None:
        """Take other findings; where only their numbers changed the rows stay."""
        if findings == self.findings:
            return
        if list(map(_identity, findings)) == list(map(_identity, self.findings)):
            self.findings = findings
            self.dataChanged.emit(self.index(0), self.index(len(findings) - 1))
        else:
            self.beginResetModel()
            self.findings = findings
            self.endResetModel()

    def rowCount(self, parent: Index | None = None) -> int:
        return 0 if parent is not None and parent.isValid() else len(self.findings)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        finding = self.findings[index.row()]
        if role == FINDING:
            return finding
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole):
            return f"{finding.severity}: {finding.message} {finding.mend}".strip()
        return None


class FindingsView(QListView):
    """Rows as high as their text. Enter goes to the current finding's stage."""

    wanted = Signal(QModelIndex)

    def __init__(self, inks: Inks) -> None:
        super().__init__()
        self._inks = inks
        self.setAccessibleName("Findings")
        self.setItemDelegate(FindingDelegate(inks, self))
        self.setResizeMode(QListView.ResizeMode.Adjust)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setMouseTracking(True)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self._inks = inks
        self.setItemDelegate(FindingDelegate(inks, self))

    def keep_current(self, change: Callable[[], None]) -> None:
        """Change the rows; the current one stays current, and in place, where it is still there."""
        before, scrolled = self.currentIndex().data(FINDING), self.verticalScrollBar().value()
        change()
        model = self.model()
        if isinstance(before, Finding) and isinstance(model, FindingsModel):
            places = [
                place for place, each in enumerate(model.findings) if _identity(each) == _identity(before)
            ]
            if places and self.currentIndex().row() != places[0]:
                self.setCurrentIndex(model.index(places[0]))
        self.verticalScrollBar().setValue(scrolled)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if (
            event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space)
            and self.currentIndex().isValid()
        ):
            self.wanted.emit(self.currentIndex())
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        if self.model() is None or self.model().rowCount():
            return
        painter = QPainter(self.viewport())
        painter.setFont(font(12))
        painter.setPen(self._inks.muted)
        painter.drawText(self.viewport().rect().adjusted(PADDING_PX, 6, -PADDING_PX, 0), 0, EMPTY)
        painter.end()


def _identity(finding: Finding) -> tuple[str, str | None]:
    return finding.code, finding.stage
