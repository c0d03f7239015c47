"""The path over its level diagram, on the same columns, with one scroll bar and one zoom for both."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QScrollBar, QSplitter, QVBoxLayout, QWidget

from .columns import Columns
from .diagram.widget import DiagramView
from .document import Document
from .inks import Inks
from .path_view import PathView

ZOOM_STEP = 1.15


class Centre(QWidget):
    """What the eye is on: blocks above, their levels straight below."""

    def __init__(
        self, document: Document, columns: Columns, inks: Inks, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._document, self.columns = document, columns
        self.path = PathView(document, columns, inks)
        self.diagram = DiagramView(document, columns, inks)
        self.splitter = QSplitter(Qt.Orientation.Vertical)
        self.splitter.setHandleWidth(1)
        self.splitter.setChildrenCollapsible(False)
        self.splitter.addWidget(self.path)
        self.splitter.addWidget(self.diagram)
        self.splitter.setStretchFactor(0, 0)
        self.splitter.setStretchFactor(1, 1)
        self.bar = QScrollBar(Qt.Orientation.Horizontal)
        self.bar.setAccessibleName("Columns of path and diagram")
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.splitter, 1)
        column.addWidget(self.bar)
        self.bar.valueChanged.connect(columns.scroll_to)
        columns.changed.connect(self._columns_changed)
        document.changed.connect(self._measure)
        self.path.installEventFilter(self)
        self._measure()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """The columns are as wide as the path view."""
        if watched is self.path and event.type() == QEvent.Type.Resize:
            self._measure()
        return False

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._measure()

    def fit(self) -> None:
        """Show the whole path."""
        self._measure()
        self.columns.fit()

    def zoom(self, factor: float) -> None:
        """Zoom about the current stage."""
        self.path.zoom(factor)

    def set_inks(self, inks: Inks) -> None:
        """Show in other colours."""
        self.path.set_inks(inks)
        self.diagram.set_inks(inks)

    def _measure(self, _changes: object = None) -> None:
        stages = self._document.project.stages
        self.columns.set_extent(
            max((stage.column for stage in stages), default=-1) + 1, float(self.path.width())
        )
        self._columns_changed()

    def _columns_changed(self) -> None:
        self.bar.setRange(0, round(self.columns.most_scroll_px))
        self.bar.setPageStep(max(1, self.path.width()))
        self.bar.setSingleStep(max(1, round(self.columns.pitch_px / 4)))
        self.bar.setValue(round(self.columns.scroll_px))
        self.bar.setVisible(self.bar.maximum() > 0)
